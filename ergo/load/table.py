"""A measured load: force against slide travel as rows, straight lines between them, nothing beyond them."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.datasets import Parameter
from ergo.errors import Problem
from ergo.frames import Array

_ROUNDING_M = 1e-9  # what turning mm into m and angles into travel may add at the ends; no allowance


@dataclass(frozen=True)
class TableLoad:
    """A load read from rows.

    Parameters
    ----------
    slide_m : (K,) travel from the start [m], rising from row to row, K at least 2
    load_n : (K,) force [N]

    Valid range: first to last row; `reach_problems` names what lies outside, and `force_n` refuses it.
    """

    slide_m: tuple[float, ...]
    load_n: tuple[float, ...]
    kind: ClassVar[str] = "table"
    parameters: ClassVar[tuple[Parameter, ...]] = ()

    def problems(self) -> tuple[Problem, ...]:
        """Return what makes the rows unusable; empty when nothing does."""
        x, f = np.asarray(self.slide_m, dtype=float), np.asarray(self.load_n, dtype=float)
        if len(x) < 2 or x.shape != f.shape:
            return (Problem("load.file", "needs at least two rows of slide_mm, force_n", f"{len(x)} rows"),)
        if not (np.isfinite(x).all() and np.isfinite(f).all()):
            return (Problem("load.file", "has a value that is not a finite number"),)
        if np.any(np.diff(x) <= 0.0):
            return (Problem("load.file", "slide_mm must rise from row to row"),)
        return ()

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] the load is not covered: outside the rows."""
        s = np.asarray(slide_m, dtype=float)
        if s.min() >= self.slide_m[0] - _ROUNDING_M and s.max() <= self.slide_m[-1] + _ROUNDING_M:
            return ()
        return (
            Problem(
                "load.file",
                "does not cover the slide's travel, and nothing is read beyond its rows",
                f"travel from {s.min() * 1e3:.2f} to {s.max() * 1e3:.2f} mm",
                f"{self.slide_m[0] * 1e3:g} to {self.slide_m[-1] * 1e3:g} mm",
            ),
        )

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the load (P,) [N] at slide travels (P,) from the start [m].

        Raises
        ------
        ValueError
            If a travel lies outside the rows.
        """
        if found := self.reach_problems(slide_m):
            raise ValueError(found[0].sentence())
        return np.interp(np.asarray(slide_m, dtype=float), self.slide_m, self.load_n)
