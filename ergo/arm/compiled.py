"""Where compiled kernels are kept: a folder named by the content of all kernel files.

Numba's own cache key is one file's content, so a kernel that calls another file's would stay as it was when that
other file changes. A folder for each content makes that impossible, and works where the installation is read-only.
Import this before numba.
"""

import hashlib
import os
import tempfile
from pathlib import Path

_KERNEL_FILES = (
    "kernels.py", "posture_limits.py", "linear_steps.py", "posture_search.py", "stance_search.py", "crowd_search.py",
    "outlines.py",
)  # fmt: skip


def cache_folder() -> Path:
    """Return the folder for this content: the user's cache, or a temporary folder where that cannot be written."""
    here = Path(__file__).resolve().parent
    content = hashlib.sha256(b"".join((here / name).read_bytes() for name in _KERNEL_FILES)).hexdigest()[:16]
    base = os.environ.get("XDG_CACHE_HOME") or str(Path.home() / ".cache")
    place = Path(base) / "pullward" / content
    try:
        place.mkdir(parents=True, exist_ok=True)
        if os.access(place, os.W_OK):
            return place
    except OSError:
        pass
    return Path(tempfile.gettempdir()) / f"pullward-{content}"


if "NUMBA_CACHE_DIR" not in os.environ:
    os.environ["NUMBA_CACHE_DIR"] = str(cache_folder())
