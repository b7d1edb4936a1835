"""The overrun kernel against a plain twin: matrix exponentials for the motion, bracketing for events."""

import numpy as np
import pytest
from scipy.linalg import expm
from scipy.optimize import brentq

from ergo.letgo import kernels as k


def matrix(mass, damping, stiffness, decay):
    """Rates of (travel, speed, drive, constant resistance), linear within a phase."""
    return np.array(
        [
            [0.0, 1.0, 0.0, 0.0],
            [-stiffness / mass, -damping / mass, 1.0 / mass, -1.0 / mass],
            [0.0, 0.0, -decay, 0.0],
            [0.0, 0.0, 0.0, 0.0],
        ]
    )


def twin(force, against, against_rate, mass, damping, stiffness, latency, decay, watched, ahead):
    """Travel, peak speed, time, speed and press of one case, and how it ended."""
    if ahead <= 0.0:
        return 0.0, 0.0, 0.0, 0.0, max(force - against, 0.0), k.MET
    if force <= against:
        return 0.0, 0.0, 0.0, 0.0, 0.0, k.TURNED
    spring = stiffness + against_rate
    hold, fade = matrix(mass, damping, spring, 0.0), matrix(mass, damping, spring, decay)
    start = np.array([0.0, 0.0, force, against])
    kink = expm(hold * min(latency, watched)) @ start

    def state(t):
        return expm(hold * t) @ start if t <= latency else expm(fade * (t - latency)) @ kink

    def push(t):
        x, v, f, r = state(t)
        return f - r - spring * x - damping * v

    times = np.linspace(0.0, watched, 501)
    states = np.array([state(t) for t in times])
    end, how = watched, k.STILL_MOVING
    turned = np.nonzero(states[1:, 1] <= 0.0)[0]
    if turned.size:
        after = times[turned[0] + 1]
        end, how = brentq(lambda t: state(t)[1], max(after - times[1], 1e-12), after, xtol=1e-15), k.TURNED
    if state(end)[0] >= ahead:
        end, how = brentq(lambda t: state(t)[0] - ahead, 0.0, end, xtol=1e-15), k.MET
    before = times[times < end]
    pushes = np.array([push(t) for t in before])
    tops = np.nonzero((pushes[:-1] > 0.0) & (pushes[1:] <= 0.0))[0]
    peaks = [state(end)[1], *(state(brentq(push, before[j], before[j + 1], xtol=1e-15))[1] for j in tops)]
    x, v, f, r = state(end)
    met = how == k.MET
    return (
        x,
        max(peaks),
        end,
        0.0 if how == k.TURNED else v,
        max(f - r - spring * x, 0.0) if met else 0.0,
        how,
    )


def kernel(*case):
    answer = np.empty(k.ANSWERS)
    k.one_case(*case, np.empty((3, k.ORDER)), answer)
    return answer


def cases(count, seed):
    rng = np.random.default_rng(seed)
    for _ in range(count):
        force, mass = rng.uniform(5, 300), 10 ** rng.uniform(-0.5, 1.5)
        stiffness = rng.choice([0.0, 1.0]) * force * rng.uniform(1, 15) + rng.choice([0.0, 200.0])
        yield (
            force,
            rng.choice([0.0, 0.3]) * force,
            rng.choice([0.0, 300.0]),
            mass,
            rng.choice([0.0, 0.05]) * stiffness,
            stiffness,
            rng.uniform(0.02, 0.12),
            1.0 / rng.uniform(0.02, 0.12),
            rng.uniform(0.2, 0.6),
            rng.choice([np.inf, rng.uniform(0.01, 0.15)]),
        )


@pytest.mark.parametrize("case", list(cases(40, 11)))
def test_random_cases(case):
    # both are exact up to rounding; events found by bracketing carry about 1e-13 s
    found, expected = kernel(*case), twin(*case)
    assert found[k.HOW] == expected[5]
    assert found[:5] == pytest.approx(expected[:5], rel=1e-9, abs=1e-11)


def test_a_decay_that_resonates_with_the_limb_needs_no_special_case():
    # (x + b)^2: a critically damped limb whose decay rate is its own double root
    mass, rate = 2.0, 20.0
    case = (80.0, 0.0, 0.0, mass, 2 * mass * rate, mass * rate**2, 0.05, rate, 0.4, np.inf)
    assert kernel(*case)[:5] == pytest.approx(twin(*case)[:5], rel=1e-9)


def test_nothing_drives_and_nothing_is_in_the_way():
    assert kernel(50.0, 60.0, 0.0, 2.0, 10.0, 300.0, 0.05, 16.0, 0.5, 0.1)[k.HOW] == k.TURNED
    touching = kernel(50.0, 10.0, 0.0, 2.0, 10.0, 300.0, 0.05, 16.0, 0.5, 0.0)
    assert touching[k.HOW] == k.MET
    assert (touching[k.SPEED], touching[k.PRESS]) == (0.0, 40.0)


def test_sampled_motion_is_the_twin_past_its_turn():
    hold, fade = matrix(2.0, 40.0, 900.0, 0.0), matrix(2.0, 40.0, 900.0, 16.0)
    start = np.array([0.0, 0.0, 100.0, 10.0])
    times = np.array([0.0, 0.02, 0.05, 0.0501, 0.2, 0.9])
    found = np.empty((6, 3))
    k.sampled(times, 100.0, 10.0, 2.0, 40.0, 900.0, 0.05, 16.0, found)
    for t, row in zip(times, found, strict=True):
        state = expm(fade * max(t - 0.05, 0.0)) @ expm(hold * min(t, 0.05)) @ start
        assert row == pytest.approx(state[:3], rel=1e-10, abs=1e-12)


def test_all_cases_is_one_case_each_with_stiffness_from_force():
    rng = np.random.default_rng(4)
    force, arm = rng.uniform(20, 200, (3, 2)), rng.uniform(1, 4, (3, 2))
    zero, fixed, ahead = np.zeros((3, 2)), np.full((3, 2), 0.4), np.full((3, 2), np.inf)
    muscle = np.array([[0.05, 0.07], [15.0, 20.0], [9.0, 4.0], [0.05, 0.04], [50.0, 0.0], [1.0, 1.2], [0.5, 0.4]])
    answers = np.empty((3, 2, 2, k.ANSWERS))
    k.all_cases(force, zero, zero, arm, fixed, ahead, muscle, answers)
    for i, j, s in np.ndindex(3, 2, 2):
        latency, decay, per_n, damping, relaxed, factor, watched = muscle[:, s]
        stiffness = per_n * force[i, j] + relaxed
        mass = factor * arm[i, j] + 0.4
        case = (force[i, j], 0.0, 0.0, mass, damping * stiffness, stiffness, latency, decay, watched, np.inf)
        assert answers[i, j, s, :5] == pytest.approx(twin(*case)[:5], rel=1e-9)
