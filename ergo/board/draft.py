"""A study while it is being changed: its plain data, the last sound study, and what is wrong now."""

import copy
import re
from dataclasses import dataclass
from pathlib import Path
from typing import Any

from ergo.errors import Problem, StudyError
from ergo.study.model import Study, schema
from ergo.study.reader import build

_STEP = re.compile(r"([^.\[\]]+)|\[(\d+)\]")
_PLAIN_NAME = re.compile(r"[\w][\w .+()-]{0,99}")
_KINDED = {"linkage": "kind", "load": "kind", "zones": "shape"}
LONGEST_TEXT = 2_000


@dataclass(frozen=True)
class Draft:
    """What stands in the fields: sound when there are no problems; `good` is the last sound study."""

    data: dict[str, Any]
    good: Study | None
    problems: tuple[Problem, ...]

    @property
    def sound(self) -> bool:
        """Whether the fields make a study."""
        return not self.problems


def draft_of(data: dict[str, Any], folder: Path, name: str, last_good: Study | None = None) -> Draft:
    """Return a draft of plain study data; the reader alone decides whether it is sound."""
    outside = file_problems(data, folder)
    if outside:
        return Draft(data, last_good, tuple(outside))
    try:
        study = build(data, folder, name)
    except StudyError as error:
        return Draft(data, last_good, tuple(_bare(p, name) for p in error.problems))
    return Draft(study.content(), study, ())


def set_at(data: dict[str, Any], path: str, value: Any) -> dict[str, Any]:
    """Return study data with another value at a path such as `lever.pivot_mm[0]` or `zones[1].name`.

    None takes an optional key out. Another kind of linkage, load or zone keeps only the keys which that kind has.
    Raises KeyError for a path that does not lead anywhere.
    """
    made = copy.deepcopy(data)
    *parents, last = steps(path)
    place: Any = made
    for n, step in enumerate(parents):
        if isinstance(place, dict) and step not in place:
            place[step] = [] if n + 1 < len(parents) and isinstance(parents[n + 1], int) else {}
        try:
            place = place[step]
        except (IndexError, TypeError) as error:
            raise KeyError(path) from error
    if isinstance(last, int):
        if not isinstance(place, list) or last >= len(place):
            raise KeyError(path)
        place[last] = "" if value is None else value
    elif not isinstance(place, dict):
        raise KeyError(path)
    elif value is None:
        place.pop(last, None)
    else:
        place[last] = value[:LONGEST_TEXT] if isinstance(value, str) else value
        if _KINDED.get(str(steps(path)[0])) == last:
            _keep_keys_of_kind(place, str(steps(path)[0]), str(value))
    return made


def value_at(data: dict[str, Any], path: str) -> Any:
    """Return the value at a path, None where there is none."""
    place: Any = data
    for step in steps(path):
        try:
            place = place[step]
        except (KeyError, IndexError, TypeError):
            return None
    return place


def steps(path: str) -> list[str | int]:
    """Return a path as keys and list positions."""
    return [name or int(number) for name, number in _STEP.findall(path)]


def file_problems(data: dict[str, Any], folder: Path) -> list[Problem]:
    """Return every file name in the data that would lead out of the study's own folder."""
    named = [(f"{s}.file", part.get("file")) for s, part in data.items() if isinstance(part, dict)]
    people = data.get("operators")
    if isinstance(people, dict) and str(people.get("population", "")).lower().endswith(".csv"):
        named.append(("operators.population", people["population"]))
    found = []
    for where, name in named:
        if name is None or not isinstance(name, str):
            continue
        if not _PLAIN_NAME.fullmatch(name) or ".." in name:
            found.append(Problem(where, "must be the plain name of a file brought along with the study", name[:60]))
        elif not (folder / name).is_file() or (folder / name).is_symlink():
            found.append(Problem(where, "there is no such file with this study", name[:60], "a CSV brought along"))
    return found


def problems_by_field(problems: tuple[Problem, ...]) -> dict[str, str]:
    """Return the reader's sentence for each field, by the path of its control without list positions of numbers."""
    told: dict[str, str] = {}
    for problem in problems:
        where = re.sub(r"(\..+)\[\d+\]$", r"\1", problem.where)
        told[where] = f"{told[where]}; {_words(problem)}" if where in told else _words(problem)
    return told


def _words(problem: Problem) -> str:
    return Problem("", problem.what, problem.got, problem.allowed, problem.suggestion).sentence().removeprefix(": ")


def _bare(problem: Problem, name: str) -> Problem:
    where = problem.where.removeprefix(f"{name}: ")
    return Problem(where, problem.what, problem.got, problem.allowed, problem.suggestion)


def _keep_keys_of_kind(part: dict[str, Any], section: str, kind: str) -> None:
    known = {r["name"] for r in schema() if r["section"] == section and r["of_kind"] == kind}
    for name in [n for n in part if n not in known and n != _KINDED[section]]:
        del part[name]
