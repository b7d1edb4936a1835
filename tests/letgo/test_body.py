"""Balance after let-go: moments before it, who keeps, steps or is thrown, contacts, room, what is not covered."""

import dataclasses

import numpy as np
import pytest

from ergo.datasets import library
from ergo.errors import DataError
from ergo.frames import GRAVITY_M_S2
from ergo.letgo import body
from ergo.letgo.body import Recovery, Surroundings, balance, pressure_point_m

LIB = library()
SHIPPED = Recovery.from_library(LIB)
NOMINAL = Recovery.from_library(LIB, scenarios=1)
MASS, HEIGHT, QUIET = 75.0, 0.90, 0.05
FEET = Surroundings(back_m=-0.03, front_m=0.15)


def stand(force_n, around=FEET, recovery=NOMINAL, age=35.0, hand_height=1.1, pressure=QUIET):
    """A body that leans so that the floor presses at `pressure` while the hand pushes with `force_n`."""
    forces = np.atleast_1d(np.asarray(force_n, dtype=float))
    com = np.atleast_2d(pressure + forces * hand_height / (MASS * GRAVITY_M_S2))
    return balance(com, HEIGHT, MASS, age, 0.4, hand_height, forces, 0.0, around, recovery)


def words(found):
    return [body.OUTCOME_WORDS[code] for code in found.outcome[0, :, 0]]


def test_pressure_point_balances_the_moments():
    # moments about the heel: weight x y - Fy x height + Fz x hand y = (weight + Fz) x p, in round numbers
    p = pressure_point_m(0.10, 100.0, 0.5, 1.2, 50.0, -20.0)
    weight = 100.0 * GRAVITY_M_S2
    assert weight * 0.10 - 50.0 * 1.2 - 20.0 * 0.5 - (weight - 20.0) * p == pytest.approx(0.0, abs=1e-9)
    assert pressure_point_m(0.1, 50.0, 0.5, 1.2, 0.0, -500.0) == np.inf


def test_the_lean_that_carries_a_push_is_forward_and_that_of_a_pull_backward():
    push, pull = stand(60.0), stand(-60.0)
    assert push.pressure_m[0, 0] == pytest.approx(QUIET, abs=1e-12)
    assert push.toward.all()
    assert not pull.toward.any()


def test_small_forces_keep_larger_step_and_still_larger_throw():
    assert words(stand([10.0, 80.0, 260.0])) == ["kept", "step", "thrown"]
    assert words(stand([-10.0, -100.0, -400.0])) == ["kept", "step", "thrown"]


def test_an_older_operator_is_thrown_where_a_younger_one_steps():
    younger, older = stand([100.0, 125.0, 160.0]), stand([100.0, 125.0, 160.0], age=70.0)
    # by hand, w = 3.05 /s: 0.05 + d exp(w 0.1) - 0.15 <= (0.9 sin lean - 0.15) exp(w 0.1) ends at d = 0.202 m
    # (135 N) with 18 degrees and at d = 0.175 m (117 N) with 16.2
    assert words(younger) == ["step", "step", "thrown"]
    assert words(older) == ["step", "thrown", "thrown"]


def test_seated_operators_cannot_step():
    assert words(stand(80.0, dataclasses.replace(FEET, can_step=False))) == ["thrown"]


def test_a_bench_in_front_leaves_no_room_for_the_step():
    free, shut = stand(80.0), stand(80.0, dataclasses.replace(FEET, room_ahead_m=0.05))
    assert words(free) == ["step"]
    assert words(shut) == ["thrown"]
    assert shut.no_room.all()
    assert not free.no_room.any()
    roomy = stand(80.0, dataclasses.replace(FEET, room_ahead_m=free.needed_step_m[0, 0, 0] + 1e-9))
    assert words(roomy) == ["step"]


def test_free_floor_behind_matters_to_a_pull_only():
    shut = dataclasses.replace(FEET, room_behind_m=0.02)
    assert words(stand(-80.0, shut)) == ["thrown"]
    assert words(stand(80.0, shut)) == ["step"]


def test_a_bench_edge_leant_on_carries_the_pull_and_holds_the_body():
    # standing upright, braced at the front, pulling hard: without the brace the stance could not have held it
    upright = np.array([[0.08]])
    given = (HEIGHT, MASS, 35.0, 0.4, 1.1, -250.0, 0.0)
    free = balance(upright, *given, FEET, NOMINAL)
    braced = balance(upright, *given, dataclasses.replace(FEET, held_ahead=True), NOMINAL)
    assert words(free) == [body.OUTCOME_WORDS[body.NOT_COVERED]]
    assert words(braced) == ["kept"]


def test_a_seat_back_carries_the_push():
    upright, given = np.array([[0.08]]), (HEIGHT, MASS, 35.0, 0.4, 1.1, 250.0, 0.0)
    braced = balance(upright, *given, dataclasses.replace(FEET, held_behind=True), NOMINAL)
    assert words(braced) == ["kept"]
    assert words(balance(upright, *given, FEET, NOMINAL)) == [body.OUTCOME_WORDS[body.NOT_COVERED]]


def test_the_bench_edge_is_met_with_the_speed_of_the_falling_pendulum():
    found = stand(120.0, dataclasses.replace(FEET, bench_gap_m=0.005))
    # met before the latency: y'^2 = w^2 ((y - p)^2 - (y0 - p)^2)
    off = 120.0 * 1.1 / (MASS * GRAVITY_M_S2)
    rate2 = GRAVITY_M_S2 / (HEIGHT * NOMINAL.pendulum_factor[0])
    assert found.bench_speed_m_s[0, 0, 0] == pytest.approx(np.sqrt(rate2 * ((off + 0.005) ** 2 - off**2)), rel=1e-9)
    far = stand([8.0, 120.0], dataclasses.replace(FEET, bench_gap_m=0.30))
    assert np.isnan(far.bench_speed_m_s[0, 0, 0])  # kept: never gets there
    assert far.bench_speed_m_s[0, 1, 0] > found.bench_speed_m_s[0, 0, 0]
    assert np.isnan(stand(-120.0, dataclasses.replace(FEET, bench_gap_m=0.01)).bench_speed_m_s).all()


def test_no_posture_or_a_stance_that_could_not_hold_is_not_covered():
    com = np.array([[0.05, np.nan, 0.05]])
    found = balance(com, HEIGHT, MASS, 35.0, 0.4, 1.1, [0.0, 0.0, 300.0], 0.0, FEET, NOMINAL)
    assert found.outcome[0, :, 0].tolist() == [body.KEPT, body.NOT_COVERED, body.NOT_COVERED]
    shares = found.shares()
    assert shares["kept"].tolist() == [1.0, 0.0, 0.0]
    assert sum(shares.values()).tolist() == [1.0, 0.0, 0.0]


def test_operators_and_positions_stay_apart_where_they_are_equally_many():
    forces, masses = np.array([30.0, 90.0]), np.array([50.0, 100.0])
    com = QUIET + forces * 1.1 / (masses[:, None] * GRAVITY_M_S2)
    found = balance(com, [0.85, 0.95], masses, [30.0, 30.0], 0.4, 1.1, forces, 0.0, FEET, NOMINAL)
    for i, j in np.ndindex(2, 2):
        one = balance(
            com[i : i + 1, j : j + 1], [0.85, 0.95][i], masses[i], 30.0, 0.4, 1.1, forces[j], 0.0, FEET, NOMINAL
        )
        assert found.extrapolated_m[i, j, 0] == pytest.approx(one.extrapolated_m[0, 0, 0], rel=1e-12)


def test_shares_add_up_and_toward_is_a_part_of_them():
    found = stand(np.linspace(-200.0, 200.0, 9), recovery=SHIPPED)
    shares, toward = found.shares(), found.shares_toward()
    assert sum(shares.values()) == pytest.approx(np.ones(9), rel=1e-12)
    for name, share in shares.items():
        assert (toward[name] <= share + 1e-12).all()
    assert sum(toward.values())[:4] == pytest.approx(np.zeros(4))
    assert sum(toward.values())[5:] == pytest.approx(np.ones(4))


def test_every_named_row_is_there_and_a_missing_latency_is_one_sentence():
    rows = LIB.parameters(body.TABLE)
    assert {name for _, name in body.parameter_names()} == set(rows)
    with pytest.raises(DataError, match="no value or range for postural_latency_s, so whether"):
        Recovery.from_library(LIB.with_value(body.TABLE, "postural_latency_s", float("nan")))
    held = Recovery.from_library(LIB.with_value(body.TABLE, "postural_latency_s", 0.3))
    assert (held.latency_s == 0.3).all()
