"""Population tables, shipped or a user's own, as lognormal descriptions of women and men."""

import csv
import io
import math
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Table, number, table_keys
from ergo.errors import DataError, Problem, StudyError
from ergo.people.dimensions import DIMENSIONS, FOLLOWING, unit_of
from ergo.people.surveys import SEXES

Array = NDArray[np.float64]
Z_95 = 1.6448536269514722  # standard normal quantile of 0.95
USER_COLUMNS = ("sex", "dimension", "unit", "mean", "sd")
REGRESSION, MASS = "body_regression", "mass_on_stature"


@dataclass(frozen=True)
class SexModel:
    """One sex of a population in logarithms: see `draw_sizes` for how people are drawn from it.

    `mean`, `sd` (D,) of log dimensions; `weights` (D-2, 2) on standard stature and mass, `spread` (D-2,) of the
    rest; `correlation` (D-2, D-2) of the rest; `stature_mass` correlation; `given` the dimensions that the table
    states itself.
    """

    mean: Array
    sd: Array
    weights: Array
    spread: Array
    correlation: Array
    stature_mass: float
    given: frozenset[str]
    mass_given: bool


@dataclass(frozen=True)
class Population:
    """A population: women and men, what the table covers and what it does not."""

    name: str
    title: str
    women: SexModel
    men: SexModel
    caveats: tuple[str, ...]
    statuses: dict[str, str]


def population_keys(library: Library) -> tuple[str, ...]:
    """Return the keys of the shipped population tables."""
    return tuple(key for key in table_keys() if library.table(key).meta.get("kind") == "population")


def population(library: Library, name: str | Path) -> Population:
    """Return a shipped population by key, or a user's own by the path of its CSV file.

    Raises
    ------
    DataError
        For a name that is neither.
    StudyError
        With every problem of a user's file.
    """
    if isinstance(name, Path) or str(name).endswith(".csv"):
        rows = _user_rows(Path(name))
        caveats = ("a table of your own: check its sample, year and clothing",)
        return _model(library, str(name), "your own table", rows, caveats, "memory")
    if name not in population_keys(library):
        import difflib

        near = difflib.get_close_matches(name, population_keys(library), 1)
        hint = f"; did you mean {near[0]}?" if near else ""
        msg = f"there is no population {name}; there are: {', '.join(population_keys(library))}{hint}"
        raise DataError(msg)
    table = library.table(name)
    return _model(library, name, table.title, table.rows, table.caveats, str(table.meta["status"]))


def _model(library: Library, name: str, title: str, rows: "tuple | list", caveats: tuple[str, ...],
           status: str) -> Population:  # fmt: skip
    women, men = (_sex_model(library, rows, sex) for sex in SEXES)
    notes = list(caveats)
    if not (women.mass_given and men.mass_given):
        notes.append("no body mass in the table: mass follows the army survey's regression on stature, so heavy "
                     "people are too few")  # fmt: skip
    missing = len(DIMENSIONS) - len(women.given & men.given)
    if missing:
        notes.append(f"{missing} of {len(DIMENSIONS)} dimensions are not in the table: they follow by regression on "
                     "stature and mass of the 2012 army survey, with its residual spread")  # fmt: skip
    statuses = {}
    for dimension in DIMENSIONS:
        own = [r.get("status") or status for r in rows if r["dimension"] == dimension]
        statuses[dimension] = own[0] if own else "derived"
        if "memory" in own or (not own and status == "memory"):
            statuses[dimension] = "memory"
    return Population(name, title, women, men, tuple(notes), statuses)


def _sex_model(library: Library, rows: "tuple | list", sex: str) -> SexModel:
    regression = library.table(REGRESSION).where(sex=sex)
    mass = library.table(MASS).row(sex=sex)
    given = {r["dimension"]: log_moments(r) for r in rows if r["sex"] == sex and r["dimension"] in DIMENSIONS}
    correlation = number(mass["stature_mass_correlation"])
    if "stature" not in given:
        msg = f"the population table has no stature for {sex}"
        raise DataError(msg)
    mass_given = "body_mass" in given
    if not mass_given:
        slope, left = number(mass["on_log_stature"]), number(mass["residual_sd"])
        centre, width = given["stature"]
        spread = math.hypot(slope * width, left)
        given = {**given, "body_mass": (number(mass["intercept"]) + slope * centre, spread)}
        correlation = slope * width / spread
    mean, sd = np.zeros(len(DIMENSIONS)), np.zeros(len(DIMENSIONS))
    mean[:2], sd[:2] = zip(given["stature"], given["body_mass"], strict=True)
    weights, spread = _following(regression, given, mean, sd, correlation)
    residual = np.array([regression.numbers(f"r_{other}") for other in FOLLOWING]).T
    stated = frozenset(given) - (frozenset() if mass_given else {"body_mass"})
    return SexModel(mean, sd, weights, spread, residual, correlation, stated, mass_given)


def _following(regression: Table, given: dict[str, tuple[float, float]], mean: Array, sd: Array,
               correlation: float) -> tuple[Array, Array]:  # fmt: skip
    """Fill in log means and SDs of the further dimensions; return their weights and the spread of the rest.

    A dimension that the table gives keeps the survey's pattern (which part follows stature and mass) at the
    table's own mean and SD; one that it does not give keeps the survey's regression.
    """
    slopes = np.stack([regression.numbers("on_log_stature"), regression.numbers("on_log_mass")], axis=1)
    intercept, residual = regression.numbers("intercept"), regression.numbers("residual_sd")
    weights = slopes * sd[:2]
    carried = np.sqrt(weights[:, 0] ** 2 + weights[:, 1] ** 2 + 2.0 * correlation * weights[:, 0] * weights[:, 1])
    total = np.hypot(carried, residual)
    mean[2:], sd[2:], spread = intercept + slopes @ mean[:2], total, residual.copy()
    for n, name in enumerate(FOLLOWING):
        if name in given:
            scale = given[name][1] / total[n]
            mean[n + 2], sd[n + 2] = given[name]
            weights[n] *= scale
            spread[n] = residual[n] * scale
    return weights, spread


def log_moments(row: "dict[str, str]") -> tuple[float, float]:
    """Return mean and SD of the logarithm from a row: stated, from P5/P50/P95, from mean and SD, or P5 and P95.

    Percentiles: mean = ln P50, SD = (ln P95 - ln P5) / 3.29; a skew left after the logarithm is lost.
    """
    if row.get("log_mean"):
        return float(row["log_mean"]), float(row["log_sd"])
    low, middle, high = (number(row.get(p) or "") for p in ("p05", "p50", "p95"))
    if all(map(math.isfinite, (low, middle, high))):
        return math.log(middle), math.log(high / low) / (2.0 * Z_95)
    mean, sd = float(row["mean"]), float(row["sd"])
    spread = math.log1p((sd / mean) ** 2)
    return math.log(mean) - 0.5 * spread, math.sqrt(spread)


def _user_rows(path: Path) -> list[dict[str, str]]:
    """Return a user's rows, or raise every problem of the file."""
    try:
        text = path.read_text(encoding="utf-8-sig")
    except FileNotFoundError as error:
        raise StudyError([Problem(str(path), "there is no such file", "", "a CSV of " + ", ".join(USER_COLUMNS))]) from error
    except (OSError, UnicodeDecodeError) as error:
        raise StudyError([Problem(str(path), f"cannot be read as text: {error}")]) from error
    reader = csv.DictReader(io.StringIO(text))
    if reader.fieldnames is None or not set(USER_COLUMNS) <= set(reader.fieldnames):
        got = ", ".join(reader.fieldnames or ["an empty file"])
        raise StudyError([Problem(str(path), "does not have the expected columns", got, ", ".join(USER_COLUMNS))])
    rows = [{k: (v or "").strip() for k, v in r.items() if k} for r in reader]
    problems = [p for n, row in enumerate(rows, 2) for p in _user_row_problems(f"{path.name}:{n}", row)]
    stated = {(r["sex"], r["dimension"]) for r in rows}
    wanted = [(sex, name) for sex in SEXES for name in ("stature", "body_mass") if (sex, name) not in stated]
    problems += [Problem(path.name, f"has no {name} for {sex}", "", "stature and body_mass by sex") for sex, name in wanted]
    if problems:
        raise StudyError(problems)
    return rows


def _user_row_problems(where: str, row: dict[str, str]) -> list[Problem]:
    found = []
    if row["sex"] not in SEXES:
        found.append(Problem(f"{where} sex", "is neither sex", row["sex"], ", ".join(SEXES)))
    if row["dimension"] not in DIMENSIONS:
        found.append(Problem(f"{where} dimension", "is not known", row["dimension"], ", ".join(DIMENSIONS)))
    elif row["unit"] != unit_of(row["dimension"]):
        found.append(Problem(f"{where} unit", "is not the dimension's unit", row["unit"], unit_of(row["dimension"])))
    for name in ("mean", "sd"):
        try:
            value = float(row[name])
        except ValueError:
            value = math.nan
        if not (math.isfinite(value) and value > 0.0):
            found.append(Problem(f"{where} {name}", "must be a number above zero", row[name]))
    if not found and float(row["sd"]) > 0.5 * float(row["mean"]):
        found.append(Problem(f"{where} sd", "is more than half the mean", row["sd"]))
    return found
