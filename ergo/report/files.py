"""Folders written whole or not at all."""

import os
import shutil
import tempfile
from collections.abc import Mapping
from pathlib import Path

from ergo.errors import DataError


def write_folder(path: str | Path, files: Mapping[str, bytes], mark: str) -> None:
    """Write a folder through a neighbour that takes its place once every file is in it.

    An existing folder is replaced only if it is empty or holds the file `mark`, so that nothing else is lost.

    Raises
    ------
    DataError
        If the folder cannot be written, is full, or holds something else; nothing is left behind.
    """
    target = Path(path)
    if target.exists() and not _replaceable(target, mark):
        msg = f"{target}: is there already and was not written by this command; name another folder"
        raise DataError(msg)
    temporary: Path | None = None
    try:
        target.parent.mkdir(parents=True, exist_ok=True)
        temporary = Path(tempfile.mkdtemp(dir=target.parent, prefix=f".{target.name}."))
        for name, content in files.items():
            place = temporary / name
            place.parent.mkdir(parents=True, exist_ok=True)
            place.write_bytes(content)
        temporary.chmod(0o755)
        _take_place(temporary, target)
    except OSError as error:
        if temporary is not None:
            shutil.rmtree(temporary, ignore_errors=True)
        msg = f"{target}: cannot be written: {error.strerror or error}"
        raise DataError(msg) from error


def _replaceable(target: Path, mark: str) -> bool:
    if not target.is_dir():
        return False
    names = os.listdir(target)
    return not names or mark in names


def _take_place(temporary: Path, target: Path) -> None:
    """Swap the new folder in; the old one goes only when the new one stands."""
    if not target.exists():
        temporary.replace(target)
        return
    old = Path(tempfile.mkdtemp(dir=target.parent, prefix=f".{target.name}.old."))
    target.replace(old / target.name)
    try:
        temporary.replace(target)
    except OSError:
        (old / target.name).replace(target)
        old.rmdir()
        raise
    shutil.rmtree(old, ignore_errors=True)
