"""Percentiles of a population's dimensions and of the links the model makes of them."""

from pathlib import Path
from typing import Any

import numpy as np

from ergo.datasets import Library
from ergo.people.dimensions import DIMENSIONS, Links, links, unit_of
from ergo.people.populations import SexModel, population, population_keys
from ergo.people.sampling import draw_sizes, normal_points, sobol_points

DERIVED = ("shoulder_height_standing", "shoulder_height_seated", "elbow_height_standing", "upper_arm_link",
           "forearm_grip_link", "forward_grip_reach")  # fmt: skip
MARKS = (1.0, 5.0, 50.0, 95.0, 99.0)
DRAWN = 16384


def percentiles(library: Library, name: str | Path, *, count: int = DRAWN, seed: int = 1) -> dict[str, Any]:
    """Return P1, P5, P50, P95 and P99 by sex of every dimension and derived link, barefoot.

    Parameters
    ----------
    library : Library
        The tables.
    name : str or Path
        A shipped population, or a user's CSV file.
    count, seed
        People drawn a sex; measured dimensions come from the lognormal itself, derived links from the draw.

    Returns
    -------
    dict
        population, women, men (each dimension -> p01, p05, p50, p95, p99), caveats, statuses.
    """
    people = population(library, name)
    measured = people.women.given & people.men.given
    women = _of_sex(people.women, library, measured, count, seed, women=True)
    men = _of_sex(people.men, library, measured, count, seed, women=False)
    statuses = {f"{d}_{unit_of(d)}": people.statuses[d] for d in DIMENSIONS}
    statuses |= {f"{d}_mm": "memory" if people.statuses["stature"] == "memory" else "derived" for d in DERIVED}
    return {
        "population": people.name,
        "title": people.title,
        "women": women,
        "men": men,
        "caveats": list(people.caveats),
        "statuses": statuses,
    }


def tables(library: Library) -> list[dict[str, str]]:
    """Return what each shipped population is: key, title, sample, year, status, caveats."""
    found = []
    for key in population_keys(library):
        meta = library.table(key).meta
        row = {"population": key, "title": str(meta["title"]), "n": str(meta.get("n", "")), "year": str(meta.get("year", ""))}
        found.append({**row, "status": str(meta["status"]), "caveats": "; ".join(meta.get("caveats", ()))})
    return found


def _of_sex(model: SexModel, library: Library, measured: frozenset[str], count: int, seed: int,
            *, women: bool) -> dict[str, dict[str, float]]:  # fmt: skip
    quantiles = normal_points(np.array(MARKS) / 100.0)
    found = {}
    for n, name in enumerate(DIMENSIONS):
        values = np.exp(model.mean[n] + model.sd[n] * quantiles)
        found[f"{name}_{unit_of(name)}"] = _marked(values)
    z = normal_points(sobol_points(count, seed, int(not women)))
    sizes = draw_sizes(model, z[:, : len(DIMENSIONS)])
    made: Links = links(sizes, np.full(count, women), library, measured)
    for name in DERIVED:
        found[f"{name}_mm"] = _marked(np.percentile(getattr(made, name), MARKS))
    return found


def _marked(values: "np.ndarray") -> dict[str, float]:
    return {f"p{mark:02.0f}": round(float(v), 1) for mark, v in zip(MARKS, values, strict=True)}
