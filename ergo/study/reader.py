"""The reader of study files: the one validator. It collects all problems, then raises one StudyError."""

import copy
import tomllib
from pathlib import Path
from typing import Any

from pydantic import ValidationError

from ergo.errors import Problem, StudyError
from ergo.study.checks import cross_checks
from ergo.study.model import Study
from ergo.study.problems import range_problems, structure_problems
from ergo.study.rows import attach_rows

LARGEST_FILE = 1_000_000


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
    except tomllib.TOMLDecodeError as error:
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
    if study is not None and not problems:
        problems = _variant_problems(data, study, str(folder), name)
    if study is None or problems:
        raise StudyError([_located(p, name) for p in problems])
    return study


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
    raise StudyError([_located(p, study.name) for p in problems])


def set_values(data: dict[str, Any], values: dict[str, Any]) -> tuple[dict[str, Any], list[Problem]]:
    """Return a deep copy of study data with other values at dotted keys, and the keys that cannot be set."""
    made, problems = copy.deepcopy(data), []
    for path, value in values.items():
        *parents, last = path.split(".")
        place: Any = made
        for parent in parents:
            place = place.setdefault(parent, {}) if isinstance(place, dict) else None
        if not parents or not isinstance(place, dict):
            problems.append(Problem(path, "is no key of a study", "", "section.key, such as lever.length_mm"))
        else:
            place[last] = list(value) if isinstance(value, tuple) else value
    return made, problems


def _text_of(place: Path) -> str:
    try:
        size = place.stat().st_size
        if place.is_dir():
            raise StudyError([Problem(str(place), "is a folder, not a study file")])
        if size > LARGEST_FILE:
            raise StudyError([Problem(str(place), "is too large for a study", f"{size} bytes", f"up to {LARGEST_FILE}")])
        return place.read_text(encoding="utf-8")
    except FileNotFoundError as error:
        hint = "name a file, or a shipped study: " + ", ".join(_shipped())
        raise StudyError([Problem(str(place), "there is no such file", suggestion=hint)]) from error
    except UnicodeDecodeError as error:
        raise StudyError([Problem(str(place), f"is not UTF-8 text (byte {error.start})")]) from error
    except OSError as error:
        raise StudyError([Problem(str(place), f"cannot be read: {error.strerror}")]) from error


def _shipped() -> list[str]:
    from ergo.sources import folder

    return [p.stem for p in sorted((folder("datasets") / "studies").glob("*.toml"))]


def _attempt(data: dict[str, Any], folder: str, name: str) -> tuple[Study | None, list[Problem]]:
    """Return the study, if there is one, and all problems but those of its variants."""
    problems = range_problems(data)
    bad_ranges = {p.where for p in problems}
    try:
        study = Study.model_validate({**data, "folder": folder, "name": name})
    except ValidationError as error:
        found = structure_problems(error, data)
        problems += [p for p in found if p.where not in bad_ranges]
        return None, problems + _beyond_structure(data, folder, name, problems)
    study, row_problems = attach_rows(study)
    problems += row_problems
    sick = {p.where.split(".")[0] for p in problems}
    return study, problems + [p for p in cross_checks(study) if p.where.split(".")[0] not in sick]


def _beyond_structure(data: dict[str, Any], folder: str, name: str, problems: list[Problem]) -> list[Problem]:
    """Return what else is wrong in sections whose keys are all sound, so that one reading tells everything."""
    sick = {p.where.split(".")[0].split("[")[0] for p in problems}
    sound = {section: value for section, value in data.items() if section not in sick}
    try:
        study, found = attach_rows(Study.model_validate({**sound, "folder": folder, "name": name}))
    except ValidationError:
        return []
    found += cross_checks(study, partial=True)
    return [p for p in found if p.where.split(".")[0].split("[")[0] not in sick]


def _variant_problems(data: dict[str, Any], study: Study, folder: str, name: str) -> list[Problem]:
    problems, seen = [], set()
    for n, variant in enumerate(study.variants):
        where = f"variants[{n}]"
        if variant.name in seen:
            problems.append(Problem(f"{where}.name", "is used twice", variant.name, "a name of its own"))
        seen.add(variant.name)
        made, found = set_values(data, variant.set)
        if not found:
            found = _attempt(made, folder, name)[1]
        problems += [Problem(f"{where} {variant.name!r}: {p.where}", p.what, p.got, p.allowed, p.suggestion) for p in found]
    return problems


def _located(problem: Problem, name: str) -> Problem:
    if problem.where.startswith(f"{name}: "):
        return problem
    return Problem(f"{name}: {problem.where}", problem.what, problem.got, problem.allowed, problem.suggestion)
