"""What can be wrong with single keys of a study: unknown, missing, of the wrong kind, outside their range."""

import difflib
import functools
import math
from collections.abc import Iterator
from typing import Any

from pydantic import ValidationError

from ergo.errors import Problem
from ergo.study.model import Study, schema

_KINDED = {"linkage": "kind", "load": "kind", "zones": "shape"}


@functools.cache
def _rows() -> dict[tuple[str, str, str], dict[str, Any]]:
    return {(r["section"], r["of_kind"], r["name"]): r for r in schema()}


def range_problems(data: dict[str, Any]) -> list[Problem]:
    """Return every number that is no number or lies outside its key's range, with a hint at mistaken units."""
    problems = []
    for where, row, value in _cells(data):
        for n, number in enumerate(value if isinstance(value, list) else [value]):
            if isinstance(number, bool) or not isinstance(number, (int, float)):
                continue
            place = f"{where}[{n}]" if isinstance(value, list) else where
            if not math.isfinite(number):
                problems.append(Problem(place, "must be a finite number", str(number), _allowed(row)))
            elif _outside(number, row):
                problems.append(Problem(place, "is outside its range", f"{number:g}", _allowed(row), _units(number, row)))
    return problems


def structure_problems(error: ValidationError, data: dict[str, Any]) -> list[Problem]:
    """Return pydantic's findings as problems in plain words, one a place."""
    found: dict[str, Problem] = {}
    for item in error.errors():
        where = _dotted(item["loc"], data)
        found.setdefault(where, _worded(where, item))
    return list(found.values())


def _worded(where: str, item: Any) -> Problem:
    kind, got = item["type"], _short(item.get("input"))
    if kind == "missing":
        return Problem(where, "is missing", "", _allowed(_row_at(where)))
    if kind == "extra_forbidden":
        return Problem(where, "is not a key of a study", "", "", _near(where))
    if kind in ("union_tag_not_found", "union_tag_invalid"):
        word = item["ctx"].get("discriminator", "'kind'").strip("'")
        wrong = item["ctx"].get("tag")
        known = _kinds(where.split(".")[0].split("[")[0])
        near = difflib.get_close_matches(str(wrong), known, 1) if wrong else []
        hint = f"did you mean {near[0]}?" if near else ""
        what = "is none of the kinds there are" if wrong else "is missing"
        return Problem(f"{where}.{word}", what, str(wrong or ""), ", ".join(known), hint)
    if kind == "literal_error":
        near = difflib.get_close_matches(str(item["input"]), [str(c) for c in _choices(where)], 1)
        allowed = _allowed(_row_at(where)) or item["ctx"]["expected"]
        return Problem(where, "is none of the choices", got, allowed, f"did you mean {near[0]}?" if near else "")
    if kind == "finite_number":
        return Problem(where, "must be a finite number", got, _allowed(_row_at(where)))
    wanted = {"int": "a whole number", "float": "a number", "bool": "true or false", "string": "text",
              "tuple": "a list of numbers", "model": "a section", "dict": "a table"}  # fmt: skip
    word = next((text for start, text in wanted.items() if kind.startswith(start)), "")
    if kind in ("too_short", "too_long"):
        return Problem(where, "has the wrong count of numbers", got, _allowed(_row_at(where)))
    what = f"must be {word}" if word else "cannot be used"
    return Problem(where, what, got, _allowed(_row_at(where)))


def _cells(data: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any], Any]]:
    """Yield every known key of the data with its place and description."""
    for section, content in data.items():
        for n, part in enumerate(content if isinstance(content, list) else [content]):
            if not isinstance(part, dict):
                continue
            kind = str(part.get(_KINDED[section], "")) if section in _KINDED else ""
            place = f"{section}[{n}]" if isinstance(content, list) else section
            for name, value in part.items():
                row = _rows().get((section, kind, name))
                if row is not None:
                    yield f"{place}.{name}", row, value


def _outside(number: float, row: dict[str, Any]) -> bool:
    low, high = row["low"], row["high"]
    return (low is not None and number < low) or (high is not None and number > high)


def _units(number: float, row: dict[str, Any]) -> str:
    """Return a hint where a factor of 1000 (or 180/pi) would bring the number into its range."""
    if row["unit"] == "mm":
        for factor, other in ((1000.0, "m"), (0.001, "um")):
            if number and not _outside(number * factor, row):
                return f"did you mean {number * factor:g} mm? (it looks like {other})"
    if abs(number) > 0.0 and row["high"] in (0, 1) and not _outside(number / 100.0, row):
        return f"did you mean {number / 100.0:g}? (it looks like percent)"
    return ""


def _allowed(row: dict[str, Any] | None) -> str:
    if row is None:
        return ""
    if row["choices"] and row["name"] != "population":
        return ", ".join(str(c) for c in row["choices"])
    low, high, unit = row["low"], row["high"], row["unit"]
    span = "" if low is None and high is None else f"{low:g} to {high:g}"
    count = {"point": "three numbers", "pair": "two numbers"}.get(row["kind"], "")
    return ", ".join(t for t in (count, f"{span} {unit}".strip()) if t)


def _dotted(loc: tuple[int | str, ...], data: Any) -> str:
    """Return pydantic's place as a dotted path of the file, without the names of kinds it slips in."""
    text, place = "", data
    for step in loc:
        if isinstance(step, int):
            text += f"[{step}]"
            place = place[step] if isinstance(place, (list, tuple)) and step < len(place) else None
        elif isinstance(place, dict) and (step in place or step not in _tags()):
            text += f".{step}" if text else step
            place = place.get(step)
        elif not isinstance(place, dict):
            continue  # a branch of a choice, such as "point or name"
    return text


@functools.cache
def _tags() -> frozenset[str]:
    return frozenset(r["of_kind"] for r in schema() if r["of_kind"])


def _kinds(section: str) -> list[str]:
    return list(dict.fromkeys(r["of_kind"] for r in schema() if r["section"] == section))


def _row_at(where: str) -> dict[str, Any] | None:
    section, _, name = where.partition(".")
    bare = section.split("[")[0]
    return next((r for r in schema() if r["section"] == bare and r["name"] == name.split("[")[0]), None)


def _choices(where: str) -> list[Any]:
    row = _row_at(where)
    return row["choices"] if row else []


def _near(where: str) -> str:
    section, _, name = where.rpartition(".")
    bare = section.split("[")[0]
    known = sorted({r["name"] for r in schema() if r["section"] == bare}) if bare else sorted(Study.model_fields)
    known = [k for k in known if k not in ("folder", "variant_name")]
    near = difflib.get_close_matches(name, known, 1, 0.5)
    if near:
        return f"did you mean {near[0]}?"
    elsewhere = [r["path"] for r in schema() if r["name"] == name]
    if elsewhere:
        return f"it belongs to {elsewhere[0]}"
    return f"there are: {', '.join(known)}" if known else ""


def _short(value: Any) -> str:
    text = repr(value)
    return text if len(text) <= 60 else text[:57] + "..."
