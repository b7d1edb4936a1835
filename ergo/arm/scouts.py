"""The search for a crowd: a few scouts look everywhere, everyone else starts from what they found.

Who the scouts are does not depend on who else is in the crowd, so a person's answer does not either.
"""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.arm.crowd_search import search_crowd

Array = NDArray[np.float64]
Indices = NDArray[np.int64]
SCOUTS = 24
LIKE = 3  # scouts whose answers a person starts from
LIKE_AMONG = 4  # the same among the scouts themselves
SLICE = 128  # people between two reports of progress
POSITIONS = 5  # positions that a stance is sought for before the others have their say
# What makes people alike: how long the arm is, how tall, how heavy, how strong, each by its usual spread (as a log).
_SPREADS = (0.05, 0.05, 0.2, 0.3, 0.3, 0.3, 0.3)


@dataclass(frozen=True)
class Problem:
    """What everyone meets: strengths' shapes, scene, joint ranges, targets (P, 9), weights (P,) [1/N], needs (P,) [N]."""

    shape: Array
    scene: Array
    limits: Array
    targets: Array
    weights: Array
    needs: Array

    @property
    def packed(self) -> tuple[Array, Array, Array]:
        """The arrays in the order that the kernels take them."""
        return self.shape, self.scene, self.limits

    @property
    def path(self) -> tuple[Array, Array, Array]:
        """The stroke's arrays in the order that the kernels take them."""
        return self.targets, self.weights, self.needs


@dataclass(frozen=True)
class Found:
    """Answers of n people: postures (n, P, 8) as `serve_operator` writes them, limit codes (n, P), stances (n, 2) [m]."""

    postures: Array
    limits: Indices
    stances: Array

    @staticmethod
    def empty(people: int, positions: int) -> "Found":
        """Return room for the answers of so many people."""
        return Found(np.zeros((people, positions, 8)), np.zeros((people, positions), np.int64), np.zeros((people, 2)))

    def margins(self, weights: Array) -> Array:
        """Return force times weight (n, P), or how far from getting there, below zero."""
        force = self.postures[:, :, 3]
        return np.where(force >= 0.0, force * weights, force)


def search(problem: Problem, ops: Array, windows: Array, scout_ops: Array, scout_windows: Array,
           tell: Callable[[float], None]) -> Found:  # fmt: skip
    """Find everyone's stance and postures.

    Parameters
    ----------
    problem : Problem
        P positions.
    ops, windows : Array
        (n, columns) and (n, 4): packed people and their stance windows.
    scout_ops, scout_windows : Array
        (S, columns) and (S, 4), S at least 2.
    tell : callable
        Called with the share done, 0..1; may raise to stop.

    Returns
    -------
    Found
        The same whatever the number of threads and whoever else is in the crowd.
    """
    scouts = _scouted(problem, scout_ops, scout_windows)
    places = _places(scouts.stances, scout_windows)
    matter = positions_that_matter(scouts.margins(problem.weights), problem.weights)
    near = nearest(ops, scout_ops, LIKE)
    people = ops.shape[0]
    found = Found.empty(people, problem.weights.size)
    for start in range(0, people, SLICE):
        tell(start / people)
        s = slice(start, start + SLICE)
        search_crowd(ops[s], *problem.packed, windows[s], *problem.path, matter, near[s], scouts.postures, places,
                     found.postures[s], found.limits[s], found.stances[s])  # fmt: skip
    tell(1.0)
    return found


def _scouted(problem: Problem, ops: Array, windows: Array) -> Found:
    """Return the scouts' answers: each alone, then each from its likes', whichever serves it better."""
    found, other = (Found.empty(ops.shape[0], problem.weights.size) for _ in range(2))
    near = nearest(ops, ops, LIKE_AMONG + 1)
    matter = positions_that_matter(found.margins(problem.weights), problem.weights)
    search_crowd(ops, *problem.packed, windows, *problem.path, matter, near[:, :0].copy(), found.postures,
                 found.stances, found.postures, found.limits, found.stances)  # fmt: skip
    matter = positions_that_matter(found.margins(problem.weights), problem.weights)
    search_crowd(ops, *problem.packed, windows, *problem.path, matter, near[:, 1:].copy(), found.postures,
                 _places(found.stances, windows), other.postures, other.limits, other.stances)  # fmt: skip
    better = other.margins(problem.weights).min(axis=1) > found.margins(problem.weights).min(axis=1)
    for mine, theirs in ((found.postures, other.postures), (found.limits, other.limits), (found.stances, other.stances)):
        mine[better] = theirs[better]
    return found


def _places(stances: Array, windows: Array) -> Array:
    """Return stances as shares of their windows (n, 2)."""
    low, high = windows[:, [0, 2]], windows[:, [1, 3]]
    return (stances - low) / np.maximum(high - low, 1e-9)


def nearest(ops: Array, scouts: Array, count: int) -> Indices:
    """Return the scouts most like each of the people (n, count), the nearest first."""
    apart = ((_likeness(ops)[:, None] - _likeness(scouts)[None]) ** 2).sum(axis=2)
    return np.ascontiguousarray(np.argsort(apart, axis=1, kind="stable")[:, :count])


def _likeness(ops: Array) -> Array:
    arm, tall = ops[:, k.UPPER] + ops[:, k.FOREARM], ops[:, k.ANKLE_Z] + ops[:, k.LEG] + ops[:, k.TRUNK]
    strengths = [ops[:, column] for column in (k.FLEXION, k.EXTENSION, k.ELBOW_FLEXION, k.GIRDLE_PULL)]
    return np.log(np.stack([arm, tall, ops[:, k.MASS], *strengths], axis=1)) / np.array(_SPREADS)


def positions_that_matter(margins: Array, weights: Array) -> Indices:
    """Return the positions that a stance is sought for: the ends, the middle, the heaviest, and where scouts are worst."""
    count = weights.size
    chosen = {0, count - 1, count // 2, int(np.argmin(weights))}
    votes = np.bincount(margins.argmin(axis=1), minlength=count)
    for p in np.argsort(-votes, kind="stable"):
        if votes[p] == 0 or len(chosen) >= POSITIONS:
            break
        if min(abs(int(p) - q) for q in chosen) >= 2:
            chosen.add(int(p))
    return np.array(sorted(chosen), dtype=np.int64)
