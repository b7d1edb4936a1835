"""The keys that may change, between their bounds, and what a change costs."""

import math
from collections.abc import Mapping
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.errors import Problem, StudyError
from ergo.explore.keys import schema_row, value_at
from ergo.study.model import Study

Array = NDArray[np.float64]
STEPS_A_SPAN = 100


@dataclass(frozen=True)
class FreeKey:
    """One key that may change: its bounds, its present value and the step in which it is changed."""

    path: str
    low: float
    high: float
    now: float
    step: float
    whole: bool
    unit: str

    @property
    def span(self) -> float:
        """From bound to bound."""
        return self.high - self.low

    def at(self, share: float) -> float:
        """Return the value at a share 0..1 of the span, in steps from the present value, inside the bounds."""
        wanted = self.low + min(max(share, 0.0), 1.0) * self.span
        value = self.now + round((wanted - self.now) / self.step) * self.step
        value = min(max(value, self.low), self.high)
        return float(round(value)) if self.whole else float(f"{value:.10g}")


@dataclass(frozen=True)
class FreeKeys:
    """All keys that may change; points (k,) are shares 0..1 of their spans."""

    keys: tuple[FreeKey, ...]

    def values(self, point: Array) -> dict[str, float]:
        """Return the values at a point, by path."""
        return {key.path: key.at(float(share)) for key, share in zip(self.keys, point, strict=True)}

    def point(self, values: Mapping[str, float]) -> Array:
        """Return the point of values."""
        return np.array([(values[key.path] - key.low) / key.span for key in self.keys])

    def now(self) -> Array:
        """Return the present values' point, inside the bounds."""
        return np.clip(np.array([(key.now - key.low) / key.span for key in self.keys]), 0.0, 1.0)

    def cost(self, values: Mapping[str, float]) -> float:
        """Return what a change costs: the sum of all changes, each as a share of its span."""
        return sum(self.shares(values).values())

    def shares(self, values: Mapping[str, float]) -> dict[str, float]:
        """Return each key's change as a share of its span, by path."""
        return {key.path: abs(values[key.path] - key.now) / key.span for key in self.keys}


def free_keys(study: Study, more: Mapping[str, tuple[float, float]] | None = None) -> FreeKeys:
    """Return the keys of `[targets.free]`, and `more` from elsewhere in place of those.

    Raises
    ------
    StudyError
        If there are none, or a key is no number that this study has.
    """
    bounds = dict(more) if more else dict(study.targets.free)
    if not bounds:
        hint = 'such as [targets.free] "lever.length_mm" = [160, 320]'
        raise StudyError([Problem("targets.free", "names no key that may change", allowed=hint)])
    found: list[FreeKey] = []
    problems: list[Problem] = []
    content = study.content()
    for path, (low, high) in bounds.items():
        try:
            found.append(_key(study, content, path, low, high))
        except StudyError as error:
            problems += error.problems
    if problems:
        raise StudyError(problems)
    return FreeKeys(tuple(found))


def _key(study: Study, content: dict[str, Any], path: str, low: float, high: float) -> FreeKey:
    row, where = schema_row(study, path), f"targets.free.{path}"
    now = value_at(content, path)
    if row["kind"] in ("point", "pair"):
        raise StudyError([Problem(where, "is more than one number", allowed=f"one of them, such as {path}[0]")])
    if row["kind"] not in ("number", "whole") or isinstance(now, bool) or not isinstance(now, (int, float)):
        raise StudyError([Problem(where, "is not a number that this study has", allowed="a key with a number")])
    if not low < high:
        raise StudyError([Problem(where, "leaves no room", f"{low:g} to {high:g}", "a first bound below the second")])
    if row["low"] is not None and (low < row["low"] or high > row["high"]):
        allowed = f"{row['low']:g} to {row['high']:g}"
        raise StudyError([Problem(where, "reaches outside the key's range", f"{low:g} to {high:g}", allowed)])
    whole = row["kind"] == "whole"
    step = max(round_step((high - low) / STEPS_A_SPAN), 1.0 if whole else 0.0)
    return FreeKey(path, float(low), float(high), float(now), step, whole, row["unit"])


def round_step(step: float) -> float:
    """Return the step of 1, 2 or 5 times a power of ten at or below `step`, as drawings have it."""
    power = 10.0 ** math.floor(math.log10(step) + 1e-9)
    return next(n * power for n in (5.0, 2.0, 1.0) if n * power <= step * (1.0 + 1e-9))
