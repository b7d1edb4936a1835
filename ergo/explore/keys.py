"""Keys of a study by dotted path, down to one number of a point: `lever.length_mm`, `lever.pivot_mm[2]`."""

import re
from collections.abc import Mapping
from typing import Any

from ergo.errors import Problem, StudyError
from ergo.study.model import Study, schema
from ergo.study.reader import build

_STEP = re.compile(r"([A-Za-z_][A-Za-z0-9_-]*)((?:\[\d+\])*)")
LEFT_OUT = ("variants", "targets.free")


def steps(path: str) -> list[str | int]:
    """Return a path as names and indices.

    Raises
    ------
    StudyError
        If it is no path at all.
    """
    found: list[str | int] = []
    for part in path.split("."):
        match = _STEP.fullmatch(part)
        if match is None:
            raise StudyError([Problem(path, "is no key", part, "section.key, section.key[0] for one number of a point")])
        found.append(match.group(1))
        found += [int(n) for n in re.findall(r"\d+", match.group(2))]
    return found


def value_at(content: Any, path: str) -> Any:
    """Return the value at a path of plain study content, None where there is none."""
    place = content
    for step in steps(path):
        try:
            place = place[step]
        except (KeyError, IndexError, TypeError):
            return None
    return place


def schema_row(study: Study, path: str) -> dict[str, Any]:
    """Return what the schema says of a key: kind (`number` for one number of a point), unit, low, high, choices.

    Raises
    ------
    StudyError
        If the study has no such key, with the nearest one.
    """
    bare = re.sub(r"\[\d+\]", "", path)
    kinds = {"linkage": study.linkage.kind, "load": study.load.kind}
    rows = [r for r in schema() if r["path"] == bare and r["of_kind"] in ("", kinds.get(r["section"], r["of_kind"]))]
    if not rows or path.startswith(LEFT_OUT):
        import difflib

        near = difflib.get_close_matches(bare, sorted({r["path"] for r in schema()}), 1)
        raise StudyError([Problem(path, "is no key of this study", suggestion=f"did you mean {near[0]}?" if near else "")])
    row = dict(rows[0])
    if path.endswith("]") and row["kind"] in ("point", "pair"):
        row["kind"] = "number"
    return row


def placed(study: Study, values: Mapping[str, Any]) -> Study:
    """Return the study with other values at its keys, checked by the one reader; variants are left out.

    Raises
    ------
    StudyError
        With all problems that the values bring.
    """
    data = study.content()
    data.pop("variants", None)
    for path, value in values.items():
        *parents, last = steps(path)
        place: Any = data
        for step in parents:
            place = _inside(place, step, path)
        _set(place, last, value, path)
    return build(data, study.folder, study.name).model_copy(update={"variant_name": study.variant_name})


def _inside(place: Any, step: str | int, path: str) -> Any:
    """Return the part of the content one step down; a section that is not there yet is begun."""
    if isinstance(step, str) and isinstance(place, dict):
        return place.setdefault(step, {})
    if isinstance(step, int) and isinstance(place, list) and step < len(place):
        return place[step]
    raise StudyError([Problem(path, "is no key of this study")])


def _set(place: Any, last: str | int, value: Any, path: str) -> None:
    numbered = isinstance(place, list) and isinstance(last, int) and last < len(place)
    if not numbered and not (isinstance(place, dict) and isinstance(last, str)):
        raise StudyError([Problem(path, "is no key of this study")])
    part: Any = place
    part[last] = value
