"""What a survey's records say about bodies: moments of logarithms, regressions on stature and mass, residuals.

The shipped tables `us_army_2012` and `body_regression` and the army's rows of `mass_on_stature` hold what these
functions return for the shipped records; a test works them out again.
"""

import csv
import gzip
import io
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.people.dimensions import DIMENSIONS, FOLLOWING, SURVEY_COLUMNS, composed, unit_of

Array = NDArray[np.float64]
SEXES = ("female", "male")
PERCENTILES = (1.0, 5.0, 50.0, 95.0, 99.0)


@dataclass(frozen=True)
class BodyFit:
    """One sex of a survey in logarithms.

    `mean`, `sd` (D,) and `log_correlation` (D, D) of log dimensions; `intercept`, `slopes` (D-2, 2),
    `residual_sd`, `r2` of each further dimension on log stature and log mass; `correlation` (D-2, D-2) of their
    residuals; `stature_mass` the correlation of log stature and log mass.
    """

    mean: Array
    sd: Array
    log_correlation: Array
    intercept: Array
    slopes: Array
    residual_sd: Array
    r2: Array
    correlation: Array
    stature_mass: float


@dataclass(frozen=True)
class Records:
    """The records of a survey: the sex of each person (n,), and every dimension (n,) [mm, kg]."""

    sex: NDArray[np.str_]
    sizes: Mapping[str, Array]


def read_records(packed: bytes, thumb_share: float) -> Records:
    """Return the records that a gzipped CSV holds.

    Parameters
    ----------
    packed : bytes
        The compressed file, columns as `SURVEY_COLUMNS` names them.
    thumb_share : float
        Thumb tip beyond the grip centre, as a share of the hand's length (row `thumb_beyond_grip_share`).

    Returns
    -------
    Records
    """
    rows = list(csv.DictReader(io.StringIO(gzip.decompress(packed).decode("utf-8"))))
    measured = {name: np.array([float(r[column]) for r in rows]) for name, column in SURVEY_COLUMNS.items()}
    sizes = {**measured, **composed(measured, thumb_share)}
    return Records(np.array([r["sex"] for r in rows]), sizes)


def fit(records: Records, sex: str, rows: NDArray[np.bool_] | None = None) -> BodyFit:
    """Return the lognormal description of one sex of the records, or of the chosen rows of it.

    Parameters
    ----------
    records : Records
        n people.
    sex : str
        `female` or `male`.
    rows : array, optional
        (n,) whether a person is used.

    Returns
    -------
    BodyFit

    Notes
    -----
    ln d = intercept + slopes . (ln stature, ln mass) + residual, by least squares, each sex apart.
    """
    chosen = records.sex == sex if rows is None else (records.sex == sex) & rows
    logs = np.log(np.stack([records.sizes[name][chosen] for name in DIMENSIONS], axis=1))
    whole = np.corrcoef(logs.T)
    design = np.column_stack([np.ones(len(logs)), logs[:, :2]])
    solution = np.linalg.lstsq(design, logs[:, 2:], rcond=None)[0]
    left = logs[:, 2:] - design @ solution
    return BodyFit(
        mean=logs.mean(axis=0),
        sd=logs.std(axis=0, ddof=1),
        log_correlation=whole,
        intercept=solution[0],
        slopes=np.asarray(solution[1:].T, dtype=float),
        residual_sd=left.std(axis=0, ddof=3),
        r2=1.0 - left.var(axis=0) / logs[:, 2:].var(axis=0),
        correlation=np.asarray(np.corrcoef(left.T), dtype=float),
        stature_mass=float(whole[0, 1]),
    )


def moments_rows(records: Records, fits: Mapping[str, BodyFit]) -> list[dict[str, str]]:
    """Return the rows of a population table: moments, percentiles and log moments of what was measured, by sex."""
    found = []
    for sex in SEXES:
        for n, name in enumerate(SURVEY_COLUMNS):
            values = records.sizes[name][records.sex == sex]
            row = {"sex": sex, "dimension": name, "unit": unit_of(name), "n": str(values.size)}
            row |= {"mean": f"{values.mean():.2f}", "sd": f"{values.std(ddof=1):.2f}"}
            row |= {f"p{p:02.0f}": f"{np.percentile(values, p):.1f}" for p in PERCENTILES}
            row |= {"log_mean": f"{fits[sex].mean[n]:.6f}", "log_sd": f"{fits[sex].sd[n]:.6f}", "status": "computed"}
            found.append(row)
    return found


def correlation_rows(fits: Mapping[str, BodyFit]) -> list[dict[str, str]]:
    """Return the correlations of the logarithms of all dimensions, a row each by sex."""
    return [
        {"sex": sex, "dimension": name, **{o: f"{body.log_correlation[n, m]:.4f}" for m, o in enumerate(DIMENSIONS)}}
        for sex, body in fits.items()
        for n, name in enumerate(DIMENSIONS)
    ]


def regression_rows(fits: Mapping[str, BodyFit]) -> list[dict[str, str]]:
    """Return the rows of the regression table, with the residual correlations as further columns."""
    found = []
    for sex, body in fits.items():
        for n, name in enumerate(FOLLOWING):
            row = {"sex": sex, "dimension": name, "intercept": f"{body.intercept[n]:.6f}"}
            row |= {"on_log_stature": f"{body.slopes[n, 0]:.6f}", "on_log_mass": f"{body.slopes[n, 1]:.6f}"}
            row |= {"residual_sd": f"{body.residual_sd[n]:.6f}", "r2": f"{body.r2[n]:.4f}", "status": "computed"}
            row |= {f"r_{other}": f"{body.correlation[n, m]:.6f}" for m, other in enumerate(FOLLOWING)}
            found.append(row)
    return found


def mass_rows(fits: Mapping[str, BodyFit], basis: str) -> list[dict[str, str]]:
    """Return log mass on log stature by sex, and their correlation, for tables that lack mass or correlation."""
    found = []
    for sex, body in fits.items():
        slope = body.stature_mass * body.sd[1] / body.sd[0]
        found.append(
            {
                "basis": basis,
                "sex": sex,
                "intercept": f"{body.mean[1] - slope * body.mean[0]:.6f}",
                "on_log_stature": f"{slope:.6f}",
                "residual_sd": f"{body.sd[1] * np.sqrt(1.0 - body.stature_mass**2):.6f}",
                "stature_mass_correlation": f"{body.stature_mass:.6f}",
                "status": "computed",
            }
        )
    return found
