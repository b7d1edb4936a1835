"""Hand overrun: closed forms, what is met first, ranges, and what is not covered."""

import dataclasses

import numpy as np
import pytest

from ergo.datasets import Library, library
from ergo.errors import DataError
from ergo.letgo import hand
from ergo.letgo.hand import Muscle, run_on

LIB = library()
NEVER = np.array([1e9])
# A limb without stiffness or damping whose force holds for good: what is left is a constant force.
BARE = Muscle(
    latency_s=NEVER,
    relaxation_s=np.array([0.05]),
    stiffness_per_m=np.array([0.0]),
    damping_time_s=np.array([0.0]),
    relaxed_n_per_m=np.array([0.0]),
    mass_factor=np.array([1.0]),
    watched_s=np.array([10.0]),
)
SHIPPED = Muscle.from_library(LIB)
ONE = np.ones((1, 1))


def only(run, name):
    values = getattr(run, name)
    assert values.shape == (1, 1, 1)
    return float(values[0, 0, 0])


@pytest.mark.parametrize(("force", "mass", "way"), [(100.0, 2.0, 0.1), (35.0, 5.0, 0.4)])
def test_constant_force_to_the_end_of_travel(force, mass, way):
    # v = sqrt(2 F s / m), t = sqrt(2 m s / F), E = F s
    run = run_on([force], mass * ONE, BARE, end_m=way)
    assert only(run, "met") == hand.END_OF_TRAVEL
    assert only(run, "speed_m_s") == pytest.approx(np.sqrt(2 * force * way / mass), rel=1e-12)
    assert only(run, "time_s") == pytest.approx(np.sqrt(2 * mass * way / force), rel=1e-12)
    assert only(run, "energy_j") == pytest.approx(force * way, rel=1e-12)
    assert only(run, "press_n") == pytest.approx(force, rel=1e-12)
    assert only(run, "overrun_m") == way


def test_the_travel_under_a_constant_100_n_in_120_ms():
    # design figure of the forearm unloading study: 100 N on 1.5 kg for 120 ms, s = F t^2 / (2 m) = 0.48 m
    short = dataclasses.replace(BARE, watched_s=np.array([0.12]))
    run = run_on([100.0], 1.5 * ONE, short)
    assert only(run, "overrun_m") == pytest.approx(0.48, rel=1e-12)
    assert run.moving_on.all()
    assert only(run, "met") == hand.NOTHING


def test_a_spring_turns_after_half_a_swing_at_twice_its_rest():
    # m x'' = F - K x: turns at x = 2 F / K after pi sqrt(m / K), fastest F / sqrt(K m)
    spring = dataclasses.replace(BARE, relaxed_n_per_m=np.array([800.0]))
    run = run_on([60.0], 1.8 * ONE, spring)
    assert only(run, "overrun_m") == pytest.approx(2 * 60.0 / 800.0, rel=1e-12)
    assert only(run, "time_s") == pytest.approx(np.pi * np.sqrt(1.8 / 800.0), rel=1e-12)
    assert only(run, "peak_speed_m_s") == pytest.approx(60.0 / np.sqrt(800.0 * 1.8), rel=1e-12)


def test_a_return_spring_counts_like_the_limbs_own_stiffness():
    own = run_on([60.0], 1.8 * ONE, dataclasses.replace(BARE, relaxed_n_per_m=np.array([800.0])))
    lever = run_on([60.0], 1.8 * ONE, BARE, remaining_n_per_m=800.0)
    assert only(lever, "overrun_m") == pytest.approx(only(own, "overrun_m"), rel=1e-12)


def test_friction_that_is_left_takes_its_share_of_the_force():
    run = run_on([100.0], 2.0 * ONE, BARE, remaining_n=30.0, end_m=0.1)
    assert only(run, "energy_j") == pytest.approx(70.0 * 0.1, rel=1e-12)
    still = run_on([100.0], 2.0 * ONE, BARE, remaining_n=130.0, end_m=0.1)
    assert only(still, "overrun_m") == 0.0


def test_lever_and_tool_add_to_the_mass_and_the_arms_factor_does_not_scale_them():
    heavy = dataclasses.replace(BARE, mass_factor=np.array([1.5]))
    fixed = 0.6 + hand.tool_mass_at_hand_kg(40.0, 0.1)
    run = run_on([100.0], 2.0 * ONE, heavy, fixed_mass_kg=fixed, end_m=0.1)
    assert only(run, "moving_mass_kg") == pytest.approx(1.5 * 2.0 + 0.6 + 0.4, rel=1e-12)
    assert only(run, "speed_m_s") == pytest.approx(np.sqrt(2 * 100.0 * 0.1 / 4.0), rel=1e-12)


@pytest.mark.parametrize(
    ("end", "zone", "body", "met", "way"),
    [
        (0.05, 0.03, np.inf, hand.ZONE, 0.03),
        (0.05, 0.06, 0.04, hand.OWN_BODY, 0.04),
        (0.02, 0.06, 0.04, hand.END_OF_TRAVEL, 0.02),
        (0.05, np.nan, np.nan, hand.END_OF_TRAVEL, 0.05),
        (np.inf, 0.0, np.inf, hand.ZONE, 0.0),
    ],
)
def test_the_nearest_thing_is_met(end, zone, body, met, way):
    run = run_on([100.0], 2.0 * ONE, BARE, end_m=end, zone_m=zone, body_m=body)
    assert only(run, "met") == met
    assert only(run, "overrun_m") == pytest.approx(way, rel=1e-12)
    assert run.met_shares()[hand.MET_WORDS[met]] == pytest.approx([1.0])


def test_a_thing_beyond_the_turn_is_not_met():
    free = run_on([80.0], 2.0 * ONE, SHIPPED)
    far = run_on([80.0], 2.0 * ONE, SHIPPED, zone_m=2.0)
    assert np.array_equal(free.overrun_m, far.overrun_m)
    assert (far.met == hand.NOTHING).all()
    assert (far.energy_j == 0.0).all()


def test_operators_without_a_posture_are_not_covered_and_do_not_count():
    arm = np.array([[2.0, np.nan], [3.0, np.nan]])
    run = run_on([80.0, 80.0], arm, SHIPPED, end_m=0.01)
    assert (run.met[:, 1] == hand.NOT_COVERED).all()
    assert np.isnan(run.overrun_m[:, 1]).all()
    assert np.isnan(run.energy_j[:, 1]).all()
    band = run.band(run.overrun_m)
    assert band[:, 0] == pytest.approx(0.01)
    assert np.isnan(band[:, 1]).all()
    assert "not covered" in hand.MET_WORDS[hand.NOT_COVERED]


def test_a_straight_arm_whose_shoulder_is_held_goes_nowhere():
    run = run_on([80.0], np.inf * ONE, SHIPPED, fixed_mass_kg=0.5, zone_m=0.01)
    assert (run.met == hand.NOTHING).all()
    for values in (run.overrun_m, run.peak_speed_m_s, run.time_s, run.energy_j):
        assert (values == 0.0).all()


def test_the_band_is_over_chosen_operators_and_scenarios():
    rng = np.random.default_rng(2)
    run = run_on(rng.uniform(40, 200, (30, 3)), rng.uniform(1, 4, (30, 3)), SHIPPED)
    who = np.arange(30) % 2 == 0
    expected = [np.percentile(run.overrun_m[::2, j].ravel(), [5, 50, 95]) for j in range(3)]
    assert run.band(run.overrun_m, who) == pytest.approx(np.transpose(expected), rel=1e-12)
    assert np.isnan(run.band(run.overrun_m, np.zeros(30, dtype=bool))).all()


def test_hand_stiffness_is_muscle_stiffness_through_the_moment_arm():
    # force share: F = Fm r / L; stiffness share: K = Km (r / L)^2; so K / F = Km / Fm x r / L
    values = LIB.values(hand.TABLE)
    share, muscle_force = values["muscle_arm_share"], 100.0 / values["muscle_arm_share"]
    muscle_stiffness = values["stiffness_per_muscle_force_per_m"] * muscle_force
    expected = muscle_stiffness * share**2 + values["relaxed_stiffness_n_per_m"]
    assert SHIPPED.stiffness_n_per_m(100.0)[0] == pytest.approx(expected, rel=1e-12)
    assert SHIPPED.damping_ns_per_m(100.0)[0] == pytest.approx(values["damping_time_s"] * expected, rel=1e-12)


def test_scenarios_start_as_shipped_and_stay_inside_the_rows():
    rows = LIB.parameters(hand.TABLE)
    muscle = Muscle.from_library(LIB, scenarios=16)
    assert muscle.latency_s[0] == rows["reflex_latency_s"].value
    assert muscle.latency_s.min() >= rows["reflex_latency_s"].low
    assert muscle.latency_s.max() <= rows["reflex_latency_s"].high
    assert np.ptp(muscle.relaxation_s[1:]) > 0.7 * (rows["relaxation_s"].high - rows["relaxation_s"].low)
    again = Muscle.from_library(LIB, scenarios=16)
    assert np.array_equal(again.watched_s, muscle.watched_s)


def test_a_changed_row_is_held_in_every_scenario():
    slow = Muscle.from_library(LIB.with_value(hand.TABLE, "reflex_latency_s", 0.2))
    assert (slow.latency_s == 0.2).all()
    assert np.array_equal(slow.relaxation_s, SHIPPED.relaxation_s)


def test_every_named_row_is_there_and_moves_the_result():
    rows = LIB.parameters(hand.TABLE)
    shipped = run_on([100.0], 2.0 * ONE, SHIPPED)
    for table, name in hand.parameter_names():
        assert table == hand.TABLE
        changed = Muscle.from_library(LIB.with_value(table, name, rows[name].low))
        run = run_on([100.0], 2.0 * ONE, changed)
        # at this force the hand has turned long before it is no longer watched; the shoulder acts on arm masses
        if name not in ("watched_s", hand.SHOULDER):
            assert not np.allclose(run.overrun_m, shipped.overrun_m)


class Without(Library):
    """A library in which some rows are missing."""

    def parameters(self, key):
        return {n: r for n, r in super().parameters(key).items() if "latency" not in n and n != "relaxation_s"}


def test_missing_latencies_are_one_sentence():
    with pytest.raises(DataError) as caught:
        Muscle.from_library(Without())
    text = str(caught.value)
    assert text.startswith("table letgo_hand: no value or range for reflex_latency_s, relaxation_s")
    assert "\n" not in text


def test_a_cell_without_a_number_is_missing_too():
    with pytest.raises(DataError, match="no value or range for relaxation_s, so"):
        Muscle.from_library(LIB.with_value(hand.TABLE, "relaxation_s", float("nan")))


def test_the_shoulder_gives_way_with_half_the_body():
    assert hand.shoulder_mass_kg([60.0, 90.0], LIB) == pytest.approx([30.0, 45.0])


def test_headings_and_what_is_left():
    dirs = [[0.0, 0.9, 0.4], [0.1, -0.9, 0.2], [0.0, 0.3, -0.95], [-1.0, 0.0, 0.0]]
    assert hand.heading(dirs) == ("toward the machine", "away from the machine", "down", "to the left")
    assert hand.remaining_n([100.0, 100.0], [10.0, 10.0], [0.0, 0.25]) == pytest.approx([10.0, 32.5])
