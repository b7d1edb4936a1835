"""Population tables, shipped or a user's own, as lognormal descriptions of women and men."""

import difflib
import math
from collections.abc import Mapping, Sequence
from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Table, number, table_keys
from ergo.errors import DataError
from ergo.people.dimensions import BODY_TABLE, COMPOSED, DIMENSIONS, FOLLOWING, KIN, THUMB
from ergo.people.own_table import read_own_table
from ergo.people.surveys import SEXES
from ergo.sources import weakest

Array = NDArray[np.float64]
Row = Mapping[str, str]
Z_95 = 1.6448536269514722  # standard normal quantile of 0.95
REGRESSION, MASS = "body_regression", "mass_on_stature"
ARMY = "us_army_2012"
SMALLEST_EIGENVALUE = 1e-7  # a rounded correlation matrix is made positive with eigenvalues no smaller


@dataclass(frozen=True)
class Spread:
    """A body size in logarithms: its median, and its SD below and above that (the same in a plain lognormal)."""

    median: float
    below: float
    above: float

    @property
    def sd(self) -> float:
        """The SD of both sides together, as P5 and P95 show it."""
        return 0.5 * (self.below + self.above)


@dataclass(frozen=True)
class SexModel:
    """One sex of a population in logarithms: `sampling.draw_sizes` says how people are drawn from it.

    `median`, `below`, `above` (D,) of the log dimensions that the table gives; of the D-2 further ones `given`
    whether it does, `weights` (D-2, 2) and `share` (D-2,) of a given one's standard deviate on those of log stature
    and log mass and on the rest, `intercept`, `slopes` (D-2, 2) and `residual` (D-2,) of one that is not given,
    `factor` (D-2, D-2) the lower Cholesky factor of the rest's correlations; `stature_mass` the correlation of
    log stature and log mass; `stated` the names of the dimensions that the table gives; `thumb_share` for the
    dimensions that follow from others.
    """

    median: Array
    below: Array
    above: Array
    given: NDArray[np.bool_]
    weights: Array
    share: Array
    intercept: Array
    slopes: Array
    residual: Array
    factor: Array
    stature_mass: float
    stated: frozenset[str]
    thumb_share: float


@dataclass(frozen=True)
class Population:
    """A population: women and men, what its table does not cover, and the status of each dimension."""

    name: str
    title: str
    women: SexModel
    men: SexModel
    caveats: tuple[str, ...]
    statuses: Mapping[str, str]


def population_keys(library: Library) -> tuple[str, ...]:
    """Return the keys of the shipped population tables."""
    return tuple(key for key in table_keys() if library.table(key).meta.get("kind") == "population")


def is_own(name: str | Path) -> bool:
    """Return whether a population's name means a file of the user's."""
    return isinstance(name, Path) or name.lower().endswith(".csv")


def read_population(library: Library, name: str | Path) -> Population:
    """Return a shipped population by key, or a user's own by the path of its CSV file.

    Raises
    ------
    DataError
        For a name that is neither.
    StudyError
        With every problem of a user's file.
    """
    if is_own(name):
        path = Path(name)
        rows = read_own_table(library, path)
        caveats = ("a table of your own: its numbers are taken as they stand",)
        return _population(library, path.name, "Your own table", rows, caveats, ARMY, "memory")
    if name not in population_keys(library):
        near = difflib.get_close_matches(str(name), population_keys(library), 1)
        hint = f"; did you mean {near[0]}?" if near else ""
        msg = f"there is no population {name}; there are: {', '.join(population_keys(library))}{hint}"
        raise DataError(msg)
    table = library.table(str(name))
    basis = str(table.meta["mass_basis"])
    return _population(library, str(name), table.title, table.rows, table.caveats, basis, str(table.meta["status"]))


def _population(library: Library, name: str, title: str, rows: Sequence[Row], caveats: tuple[str, ...], basis: str,
                status: str) -> Population:  # fmt: skip
    women, men = (_sex_model(library, rows, sex, basis) for sex in SEXES)
    statuses = _statuses(library, rows, basis, status)
    notes = [*caveats]
    given = women.stated & men.stated
    if "body_mass" not in given:
        row = library.table(MASS).row(basis=basis, sex="male")
        notes.append(f"no body mass in the table: it follows from stature as in {basis}, status {row['status']}; {row['note']}")
    missing = [d for d in DIMENSIONS[2:] if d not in given and d not in COMPOSED]
    if missing:
        notes.append(f"{len(missing)} of {len(DIMENSIONS)} dimensions are not in the table: they follow from stature and "
                     "mass, and from another measure of the same limb where the table gives one, as in the 2012 US army "
                     "survey, with its residual spread and correlations")  # fmt: skip
    return Population(name, title, women, men, tuple(notes), statuses)


def _sex_model(library: Library, rows: Sequence[Row], sex: str, basis: str) -> SexModel:
    regression = library.table(REGRESSION).where(sex=sex)
    if regression.texts("dimension") != FOLLOWING:
        msg = f"table {REGRESSION} does not hold the dimensions in their order; install pullward again"
        raise DataError(msg)
    stated = {r["dimension"]: log_spread(r) for r in rows if r["sex"] == sex and r["dimension"] in DIMENSIONS}
    if "stature" not in stated:
        msg = f"the population table has no stature of the sex {sex}"
        raise DataError(msg)
    known, correlation = _with_mass(stated, library.table(MASS).row(basis=basis, sex=sex))
    slopes = np.stack([regression.numbers("on_log_stature"), regression.numbers("on_log_mass")], axis=1)
    residual = regression.numbers("residual_sd")
    rest = np.stack([regression.numbers(f"r_{other}") for other in FOLLOWING], axis=1)
    # The survey's pattern at this population's spread: which part of a dimension follows stature and mass.
    weights = slopes * np.array([known["stature"].sd, known["body_mass"].sd])
    carried = weights[:, 0] ** 2 + weights[:, 1] ** 2 + 2.0 * correlation * weights[:, 0] * weights[:, 1]
    total = np.sqrt(carried + residual**2)
    blank = Spread(0.0, 0.0, 0.0)
    sides = [known.get(name, blank) for name in DIMENSIONS]
    return SexModel(
        median=np.array([s.median for s in sides]),
        below=np.array([s.below for s in sides]),
        above=np.array([s.above for s in sides]),
        given=np.array([name in known for name in FOLLOWING]),
        weights=weights / total[:, None],
        share=residual / total,
        intercept=_intercepts(regression, slopes, residual, rest, known),
        slopes=slopes,
        residual=residual,
        factor=np.asarray(np.linalg.cholesky(_positive(rest)), dtype=float),
        stature_mass=correlation,
        stated=frozenset(stated),
        thumb_share=library.values(BODY_TABLE)[THUMB],
    )


def _with_mass(stated: Mapping[str, Spread], on_stature: Row) -> tuple[dict[str, Spread], float]:
    """Return what is known with body mass, from stature where the table lacks it, and their correlation."""
    if "body_mass" in stated:
        return dict(stated), number(on_stature["stature_mass_correlation"])
    slope, left = number(on_stature["on_log_stature"]), number(on_stature["residual_sd"])
    stature = stated["stature"]
    sd = math.hypot(slope * stature.sd, left)
    mass = Spread(number(on_stature["intercept"]) + slope * stature.median, sd, sd)
    return {**stated, "body_mass": mass}, slope * stature.sd / sd


def _intercepts(regression: Table, slopes: Array, residual: Array, rest: Array, known: Mapping[str, Spread]) -> Array:
    """Return the intercepts (D-2,) of the dimensions that the table does not give.

    The survey's, moved where the table gives the same limb measured otherwise (`KIN`): by the partial regression on
    that measure, r s_d / s_kin, times what its median exceeds the survey's expectation by.
    """
    intercept = regression.numbers("intercept")
    expected = intercept + slopes @ np.array([known["stature"].median, known["body_mass"].median])
    moved = intercept.copy()
    for n, name in enumerate(FOLLOWING):
        kin = next((k for k in KIN.get(name, ()) if k in known), None)
        if kin is not None:
            k = FOLLOWING.index(kin)
            moved[n] += rest[n, k] * residual[n] / residual[k] * (known[kin].median - expected[k])
    return moved


def log_spread(row: Row) -> Spread:
    """Return a body size in logarithms from a row of a population table.

    As stated (`log_mean`, `log_sd`); else so that P5, P50 and P95 are the row's own: (ln P50 - ln P5) / 1.645 below
    the median and (ln P95 - ln P50) / 1.645 above it; else from mean and SD: ln mean - s^2 / 2 and
    s^2 = ln(1 + (sd / mean)^2).
    """
    if row.get("log_mean"):
        sd = float(row["log_sd"])
        return Spread(float(row["log_mean"]), sd, sd)
    low, middle, high = (number(row.get(p) or "") for p in ("p05", "p50", "p95"))
    if all(map(math.isfinite, (low, middle, high))):
        return Spread(math.log(middle), math.log(middle / low) / Z_95, math.log(high / middle) / Z_95)
    mean, sd = float(row["mean"]), float(row["sd"])
    square = math.log1p((sd / mean) ** 2)
    return Spread(math.log(mean) - 0.5 * square, math.sqrt(square), math.sqrt(square))


def _statuses(library: Library, rows: Sequence[Row], basis: str, status: str) -> dict[str, str]:
    """Return the status of every dimension: the weaker of the two sexes'."""
    by_sex = [_statuses_of(library, rows, sex, basis, status) for sex in SEXES]
    return {name: weakest([found[name] for found in by_sex]) for name in DIMENSIONS}


def _statuses_of(library: Library, rows: Sequence[Row], sex: str, basis: str, status: str) -> dict[str, str]:
    """Return the status of every dimension of one sex: its row's, or no better than what it was worked out from."""
    own = {r["dimension"]: r.get("status") or status for r in rows if r["sex"] == sex}
    found = dict(own)
    if "body_mass" not in own:
        found["body_mass"] = weakest(["derived", own["stature"], library.table(MASS).row(basis=basis, sex=sex)["status"]])
    for name in DIMENSIONS[2:]:
        if name not in own and name not in COMPOSED:
            kin = [own[k] for k in KIN.get(name, ()) if k in own][:1]
            found[name] = weakest(["derived", found["stature"], found["body_mass"], *kin])
    thumb = library.parameters(BODY_TABLE)[THUMB].status
    for name, parts in COMPOSED.items():
        if name not in own:
            extra = [thumb] if name == "forward_grip_reach" else []
            found[name] = weakest(["derived", *(found[part] for part in parts), *extra])
    return found


def _positive(correlation: Array) -> Array:
    """Return a shipped correlation matrix made symmetric and safely positive: its cells are rounded."""
    values, vectors = np.linalg.eigh(0.5 * (correlation + correlation.T))
    fixed = (vectors * np.maximum(values, SMALLEST_EIGENVALUE)) @ vectors.T
    size = np.sqrt(np.diag(fixed))
    return fixed / np.outer(size, size)
