"""A spring under preload."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.datasets import Parameter
from ergo.errors import Problem
from ergo.frames import Array


@dataclass(frozen=True)
class SpringLoad:
    """A straight-line spring against the slide's travel.

    Parameters
    ----------
    preload_n : force at the start of the stroke [N]
    rate_n_per_m : spring rate [N/m]

    Equation: F = preload + rate x travel.
    """

    preload_n: float
    rate_n_per_m: float
    kind: ClassVar[str] = "spring"
    parameters: ClassVar[tuple[Parameter, ...]] = ()

    def problems(self) -> tuple[Problem, ...]:
        """Return what is not covered: a preload or rate below zero, or no number."""
        values = (("preload_n", self.preload_n, 1.0), ("rate_n_per_mm", self.rate_n_per_m, 1e-3))
        return tuple(
            Problem(f"load.{key}", "must be a finite number, not below zero", f"{value * scale:g}")
            for key, value, scale in values
            if not 0.0 <= value < np.inf
        )

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] the load is not covered: nowhere."""
        return ()

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the load (P,) [N] at slide travels (P,) from the start [m]."""
        return self.preload_n + self.rate_n_per_m * np.asarray(slide_m, dtype=float)
