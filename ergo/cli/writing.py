"""Files written whole or not at all."""

import json
import os
import sys
import tempfile
from pathlib import Path
from typing import Any

from ergo.errors import DataError


def write_whole(path: str | Path, content: bytes) -> None:
    """Write a file through a neighbour that replaces it, so that a reader never meets half a file.

    Raises
    ------
    DataError
        If the folder cannot be written or is full; nothing is left behind.
    """
    target = Path(path)
    temporary = None
    try:
        handle, temporary = tempfile.mkstemp(dir=target.parent or Path(), prefix=f".{target.name}.")
        with os.fdopen(handle, "wb") as out:
            out.write(content)
            out.flush()
            os.fsync(out.fileno())
        Path(temporary).chmod(0o644)
        Path(temporary).replace(target)
    except OSError as error:
        if temporary is not None:
            Path(temporary).unlink(missing_ok=True)
        msg = f"{target}: cannot be written: {error.strerror or error}"
        raise DataError(msg) from error


def json_text(content: dict[str, Any]) -> str:
    """Return JSON with sorted keys, the same bytes for the same content."""
    return json.dumps(content, sort_keys=True, indent=1, allow_nan=False, ensure_ascii=False) + "\n"


def write_json(where: str, content: dict[str, Any]) -> None:
    """Write JSON to a file, or alone to standard output for `-`."""
    text = json_text(content)
    if where == "-":
        sys.stdout.write(text)
    else:
        write_whole(where, text.encode("utf-8"))
