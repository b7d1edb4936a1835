"""Looking for changes: over all that is allowed, then near what looks good, then back toward what is there now."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import NonlinearConstraint, differential_evolution, minimize

from ergo.explore.free import FreeKeys
from ergo.explore.trials import Bench, Trial

Array = NDArray[np.float64]
DIFFERENT = 0.15  # two proposals differ by at least this share of some key's span
NOT_MEETING = 10.0
MOST_GENERATIONS = 60
ENOUGH_ROOM = 0.02  # more room than this over every target is not looked for


@dataclass(frozen=True)
class Apart:
    """What a further proposal has to stay away from: the points of those made already."""

    keys: FreeKeys
    points: tuple[Array, ...]

    def distances(self, values: Mapping[str, float]) -> list[float]:
        """Return how far values lie from each point: the largest change of any key, as a share of its span."""
        here = self.keys.point(values)
        return [float(np.abs(here - point).max()) for point in self.points]

    def near(self, values: Mapping[str, float]) -> bool:
        """Whether values are too like a proposal made already."""
        return min(self.distances(values), default=1.0) < DIFFERENT

    def worth(self, trial: Trial) -> float:
        """Return what the search makes small: the cost of what meets every target, else how far it falls short."""
        close = sum(1.0 - d / DIFFERENT for d in self.distances(trial.values) if d < DIFFERENT)
        if trial.meets and not close:
            return trial.cost
        return NOT_MEETING + trial.shortfall + close + 0.02 * trial.cost

    def starts(self, trials: list[Trial], count: int) -> list[Trial]:
        """Return trials to begin from: the cheapest, and those with the most room over their tightest target.

        What is cheapest on few people is what flatters them most; what has room still meets its targets on all.
        """
        free = [trial for trial in trials if not self.near(trial.values)]
        cheap = sorted(free, key=self.worth)[:count]
        roomy = sorted(free, key=lambda trial: -trial.least_room)[:count]
        return [*cheap, *(trial for trial in roomy if trial not in cheap)]


def look_wide(bench: Bench, trials: int, seed: int) -> None:
    """Fill the bench by SciPy's differential evolution from the present placement, until `trials` have asked people.

    What fails by its direction or the tool's travel is known without people and costs next to nothing.
    """
    count, nobody = len(bench.keys.keys), Apart(bench.keys, ())
    crowd = max(4 * count, 12)
    differential_evolution(
        lambda point: nobody.worth(bench.trial(np.asarray(point))), [(0.0, 1.0)] * count, maxiter=MOST_GENERATIONS,
        popsize=-(-crowd // count), init="sobol", x0=bench.keys.now(), rng=np.random.default_rng(seed), polish=False, tol=0.0,
        callback=lambda *_, **__: bench.asked >= trials,
    )  # fmt: skip


def look_for_room(bench: Bench, apart: Apart, start: Array, trials: int) -> None:
    """Search from a point that misses a target for more room over the tightest one, by SciPy's Nelder-Mead."""
    step = np.where(start > 0.5, -0.1, 0.1)
    corners = np.vstack([start, start + np.diag(step)])

    def tightness(point: Array) -> float:
        trial = bench.trial(point)
        return -min(trial.least_room, *(d - DIFFERENT for d in apart.distances(trial.values)), ENOUGH_ROOM)

    minimize(
        tightness, start, method="Nelder-Mead", bounds=[(0.0, 1.0)] * start.size,
        options={"maxfev": trials, "initial_simplex": corners, "xatol": 0.01, "fatol": 1e-3},
    )  # fmt: skip


def look_for_less(bench: Bench, apart: Apart, start: Array, trials: int) -> None:
    """Search from a point that meets every target for one that costs less, by SciPy's COBYQA; the bench remembers."""

    def room(point: Array) -> Array:
        trial = bench.trial(point)
        return np.array([*trial.room, *(d - DIFFERENT for d in apart.distances(trial.values))])

    minimize(
        lambda point: bench.trial(point).cost, start, method="COBYQA", bounds=[(0.0, 1.0)] * start.size,
        constraints=NonlinearConstraint(room, 0.0, np.inf),
        options={"maxfev": trials, "initial_tr_radius": 0.08, "final_tr_radius": 0.005},
    )  # fmt: skip


def tidied(bench: Bench, trial: Trial, apart: Apart) -> Trial:
    """Return a trial with every key put back, or nearer, to where it stands now as long as that makes it better."""
    keys = bench.keys
    now, point = keys.now(), keys.point(trial.values)
    for n in np.argsort(np.abs(point - now)):
        for share in (0.0, 0.5, 0.75):
            tried = point.copy()
            tried[n] = now[n] + share * (point[n] - now[n])
            other = bench.trial(tried)
            if apart.worth(other) < apart.worth(trial):
                trial, point = other, keys.point(other.values)
                break
    return trial
