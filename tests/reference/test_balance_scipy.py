"""The body's fall after let-go against SciPy's solver: the linear pendulum, and a real one that turns."""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from ergo.datasets import library
from ergo.frames import GRAVITY_M_S2
from ergo.letgo.body import Recovery, Surroundings, balance

NOMINAL = Recovery.from_library(library(), scenarios=1)
MASS, HEIGHT, PRESSURE = 72.0, 0.92, 0.05
PENDULUM = HEIGHT * NOMINAL.pendulum_factor[0]
RATE = np.sqrt(GRAVITY_M_S2 / PENDULUM)


def ours(force, gap=np.inf):
    around = Surroundings(back_m=-0.05, front_m=0.16, bench_gap_m=gap)
    com = PRESSURE + force * 1.1 / (MASS * GRAVITY_M_S2)
    found = balance([[com]], HEIGHT, MASS, 35.0, 0.4, 1.1, force, 0.0, around, NOMINAL)
    return com, found


@pytest.mark.parametrize("force", [-90.0, 30.0, 110.0])
def test_the_linear_pendulum(force):
    com, found = ours(force)
    fall = solve_ivp(
        lambda _, s: [s[1], RATE**2 * (s[0] - PRESSURE)], (0, NOMINAL.latency_s[0]), [com, 0.0], rtol=1e-11, atol=1e-13
    )
    # solver tolerance
    assert found.extrapolated_m[0, 0, 0] == pytest.approx(fall.y[0, -1] + fall.y[1, -1] / RATE, rel=1e-9)


@pytest.mark.parametrize("force", [-90.0, 110.0])
def test_a_body_that_turns_about_the_ankle(force):
    # I a'' = m g h sin a - m g p: its own inertia is m h times the equivalent pendulum; sines instead of arcs
    # and a foot reaction that stays at m g cost 1 % over a tenth of a second
    com, found = ours(force)
    start = np.arcsin(com / HEIGHT)
    inertia = MASS * HEIGHT * PENDULUM
    torque = MASS * GRAVITY_M_S2
    fall = solve_ivp(
        lambda _, s: [s[1], torque * (HEIGHT * np.sin(s[0]) - PRESSURE) / inertia],
        (0, NOMINAL.latency_s[0]),
        [start, 0.0],
        rtol=1e-10,
    )
    y, v = HEIGHT * np.sin(fall.y[0, -1]), HEIGHT * np.cos(fall.y[0, -1]) * fall.y[1, -1]
    assert found.extrapolated_m[0, 0, 0] == pytest.approx(y + v / RATE, rel=0.01)


@pytest.mark.parametrize("gap", [0.004, 0.03, 0.20])
def test_speed_at_the_bench_edge_in_both_phases(gap):
    com, found = ours(110.0, gap)
    latency = NOMINAL.latency_s[0]

    def rates(t, s):
        return [s[1], RATE**2 * (s[0] - (PRESSURE if t <= latency else 0.16))]

    def edge(_, s):
        return s[0] - com - gap

    edge.terminal = True
    start = [com, 0.0]
    for span in ((0.0, latency), (latency, 2.0)):
        fall = solve_ivp(rates, span, start, events=edge, rtol=1e-11, atol=1e-13, method="DOP853")
        start = fall.y[:, -1]
        if fall.status == 1:
            break
    assert fall.status == 1
    assert found.bench_speed_m_s[0, 0, 0] == pytest.approx(start[1], rel=1e-8)
