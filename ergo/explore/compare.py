"""Variants and studies side by side on the same people: paired differences, and no winner inside the noise."""

from collections.abc import Callable, Iterable
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import RATING_NAMES, Results
from ergo.evaluation.run import evaluate
from ergo.explore.outcome import outcome_of
from ergo.rating.intervals import paired_interval
from ergo.study.model import Study

PEOPLE_KEYS = ("population", "count", "seed", "age_years", "women_share")


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
    """Results by name, the first being what the others are held against; `notes` say whose people were replaced."""

    results: dict[str, Results]
    differences: tuple[Difference, ...]
    notes: tuple[str, ...] = ()

    @property
    def base(self) -> str:
        """Name of what the others are held against."""
        return next(iter(self.results))

    def best(self) -> dict[str, str]:
        """Return the best name of each rating, empty where noise could have made it the best.

        The served share is compared person by person: its best must beat every other by an interval that leaves zero
        out. The other ratings are compared by their own intervals, which is stricter than person by person.
        """
        found = {}
        for rating in RATING_NAMES:
            rows = sorted(((r.ratings[rating], name) for name, r in self.results.items()), key=lambda row: -row[0].value)
            first, name = rows[0]
            if rating == "served":
                clear = all(self._beats(name, other) for _, other in rows[1:])
            else:
                clear = all(first.value > other.value and first.low > other.high for other, _ in rows[1:])
            found[rating] = name if clear else ""
        return found

    def _beats(self, name: str, other: str) -> bool:
        served = self.results[name].crowd.served, self.results[other].crowd.served
        return paired_interval(*served)[1] > 0.0

    def sentences(self) -> list[str]:
        """Return one sentence a difference."""
        return [d.sentence(self.base) for d in self.differences]

    def rows(self) -> list[dict[str, Any]]:
        """Return one row a placement: verdict, ratings with intervals, where it is worst and why, force, travel."""
        return [{"name": name, **outcome_of(result)} for name, result in self.results.items()]

    def to_dict(self) -> dict[str, Any]:
        """Return the comparison as plain values."""
        return {
            "base": self.base,
            "placements": self.rows(),
            "differences": [{**vars(d), "clear": d.clear, "sentence": d.sentence(self.base)} for d in self.differences],
            "best": self.best(),
            "notes": list(self.notes),
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
        Difference of served share, paired person by person, see `ergo.rating.intervals.paired_interval`.
    """
    names = list(chosen)
    first = chosen[names[0]].operators
    same = {f"operators.{key}": getattr(first, key) for key in PEOPLE_KEYS}
    results, notes = {}, []
    for n, name in enumerate(names):
        if tell is not None:
            tell(n / len(names), name)
        study = chosen[name]
        other = [key for key in PEOPLE_KEYS if getattr(study.operators, key) != getattr(first, key)]
        if other:
            study = study.with_values(same)
            notes.append(f"{name} is judged on the people of {names[0]}: its own {', '.join(other)}"
                         f" {'is' if len(other) == 1 else 'are'} set aside.")  # fmt: skip
        results[name] = judge(study)
    served = {name: result.crowd.served for name, result in results.items()}
    differences = tuple(paired_difference(name, served[name], served[names[0]]) for name in names[1:])
    return Comparison(results, differences, tuple(notes))


def paired_difference(name: str, other: NDArray[np.bool_], base: NDArray[np.bool_]) -> Difference:
    """Return the difference of two served shares on the same people.

    Parameters
    ----------
    name : str
        Of the other.
    other, base : array
        (n,) whether person n is served.

    Returns
    -------
    Difference
        Mean of (other - base) [points] with its 95 % interval, see `ergo.rating.intervals.paired_interval`.
    """
    mean, low, high = paired_interval(other, base)
    return Difference(name, 100.0 * mean, 100.0 * low, 100.0 * high)


def named(studies: Iterable[tuple[str, Study]], *, with_variants: bool) -> dict[str, Study]:
    """Return the placements of several studies by name, each with its variants if asked."""
    found: dict[str, Study] = {}
    for label, study in studies:
        found |= placements(study, label) if with_variants else {label: study}
    return found
