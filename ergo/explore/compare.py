"""Variants and studies side by side on the same people: paired differences, and no winner inside the noise."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import RATING_NAMES, Results
from ergo.evaluation.run import evaluate
from ergo.study.model import Study

Z = 1.959963984540054  # standard normal quantile of 0.975


@dataclass(frozen=True)
class Difference:
    """Paired difference in served share [points], with its 95 % interval; `clear` says that it excludes zero."""

    name: str
    points: float
    low: float
    high: float

    @property
    def clear(self) -> bool:
        """Whether the interval leaves zero out."""
        return self.low > 0.0 or self.high < 0.0

    def sentence(self, base: str) -> str:
        """Say what the other serves more or less, in one sentence."""
        way = "more" if self.points >= 0.0 else "fewer"
        interval = f"95 % interval {self.low:.0f} to {self.high:.0f}"
        if not self.clear:
            return (f"{self.name} and {base} serve the same people as far as this draw can tell ({self.points:+.0f} points,"
                    f" {interval}).")  # fmt: skip
        return f"{self.name} serves {abs(self.points):.0f} points {way} than {base}, {interval}."


@dataclass(frozen=True)
class Comparison:
    """Results by name, the first being what the others are held against."""

    results: dict[str, Results]
    differences: tuple[Difference, ...]

    @property
    def base(self) -> str:
        """Name of what the others are held against."""
        return next(iter(self.results))

    def best(self) -> dict[str, str]:
        """Return the best name of each rating, empty where the best two lie inside each other's interval."""
        found = {}
        for rating in RATING_NAMES:
            rows = sorted(((r.ratings[rating], name) for name, r in self.results.items()), key=lambda row: -row[0].value)
            first, second = rows[0], rows[1] if len(rows) > 1 else None
            clear = second is None or (first[0].low > second[0].high and first[0].value > second[0].value)
            found[rating] = first[1] if clear else ""
        return found

    def sentences(self) -> list[str]:
        """Return one sentence a difference."""
        return [d.sentence(self.base) for d in self.differences]

    def rows(self) -> list[dict[str, Any]]:
        """Return one row a placement: verdict, ratings, hand force, hand travel."""
        found = []
        for name, result in self.results.items():
            demand = result.stroke.demand_n
            row: dict[str, Any] = {"name": name, "verdict": result.verdict}
            row |= {rating: result.ratings[rating].value for rating in RATING_NAMES}
            row["largest_demand_n"] = float(np.nanmax(np.where(np.isfinite(demand), demand, np.nan)))
            found.append(row)
        return found

    def to_dict(self) -> dict[str, Any]:
        """Return the comparison as plain values."""
        return {
            "base": self.base,
            "placements": self.rows(),
            "differences": [{**vars(d), "clear": d.clear, "sentence": d.sentence(self.base)} for d in self.differences],
            "best": self.best(),
        }


def placements(study: Study, label: str = "") -> dict[str, Study]:
    """Return a study as it stands and each of its variants, by name."""
    name = label or study.study.title
    found = {name: study}
    for variant in study.variants:
        found[f"{name}: {variant.name}"] = study.variant(variant.name)
    return found


def compare(chosen: dict[str, Study], *, judge: Callable[..., Results] = evaluate,
            tell: Callable[[float, str], None] | None = None) -> Comparison:  # fmt: skip
    """Judge placements on the same virtual people.

    Parameters
    ----------
    chosen : dict
        Name -> study; all take population, count, seed, ages and sex mix of the first, so that person n is the
        same person throughout (common random numbers).
    judge : callable
        `evaluate`, or a stand-in.
    tell : callable, optional
        Progress, share and word.

    Returns
    -------
    Comparison
        Difference of served share, paired person by person: mean of (other - first) with standard error
        sqrt(var / n), normal interval.
    """
    names = list(chosen)
    first = chosen[names[0]]
    shared = ("population", "count", "seed", "age_years", "women_share")
    same = {f"operators.{key}": getattr(first.operators, key) for key in shared}
    results = {}
    for n, name in enumerate(names):
        if tell is not None:
            tell(n / len(names), name)
        study = chosen[name]
        results[name] = judge(study if study.operators == first.operators else study.with_values(same))
    served = {name: result.crowd.served for name, result in results.items()}
    base = served[names[0]]
    return Comparison(results, tuple(_difference(name, served[name], base) for name in names[1:]))


def _difference(name: str, other: NDArray[np.bool_], base: NDArray[np.bool_]) -> Difference:
    step = other.astype(float) - base.astype(float)
    half = Z * float(np.sqrt(step.var(ddof=1) / step.size))
    mean = float(step.mean())
    return Difference(name, 100.0 * mean, 100.0 * (mean - half), 100.0 * (mean + half))


def named(studies: Iterable[tuple[str, Study]], *, with_variants: bool) -> dict[str, Study]:
    """Return the placements of several studies by name, each with its variants if asked."""
    found: dict[str, Study] = {}
    for label, study in studies:
        found |= placements(study, label) if with_variants else {label: study}
    return found
