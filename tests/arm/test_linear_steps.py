"""The small linear programs of the search against SciPy's linprog (HiGHS)."""

import numpy as np
import pytest
from scipy.optimize import linprog

from ergo.arm.linear_steps import best_step, workspace
from ergo.arm.posture_limits import COLUMNS


def problem(seed, count):
    rng = np.random.default_rng(seed)
    unknowns = 2 + 3 * count
    now, slopes = rng.normal(0.0, 1.0, (count, COLUMNS)), rng.normal(0.0, 3.0, (count, COLUMNS, 5))
    low, high = -rng.uniform(0.0, 0.5, unknowns), rng.uniform(0.0, 0.5, unknowns)
    return now, slopes, low, high


def flat(slopes, count):
    """Slopes of every limit by every unknown (count * COLUMNS, 2 + 3 count)."""
    made = np.zeros((count * COLUMNS, 2 + 3 * count))
    for p in range(count):
        rows = slice(p * COLUMNS, (p + 1) * COLUMNS)
        made[rows, :2], made[rows, 2 + 3 * p : 5 + 3 * p] = slopes[p, :, :2], slopes[p, :, 2:]
    return made


def exact(now, slopes, count, first, low, high):
    """Smallest largest limit: minimise v with now + slopes . step <= v."""
    wide = flat(slopes, count)[:, first:]
    matrix = np.hstack([-np.ones((wide.shape[0], 1)), wide])
    goal = np.zeros(matrix.shape[1])
    goal[0] = 1.0
    ends = [(None, None), *zip(low[first:], high[first:], strict=True)]
    found = linprog(goal, matrix, -now.ravel(), bounds=ends, method="highs")
    assert found.success
    return found.fun


@pytest.mark.parametrize("first", [0, 2])
@pytest.mark.parametrize("count", [1, 3, 5])
@pytest.mark.parametrize("seed", range(8))
def test_a_step_is_the_best_in_its_box(seed, count, first):
    now, slopes, low, high = problem(seed, count)
    work = workspace(count)
    table, at_top, on_side, box = work[4], work[5], work[6], work[7]
    box[0], box[1] = low, high
    promised = best_step(now, slopes, count, first, box, table, at_top, on_side, box[2])
    step = np.where(np.arange(low.size) < first, 0.0, box[2])
    assert promised == pytest.approx(exact(now, slopes, count, first, low, high), abs=1e-9)
    assert (now.ravel() + flat(slopes, count) @ step).max() == pytest.approx(promised, abs=1e-9)
    assert (step[first:] >= low[first:] - 1e-12).all()
    assert (step[first:] <= high[first:] + 1e-12).all()


def test_equal_limits_do_not_let_it_turn_in_circles():
    """Ten times the same limits: the simplex method meets nothing but ties."""
    now, slopes, low, high = problem(1, 2)
    now[:], slopes[:] = now[0, 0], slopes[0, 0]
    work = workspace(2)
    work[7][0], work[7][1] = low, high
    promised = best_step(now, slopes, 2, 0, work[7], work[4], work[5], work[6], work[7][2])
    assert promised == pytest.approx(exact(now, slopes, 2, 0, low, high), abs=1e-9)
