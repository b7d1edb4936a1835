"""What a survey's records say about bodies: moments of logarithms, regressions on stature and mass, residuals."""

import csv
import gzip
import io
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.people.dimensions import DIMENSIONS, FOLLOWING, SURVEY_COLUMNS

Array = NDArray[np.float64]
SEXES = ("female", "male")
PERCENTILES = (1.0, 5.0, 50.0, 95.0, 99.0)


@dataclass(frozen=True)
class BodyFit:
    """One sex of a survey in logarithms.

    `mean`, `sd` (D,) of log dimensions; `intercept`, `slopes` (D-2, 2), `residual_sd`, `r2` of each further
    dimension on log stature and log mass; `correlation` (D-2, D-2) of their residuals; `stature_mass` the
    correlation of log stature and log mass.
    """

    mean: Array
    sd: Array
    intercept: Array
    slopes: Array
    residual_sd: Array
    r2: Array
    correlation: Array
    stature_mass: float


def read_records(packed: bytes) -> dict[str, Array]:
    """Return the records of a gzipped CSV as sex (text) and every dimension (n,) [mm, kg]."""
    text = gzip.decompress(packed).decode("utf-8")
    rows = list(csv.DictReader(io.StringIO(text)))
    columns = {name: np.array([float(r[name]) for r in rows]) for name in rows[0] if name not in ("sex", "writing_hand")}
    found = {name: _combined(columns, recipe) for name, recipe in SURVEY_COLUMNS.items()}
    return {"sex": np.array([r["sex"] for r in rows]), **found}


def _combined(columns: dict[str, Array], recipe: str) -> Array:
    """Return a column, or a sum of columns written as `a-b+c`."""
    total, sign = np.zeros(next(iter(columns.values())).size), 1.0
    for part in recipe.replace("-", " - ").replace("+", " + ").split():
        if part in "+-":
            sign = 1.0 if part == "+" else -1.0
        else:
            total, sign = total + sign * columns[part], 1.0
    return total


def fit(records: dict[str, Array], sex: str, rows: NDArray[np.bool_] | None = None) -> BodyFit:
    """Return the lognormal description of one sex of the records, or of the chosen rows of it.

    Equation: ln d = intercept + slopes . (ln stature, ln mass) + residual, by least squares, each sex apart.
    """
    chosen = records["sex"] == sex
    if rows is not None:
        chosen = chosen & rows
    logs = np.log(np.stack([records[name][chosen] for name in DIMENSIONS], axis=1))
    mean, sd = logs.mean(axis=0), logs.std(axis=0, ddof=1)
    design = np.column_stack([np.ones(len(logs)), logs[:, :2]])
    solution = np.asarray(np.linalg.lstsq(design, logs[:, 2:], rcond=None)[0], dtype=np.float64)
    left = logs[:, 2:] - design @ solution
    return BodyFit(
        mean=mean,
        sd=sd,
        intercept=solution[0],
        slopes=solution[1:].T.copy(),
        residual_sd=left.std(axis=0, ddof=3),
        r2=1.0 - left.var(axis=0) / logs[:, 2:].var(axis=0),
        correlation=np.asarray(np.corrcoef(left.T), dtype=np.float64),
        stature_mass=float(np.corrcoef(logs[:, 0], logs[:, 1])[0, 1]),
    )


def moments_rows(records: dict[str, Array], fits: dict[str, BodyFit]) -> list[dict[str, str]]:
    """Return the rows of a population table: moments, log moments and percentiles of every dimension by sex."""
    found = []
    for sex in SEXES:
        for n, name in enumerate(DIMENSIONS):
            values = records[name][records["sex"] == sex]
            row = {"sex": sex, "dimension": name, "unit": "kg" if name == "body_mass" else "mm", "n": str(values.size)}
            row |= {"mean": f"{values.mean():.2f}", "sd": f"{values.std(ddof=1):.2f}"}
            row |= {f"p{p:02.0f}": f"{np.percentile(values, p):.1f}" for p in PERCENTILES}
            row |= {"log_mean": f"{fits[sex].mean[n]:.6f}", "log_sd": f"{fits[sex].sd[n]:.6f}", "status": "computed"}
            found.append(row)
    return found


def regression_rows(fits: dict[str, BodyFit]) -> list[dict[str, str]]:
    """Return the rows of the regression table, with the residual correlations as further columns."""
    found = []
    for sex, body in fits.items():
        for n, name in enumerate(FOLLOWING):
            row = {"sex": sex, "dimension": name, "intercept": f"{body.intercept[n]:.6f}"}
            row |= {"on_log_stature": f"{body.slopes[n, 0]:.6f}", "on_log_mass": f"{body.slopes[n, 1]:.6f}"}
            row |= {"residual_sd": f"{body.residual_sd[n]:.6f}", "r2": f"{body.r2[n]:.4f}", "status": "computed"}
            row |= {f"r_{other}": f"{body.correlation[n, m]:.4f}" for m, other in enumerate(FOLLOWING)}
            found.append(row)
    return found


def mass_rows(records: dict[str, Array], fits: dict[str, BodyFit]) -> list[dict[str, str]]:
    """Return log mass on log stature by sex, and their correlation, for tables that give no mass."""
    found = []
    for sex, body in fits.items():
        slope = body.stature_mass * body.sd[1] / body.sd[0]
        found.append(
            {
                "sex": sex,
                "intercept": f"{body.mean[1] - slope * body.mean[0]:.6f}",
                "on_log_stature": f"{slope:.6f}",
                "residual_sd": f"{body.sd[1] * np.sqrt(1.0 - body.stature_mass**2):.6f}",
                "stature_mass_correlation": f"{body.stature_mass:.6f}",
                "status": "computed",
            }
        )
    return found
