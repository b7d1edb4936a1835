"""What can be wrong with single keys of a study: unknown, missing, of the wrong kind, outside their range."""

import difflib
import functools
import math
import unicodedata
from collections.abc import Iterator
from datetime import date, time
from typing import Any

from pydantic import ValidationError

from ergo.errors import Problem
from ergo.study.model import Study, hidden, schema

_KINDED = {"linkage": "kind", "load": "kind", "zones": "shape"}
_LISTS = ("zones", "touch_points", "variants")
_NUMBERED = ("number", "whole", "point", "pair", "numbers")
LONGEST_LIST = 500
LONGEST_TEXT = 2_000


@functools.cache
def _rows() -> dict[tuple[str, str, str], dict[str, Any]]:
    return {(r["section"], r["of_kind"], r["name"]): r for r in schema()}


def value_problems(data: dict[str, Any]) -> list[Problem]:
    """Return what is wrong with single values: kind, range, choice, text, slips of unit, keys that are not for files."""
    problems = []
    for section, content in data.items():
        if ("", section) in hidden():
            problems.append(Problem(section, "is not a key of a study"))
        if isinstance(content, list) and len(content) > LONGEST_LIST:
            problems.append(Problem(section, "has too many entries", f"{len(content)}", f"up to {LONGEST_LIST}"))
    for where, row, value in _cells(data):
        if row is None:
            problems.append(Problem(where, "is not a key of a study"))
        elif isinstance(value, str):
            problems += _text_problems(where, row, value)
        elif row["kind"] != "table":
            problems += _number_problems(where, row, value)
    return problems


def _cells(data: dict[str, Any]) -> Iterator[tuple[str, dict[str, Any] | None, Any]]:
    """Yield every known key of the data with its place and description; None where a study keeps it for itself."""
    for section, content in data.items():
        for n, part in enumerate(content[:LONGEST_LIST] if isinstance(content, list) else [content]):
            if not isinstance(part, dict):
                continue
            kind = str(part.get(_KINDED[section], "")) if section in _KINDED else ""
            place = f"{section}[{n}]" if isinstance(content, list) else section
            for name, value in part.items():
                row = _rows().get((section, kind, name))
                if row is not None or (section, name) in hidden():
                    yield f"{place}.{name}", row, value


def _text_problems(where: str, row: dict[str, Any], value: str) -> Iterator[Problem]:
    """Yield what is wrong with a text, or with a text in place of a number."""
    if row["kind"] in ("number", "whole"):
        yield Problem(where, f"must be a {'whole ' * (row['kind'] == 'whole')}number", _short(value), _allowed(row))
    if row["kind"] != "text":
        return
    lines = "\n\t" if row["name"] == "notes" else ""
    if any(unicodedata.category(c) == "Cc" and c not in lines for c in value):
        yield Problem(where, "holds a control character or a line end", _short(value))
    elif len(value) > LONGEST_TEXT:
        yield Problem(where, "is too long", f"{len(value)} characters", f"up to {LONGEST_TEXT}")
    elif row["required"] and not value.strip():
        yield Problem(where, "is empty")
    elif row["choices"] and row["name"] != "population" and value not in row["choices"]:
        yield Problem(where, "is none of the choices", _short(value), _allowed(row), _did_you_mean(value, row["choices"]))


def _number_problems(where: str, row: dict[str, Any], value: Any) -> Iterator[Problem]:
    """Yield every number that is no number or lies outside its key's range, with a hint at mistaken units."""
    many = isinstance(value, list)
    sound = []
    for n, item in enumerate(value if many else [value]):
        place = f"{where}[{n}]" if many else where
        wrong = isinstance(item, bool) or (many and isinstance(item, str))
        if wrong and (row["kind"] in _NUMBERED or row["also"]):
            whole = "whole " * (row["kind"] == "whole")
            yield Problem(place, f"must be a {whole}number", _short(item), _allowed(row))
        elif isinstance(item, (int, float)) and not isinstance(item, bool):
            if not math.isfinite(_float(item)):
                yield Problem(place, "must be a finite number", _short(item), _allowed(row))
            elif _outside(item, row):
                yield Problem(place, "is outside its range", f"{item:g}", _allowed(row), _units(item, row))
            else:
                sound.append(item)
    if sound and len(sound) == (len(value) if many else 1) and 0.0 < max(abs(v) for v in sound) < row["least"]:
        yield _too_small(where, row, sound, many=many)


def _too_small(where: str, row: dict[str, Any], sizes: list[float], *, many: bool) -> Problem:
    meant = ", ".join(f"{v * 1e3:g}" for v in sizes)
    hint = f"did you mean {f'[{meant}]' if many else meant} mm? (it looks like m)"
    got = ", ".join(f"{v:g}" for v in sizes)
    return Problem(where, "is too small for a size in mm", got, f"0, or {row['least']:g} mm and over", hint)


def _float(number: float) -> float:
    try:
        return float(number)
    except OverflowError:
        return math.inf


def structure_problems(error: ValidationError, data: dict[str, Any]) -> list[Problem]:
    """Return pydantic's findings as problems in plain words, one a place."""
    found: dict[str, Problem] = {}
    for item in error.errors():
        where = _dotted(item["loc"], data)
        found.setdefault(where, _worded(where, item))
    # Of a choice that may also be a vector, what is wrong with the vector says more than that it is no word.
    parts = {where.rpartition("[")[0] for where in found}
    return [p for where, p in found.items() if where not in parts or p.what != "is none of the choices"]


def _worded(where: str, item: Any) -> Problem:
    kind, got, row = item["type"], _short(item.get("input")), _row_at(where)
    if kind == "missing":
        return Problem(where, "is missing", "", _allowed(row))
    if kind == "extra_forbidden":
        return Problem(where, "is not a key of a study", "", "", _near(where))
    if kind in ("union_tag_not_found", "union_tag_invalid"):
        return _kind_problem(where, item["ctx"])
    if kind == "literal_error":
        allowed = _allowed(row) or item["ctx"]["expected"]
        return Problem(where, "is none of the choices", got, allowed, _did_you_mean(item["input"], _choices(where)))
    if kind == "finite_number":
        return Problem(where, "must be a finite number", got, _allowed(row))
    if kind in ("too_short", "too_long"):
        return Problem(where, "has the wrong count of numbers", got, _allowed(row))
    if where in _LISTS:
        return Problem(where, "must be a list of sections", got, f"[[{where}]], as often as needed")
    wanted = {"int": "a whole number", "float": "a number", "bool": "true or false", "string": "text",
              "tuple": "a list of numbers", "model": "a section", "dict": "a table"}  # fmt: skip
    word = next((text for start, text in wanted.items() if kind.startswith(start)), "")
    hint = f"write [{where}], not [[{where}]]" if word == "a section" and isinstance(item.get("input"), list) else ""
    if where.startswith("targets.free.") and isinstance(item.get("input"), dict):
        hint = 'write the key in quotes: "section.key" = [low, high]'
    return Problem(where, f"must be {word}" if word else "cannot be used", got, _allowed(row), hint)


def _kind_problem(where: str, context: dict[str, Any]) -> Problem:
    word, wrong = context.get("discriminator", "'kind'").strip("'"), context.get("tag")
    known = _kinds(where.split(".")[0].split("[")[0])
    what = "is none of the kinds there are" if wrong else "is missing"
    hint = _did_you_mean(wrong, known) if wrong else ""
    return Problem(f"{where}.{word}", what, str(wrong or "")[:60], ", ".join(known), hint)


def _did_you_mean(word: Any, known: Any) -> str:
    near = difflib.get_close_matches(str(word)[:60], [str(k) for k in known], 1)
    return f"did you mean {near[0]}?" if near else ""


def _outside(number: float, row: dict[str, Any]) -> bool:
    low, high = row["low"], row["high"]
    return (low is not None and number < low) or (high is not None and number > high)


def _units(number: float, row: dict[str, Any]) -> str:
    """Return a hint where a factor of 1000, or percent, would bring the number into its range."""
    if row["unit"] == "mm":
        for factor, other in ((1000.0, "m"), (0.001, "um")):
            if number and not _outside(number * factor, row):
                return f"did you mean {number * factor:g} mm? (it looks like {other})"
    if row["high"] == 1 and number >= 5.0 and not _outside(number / 100.0, row):
        return f"did you mean {number / 100.0:g}? (it looks like percent)"
    return ""


def _allowed(row: dict[str, Any] | None) -> str:
    if row is None:
        return ""
    low, high = row["low"], row["high"]
    span = "" if low is None and high is None else f"{low:g} to {high:g} {row['unit']}".strip()
    if row["choices"] and row["name"] != "population":
        other = f"or {row['also']} {span}".strip() if row["also"] else ""
        return ", ".join(t for t in (*row["choices"], other) if t)
    count = {"point": "three numbers", "pair": "two numbers"}.get(row["kind"], "")
    return ", ".join(t for t in (count, span) if t)


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
    return next((r for key, r in _rows().items() if key[0] == bare and key[2] == name.split("[")[0]), None)


def _choices(where: str) -> list[Any]:
    row = _row_at(where)
    return row["choices"] if row else []


def _near(where: str) -> str:
    section, _, name = where.rpartition(".")
    bare = section.split("[")[0]
    known = sorted({r["name"] for r in schema() if r["section"] == bare}) if bare else sorted(Study.model_fields)
    known = [k for k in known if (bare, k) not in hidden()]
    near = difflib.get_close_matches(name[:60], known, 1, 0.5)
    if near:
        return f"did you mean {near[0]}?"
    elsewhere = [r["path"] for r in schema() if r["name"] == name]
    if elsewhere:
        return f"it belongs to {elsewhere[0]}"
    return f"there are: {', '.join(known)}" if known else ""


def _short(value: Any) -> str:
    try:
        # As the file has it: true, not True; a date, not its Python name.
        text = str(value).lower() if isinstance(value, (bool, date, time)) else repr(value)
    except ValueError:  # a whole number with more digits than Python writes out
        return "a number of thousands of digits"
    return text if len(text) <= 60 else text[:57] + "..."
