"""The stance and posture search against SciPy's differential evolution over all unknowns at once.

The aim is every case within 2 %. What is missed are narrow pockets: postures at the very end of a joint's range with a
bar grip, and stances on a sharp ridge between two positions. The test prints them.
"""

import numpy as np
from numba import njit
from scipy.optimize import differential_evolution

from ergo.arm import kernels as k
from ergo.arm.posture_limits import COLUMNS, judge_posture
from ergo.arm.scouts import SCOUTS, Problem, search
from tests.arm.made_operators import LIMITS, SHAPE, operators, scene, sit, targets

CASES, POSITIONS, ASKED = 48, 3, 80.0


@njit
def margins(x, op, shape, scene_row, limits, path, asked):
    out, row = np.zeros(x.shape[1]), np.zeros(COLUMNS)
    for j in range(x.shape[1]):
        worst = 1e9
        for p in range(path.shape[0]):
            force, _ = judge_posture(op, shape, scene_row, limits, x[0, j], x[1, j], path[p], x[2 + 3 * p, j], x[3 + 3 * p, j],
                                     x[4 + 3 * p, j], row)  # fmt: skip
            worst = min(worst, force / asked if force >= 0.0 else force)
        out[j] = -worst
    return out


def case(n):
    rng = np.random.default_rng([2026, n])
    op = operators(1, int(rng.integers(1 << 30)))[0]
    seated, surface = rng.random() < 0.3, rng.uniform(0.8, 1.05)
    view = scene(surface, rng.uniform(0.3, 0.8), ball=rng.random() < 0.4, seated=seated)
    path = targets(rng, surface, POSITIONS)
    if seated:
        return sit(op), view, path, np.array([-0.3, 0.3, -0.35, -0.35])
    return op, view, path, np.array([-0.3, 0.3, -0.4 - op[k.TOE_AHEAD], 0.05 - op[k.TOE_AHEAD]])


def searched(n, op, view, path, window):
    """Worst margin of one person, whose scouts are other people."""
    others = operators(SCOUTS, 1000 + n)
    others = np.array([sit(other) for other in others]) if view[k.SEATED] > 0.0 else others
    problem = Problem(SHAPE, view, LIMITS, path, np.full(POSITIONS, 1 / ASKED), np.full(POSITIONS, ASKED))
    found = search(problem, op[None], window[None], others, np.tile(window, (SCOUTS, 1)), lambda share: None)
    return float(found.margins(problem.weights).min())


def evolved(op, view, path, window):
    posture = [(0.0, 1.0), (view[k.BEND_MIN], view[k.BEND_MAX]), (view[k.SWIVEL_LOW], view[k.SWIVEL_HIGH])]
    bounds = [(window[0], window[1]), (window[2], window[3] + 1e-9), *posture * POSITIONS]
    found = differential_evolution(margins, bounds, args=(op, SHAPE, view, LIMITS, path, ASKED), vectorized=True, popsize=15,
                                   maxiter=300, tol=1e-8, rng=1, updating="deferred", polish=False)  # fmt: skip
    return -float(found.fun)


def test_within_two_percent_of_the_dense_optimum(capsys):
    short = []
    for n in range(CASES):
        problem = case(n)
        dense = evolved(*problem)
        if dense > 0.0:
            short.append((1.0 - searched(n, *problem) / dense, n))
    gaps = np.array([gap for gap, _ in short])
    missed = [(n, round(100 * gap, 1)) for gap, n in short if gap > 0.02]
    with capsys.disabled():
        print(f"\n{len(gaps)} cases: {len(gaps) - len(missed)} within 2 %; missed (case, %): {missed};"
              f" mean shortfall {100 * np.maximum(gaps, 0).mean():.2f} %")  # fmt: skip
    assert len(gaps) >= 40
    assert len(missed) <= 0.08 * len(gaps)
    assert np.maximum(np.minimum(gaps, 1.0), 0.0).mean() < 0.02
