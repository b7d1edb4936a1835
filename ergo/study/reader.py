"""The reader of study files: the one validator. It collects all problems, then raises one StudyError."""

import re
import tomllib
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from ergo.errors import Problem, StudyError
from ergo.study.checks import cross_checks
from ergo.study.model import Study
from ergo.study.paths import set_values
from ergo.study.problems import structure_problems, value_problems
from ergo.study.rows import attach_rows

LARGEST_FILE = 1_000_000
# So many problems are told at once; more say the same again.
MOST_PROBLEMS = 200


def read(path: str | Path) -> Study:
    """Return the study in a file.

    Raises
    ------
    StudyError
        With every problem of the file: where, what, got, allowed.
    """
    place = Path(path)
    return read_text(_text_of(place), place.parent, place.name)


def read_text(text: str, folder: str | Path = ".", name: str = "study") -> Study:
    """Return the study in a text; CSV files it names are looked for in `folder`.

    Raises
    ------
    StudyError
        With every problem of the text.
    """
    try:
        data = tomllib.loads(text)
    except RecursionError as error:
        raise StudyError([Problem(name, "is not a TOML file that can be read: it is nested too deeply")]) from error
    except ValueError as error:
        raise StudyError([Problem(name, f"is not a TOML file: {error}")]) from error
    return build(data, folder, name)


def build(data: dict[str, Any], folder: str | Path = ".", name: str = "study") -> Study:
    """Return the study in plain data, as `tomllib` gives it.

    Raises
    ------
    StudyError
        With every problem.
    """
    study, problems = _attempt(data, str(folder), name)
    if study is None or problems:
        raise _told(problems, name)
    if problems := _variant_problems(study):
        raise _told(problems, name)
    return study


def _told(problems: list[Problem], name: str) -> StudyError:
    """Return the error that tells all problems, each with the file's name before its place."""
    told = [Problem(f"{name}: {p.where}", p.what, p.got, p.allowed, p.suggestion) for p in problems[:MOST_PROBLEMS]]
    if len(problems) > MOST_PROBLEMS:
        told.append(Problem(name, f"has {len(problems) - MOST_PROBLEMS} more problems"))
    return StudyError(told)


def changed(study: Study, values: dict[str, Any]) -> Study:
    """Return a study with other values at dotted keys.

    Raises
    ------
    StudyError
        With every problem that the changes bring, or a key that does not exist.
    """
    data, problems = set_values(study.content(), values)
    if not problems:
        found, problems = _attempt(data, study.folder, study.name)
        if found is not None and not problems:
            return found.model_copy(update={"variant_name": study.variant_name})
    raise _told(problems, study.name)


def _text_of(place: Path) -> str:
    try:
        if place.is_dir():
            raise StudyError([Problem(str(place), "is a folder, not a study file")])
        with place.open("rb") as opened:
            content = opened.read(LARGEST_FILE + 1)
        if len(content) > LARGEST_FILE:
            size = max(place.stat().st_size, len(content))
            raise StudyError([Problem(str(place), "is too large for a study", f"{size} bytes", f"up to {LARGEST_FILE}")])
        return content.decode("utf-8-sig")
    except FileNotFoundError as error:
        hint = "name a file, or a shipped study: " + ", ".join(_shipped())
        raise StudyError([Problem(str(place), "there is no such file", suggestion=hint)]) from error
    except UnicodeDecodeError as error:
        raise StudyError([Problem(str(place), f"is not UTF-8 text (byte {error.start})")]) from error
    except OSError as error:
        raise StudyError([Problem(str(place)[:200], f"cannot be read: {error.strerror}")]) from error
    except ValueError as error:
        raise StudyError([Problem(repr(str(place))[:200], "is no name of a file")]) from error


def _shipped() -> list[str]:
    from ergo.sources import folder

    return [p.stem for p in sorted((folder("datasets") / "studies").glob("*.toml"))]


def _attempt(data: dict[str, Any], folder: str, name: str) -> tuple[Study | None, list[Problem]]:
    """Return the study, if there is one, and all problems but those of its variants.

    What is wrong between sections is told as far as it does not lean on a section that is itself sick, so that one
    reading tells everything and no problem is only the shadow of another.
    """
    problems = value_problems(data)
    known = {p.where for p in problems}
    study: Study | None = None
    try:
        study = Study.model_validate({**data, "folder": folder, "name": name})
    except ValidationError as error:
        problems += [p for p in structure_problems(error, data) if p.where not in known]
    if study is None or problems:
        return None, problems + _beside(data, folder, name, _sick(problems))
    study, found = attach_rows(study)
    return study, found + cross_checks(study, _sick(found))


def _beside(data: dict[str, Any], folder: str, name: str, sick: set[str]) -> list[Problem]:
    """Return what is wrong in and between the sections that are not sick."""
    sound = {section: value for section, value in data.items() if section not in sick}
    try:
        study, found = attach_rows(Study.model_validate({**sound, "folder": folder, "name": name}))
    except ValidationError:
        return []
    return found + cross_checks(study, sick | _sick(found))


def _sick(problems: list[Problem]) -> set[str]:
    """Return the sections in which there are problems."""
    return {re.split(r"[.\[,]", p.where)[0] for p in problems}


def _variant_problems(study: Study) -> list[Problem]:
    problems, seen = [], set()
    for n, variant in enumerate(study.variants):
        where = f"variants[{n}]"
        if variant.name in seen:
            problems.append(Problem(f"{where}.name", "is used twice", variant.name, "a name of its own"))
        seen.add(variant.name)
        made, found = set_values(study.content(), variant.set)
        if not found:
            found = _attempt(made, study.folder, study.name)[1]
        problems += [Problem(f"{where} {variant.name!r}: {p.where}", p.what, p.got, p.allowed, p.suggestion) for p in found]
    return problems
