"""A user's own population table: read from a CSV file, and every problem of it told at once."""

import difflib
import math
from collections.abc import Iterator, Mapping
from pathlib import Path

from ergo.datasets import Library, own_rows
from ergo.errors import Problem, StudyError
from ergo.people.dimensions import DIMENSIONS, unit_of
from ergo.people.surveys import SEXES
from ergo.sources import STATUSES

COLUMNS = ("sex", "dimension", "unit", "mean", "sd")
MARKS = ("p05", "p50", "p95")
NEEDED = ("stature", "body_mass")
OTHER_WORDS = {"f": "female", "w": "female", "woman": "female", "women": "female", "m": "male", "man": "male",
               "men": "male", "height": "stature", "weight": "body_mass", "mass": "body_mass",
               "shoulder_height": "acromion_height"}  # fmt: skip
# A mean this many times above or below the army survey's is taken for a slip of unit, not for a people.
FAR_FROM_SURVEY = 2.0
# An SD over its mean: 0.04 for statures, 0.3 for the heaviest peoples' mass.
SMALLEST_SPREAD, LARGEST_SPREAD = 0.01, 0.5
Row = Mapping[str, str]


def read_own_table(library: Library, path: Path) -> tuple[Row, ...]:
    """Return the rows of a user's population table.

    Parameters
    ----------
    library : Library
        Holds the survey that the rows are held against, to find slips of unit.
    path : Path
        CSV with the columns sex (`female`, `male`), dimension, unit (mm, kg), mean, sd; a row may give p05, p50 and
        p95 instead of mean and sd, and a source and a status. Stature and body mass of both sexes are needed.

    Returns
    -------
    tuple
        One mapping a row.

    Raises
    ------
    StudyError
        With every problem of the file.
    """
    placed = own_rows(path, COLUMNS)
    problems = [p for where, row in placed for p in _row_problems(library, where, row)]
    problems += _repeated(placed)
    stated = {(row["sex"], row["dimension"]) for _, row in placed}
    for sex in SEXES:
        for name in NEEDED:
            if (sex, name) not in stated:
                allowed = "stature and body_mass of both sexes, the rest as you have it"
                problems.append(Problem(path.name, f"has no {name} of the sex {sex}", "", allowed))
    if problems:
        raise StudyError(problems)
    return tuple(row for _, row in placed)


def _row_problems(library: Library, where: str, row: Row) -> Iterator[Problem]:
    if row.get("beyond"):
        yield Problem(where, "has more cells than the first line names", row["beyond"][:60])
    yield from _word(where, "sex", row["sex"], SEXES)
    yield from _word(where, "dimension", row["dimension"], DIMENSIONS)
    if row.get("status"):
        yield from _word(where, "status", row["status"], STATUSES)
    if row["dimension"] in DIMENSIONS and row["unit"] != unit_of(row["dimension"]):
        yield Problem(where, "has the wrong unit", row["unit"] or "nothing", unit_of(row["dimension"]))
    marked = any(row.get(name) for name in MARKS)
    if marked:
        yield from _percentile_problems(where, row)
    if not marked or row["mean"] or row["sd"]:
        yield from _moment_problems(where, row)
    if row["sex"] in SEXES and row["dimension"] in DIMENSIONS:
        yield from _far(library, where, row, _number(row.get("p50", "") if marked else row["mean"]))


def _word(where: str, what: str, got: str, allowed: tuple[str, ...]) -> Iterator[Problem]:
    if got in allowed:
        return
    words = {**OTHER_WORDS, **{word: word for word in allowed}}
    meant = words.get(next(iter(difflib.get_close_matches(got.lower().replace(" ", "_"), words, 1)), ""), "")
    hint = f"did you mean {meant}?" if meant in allowed else ""
    yield Problem(where, f"has an unknown {what}", got or "nothing", ", ".join(allowed), hint)


def _number(text: str) -> float:
    """Return a positive finite number, else NaN."""
    try:
        value = float(text)
    except ValueError:
        return math.nan
    return value if math.isfinite(value) and value > 0.0 else math.nan


def _moment_problems(where: str, row: Row) -> Iterator[Problem]:
    mean, sd = _number(row["mean"]), _number(row["sd"])
    for name, value in (("mean", mean), ("sd", sd)):
        if math.isnan(value):
            yield Problem(where, f"{name} is no number above zero", row[name] or "nothing", "a number above zero")
    if sd > LARGEST_SPREAD * mean or sd < SMALLEST_SPREAD * mean:
        allowed = f"{SMALLEST_SPREAD * mean:g} to {LARGEST_SPREAD * mean:g}"
        yield Problem(where, "sd is no spread of a body size beside its mean", f"{sd:g}", allowed)


def _percentile_problems(where: str, row: Row) -> Iterator[Problem]:
    values = [_number(row.get(name, "")) for name in MARKS]
    for name, value in zip(MARKS, values, strict=True):
        if math.isnan(value):
            yield Problem(where, f"{name} is no number above zero", row.get(name) or "nothing", "p05, p50 and p95, or none")
    if not any(map(math.isnan, values)) and not values[0] < values[1] < values[2]:
        got = ", ".join(f"{v:g}" for v in values)
        yield Problem(where, "percentiles do not rise", got, "p05 < p50 < p95")
    mean = _number(row["mean"])
    if values[0] >= mean or values[2] <= mean:
        yield Problem(where, "mean lies outside p05 to p95", f"{mean:g}", f"{values[0]:g} to {values[2]:g}")


def _far(library: Library, where: str, row: Row, middle: float) -> Iterator[Problem]:
    survey = _survey_median(library, row["sex"], row["dimension"])
    low, high = survey / FAR_FROM_SURVEY, survey * FAR_FROM_SURVEY
    if middle < low or middle > high:
        ratio = survey / middle
        unit = next((f"did you mean {middle * k:g}?" for k in (1000.0, 10.0, 25.4, 0.1, 0.001, 0.4536)
                     if 0.7 < ratio / k < 1.4), "")  # fmt: skip
        yield Problem(where, f"{row['dimension']} is no body size in {unit_of(row['dimension'])}", f"{middle:g}",
                      f"{low:.0f} to {high:.0f}", unit)  # fmt: skip


def _survey_median(library: Library, sex: str, dimension: str) -> float:
    """Return the army survey's median [mm, kg] of a dimension."""
    army = library.table("us_army_2012")
    stature, mass = (float(army.row(sex=sex, dimension=d)["log_mean"]) for d in NEEDED)
    if dimension in NEEDED:
        return math.exp(stature if dimension == "stature" else mass)
    fitted = library.table("body_regression").row(sex=sex, dimension=dimension)
    follows = float(fitted["on_log_stature"]) * stature + float(fitted["on_log_mass"]) * mass
    return math.exp(float(fitted["intercept"]) + follows)


def _repeated(placed: "tuple[tuple[str, Row], ...]") -> Iterator[Problem]:
    first: dict[tuple[str, str], str] = {}
    for where, row in placed:
        key = (row["sex"], row["dimension"])
        if key in first:
            yield Problem(where, "gives the same sex and dimension again", " ".join(key), f"once, as in {first[key]}")
        first.setdefault(key, where)
