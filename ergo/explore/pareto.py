"""The placements that no other beats in everything at once."""

from collections.abc import Sequence

import numpy as np
from numpy.typing import NDArray

# What a placement is weighed by: most people served, least hand travel, finest movement of the tool.
OBJECTIVES = {"served": 1.0, "hand_travel_mm": -1.0, "tool_mm_per_hand_mm": -1.0}


def front(values: NDArray[np.float64], signs: Sequence[float]) -> NDArray[np.bool_]:
    """Return which rows lie on the Pareto front.

    Parameters
    ----------
    values : array
        (n, k) one row a placement; a row that is not finite is never on the front.
    signs : sequence
        (k,) 1 where more is better, -1 where less is.

    Returns
    -------
    array
        (n,) True where no other row is at least as good in every column and better in one. Equal rows stay together.

    Notes
    -----
    Rows are visited from the best in the first column on (ties by the next), so that a row can only be beaten by one
    that was kept before: n log n for the order, and n times the length of the front.
    """
    better = np.asarray(values, dtype=float) * np.asarray(signs, dtype=float)
    kept = np.zeros(better.shape[0], dtype=bool)
    rows = np.flatnonzero(np.isfinite(better).all(axis=1))
    order = rows[np.lexsort(-better[rows].T[::-1])]
    best = np.empty((0, better.shape[1]))
    for row in order:
        point = better[row]
        beaten = ((best >= point).all(axis=1) & (best > point).any(axis=1)).any()
        if not beaten:
            kept[row] = True
            best = np.vstack([best, point])
    return kept
