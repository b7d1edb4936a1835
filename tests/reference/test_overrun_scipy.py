"""The overrun against SciPy's initial value solver, with every term of its equation at work."""

import numpy as np
import pytest
from scipy.integrate import solve_ivp

from ergo.datasets import library
from ergo.letgo import hand

MUSCLE = hand.Muscle.from_library(library(), scenarios=5)
# solve_ivp is run to 1e-11 relative; its event finder and its peak, read from dense output, carry about 1e-8.
TOLERANCE = 1e-7


def solved(s, force, arm, fixed, left, left_rate, ahead):
    mass = MUSCLE.mass_factor[s] * arm + fixed
    stiffness = MUSCLE.stiffness_n_per_m(force)[s]
    damping, latency = MUSCLE.damping_ns_per_m(force)[s], MUSCLE.latency_s[s]

    def rates(t, state):
        x, v, _ = state
        drive = force if t <= latency else force * np.exp(-(t - latency) / MUSCLE.relaxation_s[s])
        return [v, (drive - left - (stiffness + left_rate) * x - damping * v) / mass, drive * v]

    def turned(t, state):
        return state[1] if t > 1e-6 else 1.0

    def met(_, state):
        return state[0] - ahead

    turned.terminal = met.terminal = True
    turned.direction = -1.0
    span, start, pieces = (0.0, latency), [0.0, 0.0, 0.0], []
    for span in ((0.0, latency), (latency, MUSCLE.watched_s[s])):
        piece = solve_ivp(
            rates,
            span,
            start,
            method="DOP853",
            rtol=1e-11,
            atol=1e-13,
            events=[turned, met],
            dense_output=True,
        )
        pieces.append(piece)
        start = piece.y[:, -1]
        if piece.status == 1:
            break
    fine = np.concatenate([p.sol(np.linspace(p.t[0], p.t[-1], 20001))[1] for p in pieces])
    last = pieces[-1]
    return last.y[0, -1], fine.max(), last.t[-1], last.y[1, -1], last.y[2, -1], mass


@pytest.mark.parametrize("seed", range(6))
def test_overrun_speed_time_and_energy(seed):
    rng = np.random.default_rng(seed)
    force, arm, fixed = rng.uniform(20, 250), rng.uniform(0.8, 6), rng.uniform(0.0, 2.0)
    left, left_rate = rng.uniform(0, 0.3) * force, rng.uniform(0, 150)
    ahead = [np.inf, 0.03, 0.06][seed % 3]
    run = hand.run_on(
        [force],
        np.full((1, 1), arm),
        MUSCLE,
        fixed_mass_kg=fixed,
        remaining_n=left,
        remaining_n_per_m=left_rate,
        zone_m=ahead,
    )
    for s in range(5):
        x, peak, time, speed, work, mass = solved(s, force, arm, fixed, left, left_rate, ahead)
        assert run.overrun_m[0, 0, s] == pytest.approx(x, rel=TOLERANCE)
        assert run.peak_speed_m_s[0, 0, s] == pytest.approx(peak, rel=TOLERANCE)
        assert run.time_s[0, 0, s] == pytest.approx(time, rel=TOLERANCE)
        hit = run.met[0, 0, s] == hand.ZONE
        assert run.energy_j[0, 0, s] == pytest.approx(0.5 * mass * speed**2 if hit else 0.0, rel=1e-6)
        assert work > 0.0
