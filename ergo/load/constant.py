"""A load that stays the same over the whole travel."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.datasets import Parameter
from ergo.errors import Problem
from ergo.frames import Array


@dataclass(frozen=True)
class ConstantLoad:
    """A constant load against the slide's travel.

    Parameters
    ----------
    load_n : [N] at a slide, [N m] on a shaft; below zero it drives the handle on
    """

    load_n: float
    kind: ClassVar[str] = "constant"
    parameters: ClassVar[tuple[Parameter, ...]] = ()

    def problems(self) -> tuple[Problem, ...]:
        """Return what is not covered: nothing, once the value is a number."""
        if np.isfinite(self.load_n):
            return ()
        return (Problem("load.force_n", "must be a finite number", f"{self.load_n}"),)

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] the load is not covered: nowhere."""
        return ()

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the load (P,) [N] at slide travels (P,) from the start [m]."""
        return np.full(np.shape(slide_m), float(self.load_n))
