"""Dotted paths into the plain data of a study: `lever.length_mm`, `lever.pivot_mm[2]`, `zones[0].radius_mm`."""

import copy
import re
from typing import Any

from ergo.errors import Problem
from ergo.study.model import schema

_STEP = re.compile(r"([A-Za-z_][A-Za-z0-9_-]*)((?:\[\d{1,6}\])*)")
FORM = "section.key, such as lever.length_mm, or one number of a point, such as lever.pivot_mm[2]"
# Sections of which another kind has other keys.
_KINDS = ("linkage.kind", "load.kind")


def steps(path: str) -> list[str | int] | None:
    """Return a path as names and list positions, None where it is no path."""
    found: list[str | int] = []
    for part in path.split("."):
        match = _STEP.fullmatch(part)
        if match is None:
            return None
        found.append(match.group(1))
        found += [int(n) for n in re.findall(r"\d+", match.group(2))]
    return found


def set_values(data: dict[str, Any], values: dict[str, Any]) -> tuple[dict[str, Any], list[Problem]]:
    """Return a deep copy of study data with other values at dotted keys, and the keys that cannot be set.

    Another kind of linkage or load comes first and keeps only the keys that this kind has.
    """
    made, problems = copy.deepcopy(data), []
    for path in sorted(values, key=lambda p: p not in _KINDS):
        value = values[path]
        if not _set(made, steps(path), list(value) if isinstance(value, tuple) else value):
            hint = 'write it in quotes: "section.key" = value' if isinstance(value, dict) else ""
            problems.append(Problem(path, "is no key of a study", "", FORM, hint))
        elif path in _KINDS:
            _keep_keys_of(made[path.split(".")[0]], path.split(".")[0], value)
    return made, problems


def _set(data: dict[str, Any], way: list[str | int] | None, value: Any) -> bool:
    """Set one value in place; return whether the way led somewhere."""
    if way is None or len(way) < 2:
        return False
    place: Any = data
    for step in way[:-1]:
        if isinstance(step, str) and isinstance(place, dict):
            place = place.setdefault(step, {})
        elif isinstance(step, int) and isinstance(place, list) and step < len(place):
            place = place[step]
        else:
            return False
    last = way[-1]
    fits = isinstance(place, dict) if isinstance(last, str) else isinstance(place, list) and last < len(place)
    if fits:
        spot: Any = place
        spot[last] = value
    return fits


def _keep_keys_of(part: dict[str, Any], section: str, kind: Any) -> None:
    known = {r["name"] for r in schema() if r["section"] == section and r["of_kind"] == kind}
    for name in [n for n in part if known and n not in known and n != "kind"]:
        del part[name]
