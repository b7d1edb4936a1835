"""What a result rests on, so that it can be made again: versions, seed, checksums."""

import importlib.metadata
import platform
from typing import Any

from ergo import __version__
from ergo.datasets import Library, checksum, table_keys
from ergo.sources import folder

_LIBRARIES = ("numpy", "scipy", "numba")


def manifest(study_digest: str, seed: int, library: Library) -> dict[str, Any]:
    """Return versions, seed, the study's digest, checksums of every table, and any changed value."""
    place = folder("datasets")
    return {
        "pullward": __version__,
        "python": platform.python_version(),
        "libraries": {name: importlib.metadata.version(name) for name in _LIBRARIES},
        "seed": seed,
        "study": study_digest,
        "tables": {key: checksum(place / key / "table.csv")[:16] for key in table_keys()},
        "changed_values": {f"{table}.{name}": value for (table, name), value in sorted(library.changes.items())},
    }
