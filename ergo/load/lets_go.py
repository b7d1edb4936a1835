"""A load that is gone beyond some travel: a drill that is through, a part that has snapped."""

from dataclasses import dataclass
from typing import Protocol

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array


class Load(Protocol):
    """What every load can answer."""

    def problems(self) -> tuple[Problem, ...]:
        """Return what is not covered or makes no sense, in the keys of the study file."""
        ...

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] from the start the load is not covered."""
        ...

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the load (P,) [N], or [N m] on a shaft, at slide travels (P,) from the start [m], [rad]."""
        ...


@dataclass(frozen=True)
class LetsGo:
    """A load up to and at some slide travel, and nothing beyond it.

    Parameters
    ----------
    load : the load until then
    at_slide_m : slide travel from the start at which it lets go [m] ([rad] on a shaft)
    """

    load: Load
    at_slide_m: float

    def problems(self) -> tuple[Problem, ...]:
        """Return the load's own problems, and a let-go before the start."""
        own = self.load.problems()
        if self.at_slide_m >= 0.0:
            return own
        return (
            *own,
            Problem("load.lets_go_at", "lies before the start of the travel", f"{self.at_slide_m:g}"),
        )

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m], up to the let-go, the load is not covered."""
        s = np.asarray(slide_m, dtype=float)
        before = s[s <= self.at_slide_m]
        return self.load.reach_problems(before) if before.size else ()

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the load (P,) [N] at slide travels (P,) [m], zero beyond the let-go."""
        s = np.asarray(slide_m, dtype=float)
        held = s <= self.at_slide_m
        force = np.zeros(s.shape)
        if held.any():
            force[held] = self.load.force_n(s[held])
        return force
