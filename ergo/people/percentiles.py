"""Percentiles of a population's dimensions and of the links the model makes of them."""

from pathlib import Path
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library
from ergo.people.dimensions import DIMENSIONS, LINK_PARTS, link_statuses, links, unit_of
from ergo.people.populations import SexModel, population_keys, read_population
from ergo.people.sampling import draw_sizes, log_size, normal_points, sobol_points

MARKS = (1.0, 5.0, 50.0, 95.0, 99.0)
DRAWN = 16384
ROUNDED = 1  # a tenth of a millimetre, of a kilogram


def percentiles(library: Library, population: str | Path, *, count: int = DRAWN, seed: int = 1) -> dict[str, Any]:
    """Return P1, P5, P50, P95 and P99 by sex of every dimension and every link of the model, barefoot.

    Parameters
    ----------
    library : Library
        The tables.
    population : str or Path
        A shipped population, or a user's CSV file.
    count, seed : int
        People drawn a sex. Dimensions that the table gives have their own percentiles; the others have those of the
        draw. A link rises with the one dimension it is made of, so its percentiles are the link of that
        dimension's.

    Returns
    -------
    dict
        population, title, women and men (each `stature_mm` ... -> p01, p05, p50, p95, p99), caveats, statuses.
    """
    people = read_population(library, population)
    statuses = {f"{d}_{unit_of(d)}": people.statuses[d] for d in DIMENSIONS}
    statuses |= {f"{link}_mm": status for link, status in link_statuses(people.statuses, library).items()}
    return {
        "population": people.name,
        "title": people.title,
        "women": _of_sex(people.women, library, count, seed),
        "men": _of_sex(people.men, library, count, seed),
        "caveats": list(people.caveats),
        "statuses": statuses,
    }


def tables(library: Library) -> list[dict[str, Any]]:
    """Return what each shipped population is: population, title, n, year, status, caveats."""
    found = []
    for key in population_keys(library):
        table = library.table(key)
        row = {name: str(table.meta.get(name, "")) for name in ("title", "n", "year", "status")}
        found.append({"population": key, **row, "caveats": list(table.caveats)})
    return found


def _of_sex(model: SexModel, library: Library, count: int, seed: int) -> dict[str, dict[str, float]]:
    z = normal_points(sobol_points(count, seed, 0)[:, : len(DIMENSIONS)])
    drawn = draw_sizes(model, z)
    quantiles = normal_points(np.array(MARKS) / 100.0)
    marked = {name: np.percentile(drawn[name], MARKS) for name in DIMENSIONS}
    for n, name in enumerate(DIMENSIONS):
        if name in model.stated:
            marked[name] = np.exp(log_size(quantiles, model.median[n], model.below[n], model.above[n]))
    made = links(marked, library)
    found = {f"{name}_{unit_of(name)}": _rounded(values) for name, values in marked.items()}
    return found | {f"{link}_mm": _rounded(getattr(made, link)) for link in LINK_PARTS}


def _rounded(values: NDArray[np.float64]) -> dict[str, float]:
    return {f"p{mark:02.0f}": round(float(v), ROUNDED) for mark, v in zip(MARKS, values, strict=True)}
