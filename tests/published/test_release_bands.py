"""Sudden release in people: published figures as bands. A band is not a validation; it says the order is right."""

import numpy as np
import pytest

from ergo.arm.inertia import hand_mass_along
from ergo.arm.segments import Segments
from ergo.datasets import library
from ergo.frames import GRAVITY_M_S2
from ergo.letgo import body, hand

LIB = library()
BANDS = LIB.parameters("letgo_bands")
MUSCLE = hand.Muscle.from_library(LIB, scenarios=64)
SHIPPED = hand.Muscle.from_library(LIB, scenarios=1)
RECOVERY = body.Recovery.from_library(LIB, scenarios=1)


def overlaps(low, high, row):
    return low <= row.high and high >= row.low


def test_run_on_at_100_n_overlaps_its_band_but_its_middle_lies_below():
    # the band of 0.1 to 0.3 m is itself a design figure; the model's middle lies under it, as the published
    # muscle stiffness takes the force away sooner: told in the notes, not tuned away
    run = hand.run_on([100.0], np.full((1, 1), 1.5), MUSCLE)
    low, middle, high = run.band(run.overrun_m)[:, 0]
    assert overlaps(low, high, BANDS["run_on_at_100_n_m"])
    assert 0.05 < middle < BANDS["run_on_at_100_n_m"].low
    held = 100.0 * BANDS["uncorrected_s"].value ** 2 / (2.0 * 1.5)
    assert high < held  # less than a force that never falls would give in the first 120 ms


def test_hand_stiffness_lies_between_relaxed_and_co_contracted():
    forces = np.array([5.0, 20.0, 50.0, 100.0])
    stiffness = SHIPPED.stiffness_n_per_m(forces)[:, 0]
    assert stiffness.min() >= BANDS["relaxed_hand_stiffness_n_per_m"].low
    assert stiffness.max() <= BANDS["stiff_hand_stiffness_n_per_m"].high


def test_hand_damping_is_in_its_band_up_to_about_80_n():
    # above that the published ratio of damping to stiffness leaves the recalled band of 10 to 40 N s/m
    damping = SHIPPED.damping_ns_per_m([20.0, 50.0, 80.0])[:, 0]
    assert damping.min() >= BANDS["hand_damping_ns_per_m"].low
    assert damping.max() <= BANDS["hand_damping_ns_per_m"].high
    assert SHIPPED.damping_ns_per_m(120.0)[0] > BANDS["hand_damping_ns_per_m"].high


@pytest.mark.parametrize("elbow_deg", [60.0, 90.0, 120.0])
def test_effective_mass_of_an_average_arm_over_mid_range_elbows(elbow_deg):
    arm = Segments.from_library(LIB).arm(False, 75.0, 0.34, 0.065)
    upper, lower, half = 0.30, 0.34, np.radians(elbow_deg)
    span = np.sqrt(upper**2 + lower**2 - 2 * upper * lower * np.cos(half))
    first = np.arccos((upper**2 + span**2 - lower**2) / (2 * upper * span))
    elbow = upper * np.array([np.cos(first), 0.0, -np.sin(first)])
    along = hand_mass_along(np.zeros(3), elbow, [span, 0.0, 0.0], [1.0, 0.0, 0.0], arm)
    across = hand_mass_along(np.zeros(3), elbow, [span, 0.0, 0.0], [0.0, 0.0, 1.0], arm)
    for mass in (along, across):
        # the band of 0.8 to 2.0 kg with the spread that the arm's mass factor allows
        assert overlaps(0.8 * mass, 1.3 * mass, BANDS["hand_mass_kg"])


def test_lean_and_release_at_23_per_cent_of_body_weight_is_about_18_degrees():
    # a cable at 1.25 m that carries that lean leaves the pressure between heel and toes, near the ankle
    height, mass = 0.92, 70.0
    com = height * np.sin(np.radians(BANDS["lean_cable_deg"].value))
    pull = -BANDS["lean_cable_share"].value * mass * GRAVITY_M_S2
    p = body.pressure_point_m(com, mass, 0.3, 1.25, -pull, 0.0)
    assert -0.03 < p < 0.15


def test_young_people_released_from_18_degrees_take_one_step_and_do_not_stand():
    height, mass = 0.92, 70.0
    com = height * np.sin(np.radians(18.0))
    around = body.Surroundings(back_m=-0.03, front_m=0.15)
    # the cable holds the body as a push of the hand would: it leaves the pressure at the front of the base
    force = (com - 0.15) * mass * GRAVITY_M_S2 / 1.25
    young = body.balance([[com]], height, mass, 25.0, 0.3, 1.25, force, 0.0, around, RECOVERY)
    assert young.outcome[0, 0, 0] == body.STEP
    farther = body.balance([[com + 0.2]], height, mass, 25.0, 0.3, 1.25,
                           (com + 0.05) * mass * GRAVITY_M_S2 / 1.25, 0.0, around, RECOVERY)  # fmt: skip
    assert farther.outcome[0, 0, 0] == body.THROWN


@pytest.mark.parametrize(("shift", "front"), [("no_step_shift_young_m", 0.15), ("no_step_shift_older_m", 0.135)])
def test_platform_shifts_recovered_without_a_step_are_near_the_front_of_the_base(shift, front):
    # the feet are moved back under a standing body, so its centre of mass ends ahead of them by the shift; from
    # the quiet point 0.05 m ahead of the ankle the base ends 0.085 to 0.10 m further on. People recover from
    # shifts up to twice that by bending at the hips, which the model leaves out: it errs on the safe side
    way = front - 0.05
    assert way < BANDS[shift].low
    assert BANDS[shift].value < 2.0 * way
