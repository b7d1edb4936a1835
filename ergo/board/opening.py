"""Studies that can be opened: shipped ones, those of the folder given, and files brought along."""

import shutil
import tomllib
from pathlib import Path
from typing import Any

from ergo.board.store import Work
from ergo.errors import Problem, StudyError
from ergo.sources import folder

NEW = ":new"


def shipped() -> dict[str, str]:
    """Return the shipped studies: file stem and title."""
    found = {}
    for path in sorted((folder("datasets") / "studies").glob("*.toml")):
        data = tomllib.loads(path.read_text(encoding="utf-8"))
        found[path.stem] = str(data.get("study", {}).get("title", path.stem))
    return found


def open_shipped(work: Work, name: str, tab: str) -> None:
    """Open a shipped study, or the template of a new one; StudyError for a name that is not shipped."""
    if name not in shipped():
        raise StudyError([Problem(name[:60], "is no shipped study", "", ", ".join(shipped()))])
    open_file(work, folder("datasets") / "studies" / f"{name}.toml", tab)


def open_file(work: Work, path: Path, tab: str) -> None:
    """Open a study file with the CSV files it names from its own folder."""
    data = tomllib.loads(path.read_text(encoding="utf-8"))
    bring_files(work, data, path.parent)
    work.open(data, path.name, tab)


def bring_files(work: Work, data: dict[str, Any], place: Path) -> None:
    """Copy the CSV files that a study names beside the work, where the reader will look for them."""
    for part in data.values():
        name = part.get("file") if isinstance(part, dict) else None
        if isinstance(name, str) and Path(name).name == name and (place / name).is_file():
            work.files.mkdir(parents=True, exist_ok=True, mode=0o700)
            shutil.copyfile(place / name, work.files / name)
