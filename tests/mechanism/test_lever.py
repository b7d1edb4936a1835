"""Lever and grip: directions, weight about any axis, inertia, grip axes."""

import numpy as np
import pytest

from ergo.errors import StudyError
from ergo.frames import GRAVITY_M_S2
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever

STROKE = np.linspace(0.0, 1.0, 11)


def lever(**changes):
    given = {
        "pivot_m": (0.1, 0.2, 0.9),
        "axis": "sideways",
        "length_m": 0.25,
        "start_rad": -0.5,
        "end_rad": 1.0,
        "mass_kg": 0.8,
    }
    return Lever(**{**given, **changes})


@pytest.mark.parametrize(
    ("axis", "towards"),
    [("sideways", (0, -1, 0)), ("fore-aft", (1, 0, 0))],
)
def test_a_positive_angle_turns_the_handle_toward_the_operator_or_to_the_right(axis, towards):
    path = handle_path(lever(axis=axis, start_rad=0.0, end_rad=np.pi / 2), Grip(), STROKE)
    np.testing.assert_allclose(path.grip_m[0], (0.1, 0.2, 1.15), atol=1e-15)
    np.testing.assert_allclose(
        path.grip_m[-1], np.add((0.1, 0.2, 0.9), np.multiply(0.25, towards)), atol=1e-15
    )
    np.testing.assert_allclose(path.work_dir[0], towards, atol=1e-15)


def test_an_upright_axis_starts_toward_the_operator_and_turns_counter_clockwise_from_above():
    path = handle_path(lever(axis="upright", start_rad=0.0, end_rad=np.pi / 2), Grip(), STROKE)
    np.testing.assert_allclose(path.grip_m[0], (0.1, -0.05, 0.9), atol=1e-15)
    np.testing.assert_allclose(path.grip_m[-1], (0.35, 0.2, 0.9), atol=1e-15)


def test_work_dir_is_the_tangent_of_the_path_whichever_way_the_stroke_runs():
    for start, end in ((-0.5, 1.0), (1.0, -0.5)):
        lv = lever(start_rad=start, end_rad=end, axis=(1.0, 0.4, -0.3))
        h = 1e-6
        ahead = handle_path(lv, Grip(offset_m=0.03), STROKE + h)
        behind = handle_path(lv, Grip(offset_m=0.03), STROKE - h)
        step = ahead.grip_m - behind.grip_m
        tangent = step / np.linalg.norm(step, axis=1, keepdims=True)
        # central differences of a smooth curve: error of the order h^2 and rounding / h
        np.testing.assert_allclose(handle_path(lv, Grip(), STROKE).work_dir, tangent, atol=1e-9)


def test_hand_travel_is_the_arc_and_does_not_depend_on_the_grips_offset():
    path = handle_path(lever(), Grip(offset_m=0.05), STROKE)
    np.testing.assert_allclose(path.hand_travel_m, 0.25 * 1.5 * STROKE, atol=1e-15)
    np.testing.assert_allclose(path.grip_m[:, 0], 0.15, atol=1e-15)


@pytest.mark.parametrize("axis", ["sideways", "fore-aft", "upright", (1.0, 2.0, -0.5)])
@pytest.mark.parametrize("balance", [None, 0.2, -0.05])
def test_weight_torque_is_the_slope_of_the_potential_energy_about_any_axis(axis, balance):
    lv = lever(axis=axis, balance_m=balance)
    a = lv.angles_rad(STROKE)
    h = 1e-5

    def energy(angle):
        return 0.8 * GRAVITY_M_S2 * lv.balance_point_m * lv.direction(angle)[:, 2]

    slope = (energy(a + h) - energy(a - h)) / (2 * h)
    # central differences: error about h^2 / 6 of a value of the order of 1 N m
    np.testing.assert_allclose(lv.weight_torque_nm(a), -slope, atol=1e-9)


def test_inertia_is_a_rods_and_moves_with_the_balance_point():
    assert lever(mass_kg=1.2).inertia_kg_m2() == pytest.approx(1.2 * 0.25**2 / 3, rel=1e-14)
    assert lever(mass_kg=1.2).hand_mass_kg() == pytest.approx(0.4, rel=1e-14)
    assert lever(mass_kg=1.2, balance_m=0.0).inertia_kg_m2() == pytest.approx(1.2 * 0.25**2 / 12, rel=1e-14)


def test_grip_axes_a_bar_along_the_lever_a_crossbar_along_the_pivot():
    lv = lever(start_rad=0.0, end_rad=1.0)
    tilt = np.deg2rad(20.0)
    bar = handle_path(lv, Grip("bar"), STROKE)
    np.testing.assert_allclose(bar.grip_axis, bar.lever_dir, atol=1e-15)
    tilted = handle_path(lv, Grip("bar", tilt), STROKE)
    np.testing.assert_allclose(tilted.grip_axis[0], (0.0, -np.sin(tilt), np.cos(tilt)), atol=1e-15)
    cross = handle_path(lv, Grip("crossbar"), STROKE)
    np.testing.assert_allclose(cross.grip_axis, np.tile((1.0, 0.0, 0.0), (11, 1)), atol=1e-15)
    leaning = handle_path(lv, Grip("crossbar", tilt), STROKE)
    np.testing.assert_allclose(leaning.grip_axis[0], (np.cos(tilt), 0.0, np.sin(tilt)), atol=1e-15)
    for path in (bar, tilted, cross, leaning):
        np.testing.assert_allclose(np.linalg.norm(path.grip_axis, axis=1), 1.0, atol=1e-14)


def test_a_lever_without_length_or_stroke_is_refused_with_both_problems():
    with pytest.raises(StudyError) as caught:
        handle_path(lever(length_m=0.0, start_rad=0.3, end_rad=0.3), Grip(), STROKE)
    assert [p.where for p in caught.value.problems] == ["lever.length_mm", "lever.end_deg"]
    assert "the stroke is zero" in str(caught.value)
