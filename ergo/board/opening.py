"""Studies that can be opened and saved: shipped ones, those of the folder given, files brought along."""

import base64
import binascii
import itertools
import re
import shutil
import tomllib
from pathlib import Path
from typing import Any

from ergo.board.store import LARGEST_FILE, MOST_FILES, Work
from ergo.errors import DataError, Problem, StudyError
from ergo.sources import folder
from ergo.study.template import template

NEW = ":new"
_FILE_NAME = re.compile(r"[\w][\w .+()-]{0,79}")


def shipped() -> dict[str, tuple[str, str]]:
    """Return the shipped studies and a new one, by name: title, and what it is in a sentence."""
    places = sorted((folder("datasets") / "studies").glob("*.toml"))
    found = {path.stem: (_title(path), first_sentence(path)) for path in places}
    return {**found, NEW: ("A new study", "A plain lever with every key at its default.")}


def first_sentence(path: Path) -> str:
    """Return the first sentence of the comment that a study file begins with, its file name where there is none."""
    lines = path.read_text(encoding="utf-8", errors="replace").splitlines()
    head = itertools.takewhile(lambda line: line.startswith("#"), lines)
    text = " ".join(line.lstrip("# ") for line in head)
    return text.partition(". ")[0].rstrip(".")[:200] + "." if text else path.name


def in_folder(place: Path | None) -> dict[str, tuple[str, str]] | None:
    """Return the studies of the folder given, None without one; links that lead out of it are not there."""
    if place is None:
        return None
    inside = [p for p in sorted(place.glob("*.toml")) if p.resolve().parent == place.resolve() and p.is_file()]
    return {path.name: (_title(path), path.name) for path in inside[:200]}


def open_shipped(work: Work, name: str, tab: str) -> None:
    """Open a shipped study, or a new one from the template; StudyError for a name that is not shipped."""
    if name == NEW:
        work.open(tomllib.loads(template()), "study.toml", tab)
        return
    if name not in shipped():
        raise StudyError([Problem(name[:60], "is no shipped study", "", ", ".join(shipped()))])
    open_file(work, folder("datasets") / "studies" / f"{name}.toml", tab)


def open_in_folder(work: Work, place: Path | None, name: str, tab: str) -> None:
    """Open a study of the folder given; StudyError for a name that is not in it."""
    if place is None or name not in (in_folder(place) or {}):
        raise StudyError([Problem(name[:60], "is no study of the folder")])
    open_file(work, place / name, tab)


def open_file(work: Work, path: Path, tab: str) -> None:
    """Open a study file with the CSV files it names from its own folder."""
    data = parsed(path.read_bytes(), path.name)
    bring_files(work, data, path.parent)
    work.open(data, path.name, tab)


def parsed(content: bytes, name: str) -> dict[str, Any]:
    """Return a study file's content as plain data; StudyError for what is no TOML."""
    if len(content) > LARGEST_FILE:
        raise StudyError([Problem(name, "is too large for a study", f"{len(content)} bytes", f"up to {LARGEST_FILE}")])
    try:
        return tomllib.loads(content.decode("utf-8-sig"))
    except UnicodeDecodeError as error:
        raise StudyError([Problem(name, f"is not UTF-8 text (byte {error.start})")]) from error
    except (tomllib.TOMLDecodeError, RecursionError) as error:
        raise StudyError([Problem(name, f"is not a TOML file: {error}")]) from error


def bring(work: Work, files: dict[str, str], tab: str) -> None:
    """Open what a browser sent: at most one study, and the CSV files it names.

    Raises
    ------
    StudyError
        With every file that cannot be taken; then nothing is opened.
    """
    problems, contents = [], {}
    for name, sent in files.items():
        shown = name[:60]
        if not _FILE_NAME.fullmatch(name) or ".." in name:
            problems.append(Problem(shown, "must have a plain file name", "", "letters, digits, dots, dashes"))
        elif Path(name).suffix.lower() not in (".toml", ".csv"):
            problems.append(Problem(shown, "is neither a study nor a table", "", ".toml, .csv"))
        else:
            try:
                contents[name] = base64.b64decode(sent.partition(",")[2], validate=True)
            except (binascii.Error, ValueError):
                problems.append(Problem(shown, "did not arrive whole"))
                continue
            if len(contents[name]) > LARGEST_FILE:
                problems.append(Problem(shown, "is too large", f"{len(contents[name])} bytes", f"up to {LARGEST_FILE}"))
    studies = [name for name in contents if name.lower().endswith(".toml")]
    if len(studies) > 1 or len(files) > MOST_FILES:
        problems.append(Problem("files", "are too many", str(len(files)), f"one study and up to {MOST_FILES - 1} tables"))
    data = None
    if studies and not problems:
        data = parsed(contents[studies[0]], studies[0])
    if problems:
        raise StudyError(problems)
    _keep_tables(work, {n: c for n, c in contents.items() if n not in studies})
    if data is not None:
        work.open(data, studies[0], tab)
    elif not work.empty:
        work.open(work.steps[work.at].data, work.name, tab, "brought tables")


def bring_files(work: Work, data: dict[str, Any], place: Path) -> None:
    """Copy the CSV files that a study names beside the work, where the reader will look for them."""
    for name in named_files(data):
        source = place / name
        if Path(name).name == name and source.is_file() and source.resolve().parent == place.resolve():
            work.files.mkdir(parents=True, exist_ok=True, mode=0o700)
            shutil.copyfile(source, work.files / name)


def named_files(data: dict[str, Any]) -> list[str]:
    """Return the file names that a study's data names."""
    named = [part.get("file") for part in data.values() if isinstance(part, dict)]
    people = data.get("operators")
    if isinstance(people, dict) and str(people.get("population", "")).lower().endswith(".csv"):
        named.append(people["population"])
    return [name for name in named if isinstance(name, str)]


def save_into(place: Path, name: str, text: str) -> Path:
    """Write a study into the folder given, whole or not at all, and return its path.

    Raises
    ------
    StudyError
        For a name that is not a plain one.
    DataError
        If the folder cannot be written.
    """
    if not _FILE_NAME.fullmatch(name) or ".." in name:
        raise StudyError([Problem(name[:60], "must be a plain file name", "", "such as press.toml")])
    target = place / (name if name.lower().endswith(".toml") else f"{name}.toml")
    if target.is_symlink():
        raise StudyError([Problem(name, "is a link; the board does not follow it")])
    beside = place / f".{target.name}.part"
    try:
        beside.write_text(text, encoding="utf-8")
        beside.replace(target)
    except OSError as error:
        beside.unlink(missing_ok=True)
        msg = f"{target.name}: cannot be written: {error.strerror or error}"
        raise DataError(msg) from error
    return target


def _keep_tables(work: Work, tables: dict[str, bytes]) -> None:
    work.files.mkdir(parents=True, exist_ok=True, mode=0o700)
    there = {p.name for p in work.files.iterdir()}
    if len(there | set(tables)) > MOST_FILES:
        raise StudyError([Problem("files", "are too many for one study", str(len(there | set(tables))), str(MOST_FILES))])
    for name, content in tables.items():
        (work.files / name).write_bytes(content)


def _title(path: Path) -> str:
    try:
        head = tomllib.loads(path.read_text(encoding="utf-8")).get("study", {})
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError):
        return "cannot be read"
    return str(head.get("title", path.stem))[:80] if isinstance(head, dict) else path.stem
