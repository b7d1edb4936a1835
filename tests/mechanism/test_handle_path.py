"""Measured handle paths: arc length, tangent, force, and what is refused."""

import numpy as np
import pytest

from ergo.errors import StudyError
from ergo.mechanism.drive import path_drive
from ergo.mechanism.handle_path import MeasuredPath

STROKE = np.linspace(0.0, 1.0, 21)


def quarter_circle(count=31, radius=0.2):
    a = np.linspace(0.0, np.pi / 2, count)
    points = np.stack([np.full(count, 0.1), -radius * np.sin(a), 0.9 + radius * np.cos(a)], axis=1)
    return MeasuredPath(points, 50.0 + 100.0 * np.linspace(0.0, 1.0, count))


def test_a_straight_path_is_exact():
    path = MeasuredPath(
        np.array([[0.0, 0.0, 1.0], [0.0, -0.1, 1.0], [0.0, -0.3, 1.0]]), np.array([10.0, 20.0, 40.0])
    )
    along = path.along(STROKE)
    np.testing.assert_allclose(along.grip_m[:, 1], -0.3 * STROKE, atol=1e-12)
    np.testing.assert_allclose(along.work_dir, np.tile((0.0, -1.0, 0.0), (21, 1)), atol=1e-12)
    np.testing.assert_allclose(path.force_along_n(STROKE), 10.0 + 30.0 * STROKE, atol=1e-9)
    np.testing.assert_allclose(along.lever_dir, np.tile((0.0, 0.0, 1.0), (21, 1)), atol=1e-12)


def test_a_quarter_circle_in_points_gives_the_circles_length_and_tangent():
    along = quarter_circle().along(STROKE)
    # points 3 degrees apart: a local cubic misses the arc by well under 1e-4 of its length
    assert along.hand_travel_m[-1] == pytest.approx(0.2 * np.pi / 2, rel=1e-4)
    a = STROKE * np.pi / 2
    tangent = np.stack([0 * a, -np.cos(a), -np.sin(a)], axis=1)
    # three-point slopes are off by a third of the spacing squared at the ends, (3 deg)^2 / 3 = 9e-4
    np.testing.assert_allclose(along.work_dir, tangent, atol=1e-3)


def test_force_is_read_over_arc_length_not_over_row_numbers():
    a = np.pi / 2 * np.array([0.0, 0.02, 0.05, 0.1, 0.2, 0.35, 0.5, 0.75, 1.0])
    points = np.stack([0 * a, -0.2 * np.sin(a), 0.2 * np.cos(a)], axis=1)
    path = MeasuredPath(points, 100.0 * a)
    # force rises with the angle, so with the arc; the widest gap is 22 degrees, hence the tolerance
    np.testing.assert_allclose(path.force_along_n(STROKE), 100.0 * STROKE * np.pi / 2, atol=0.5)


def test_the_drive_of_a_measured_path_is_its_force_and_says_what_is_unknown():
    measured = quarter_circle()
    drive = path_drive(measured, measured.along(STROKE, "bar", 0.2))
    np.testing.assert_allclose(drive.demand_n[[0, -1]], [50.0, 150.0], atol=1e-9)
    assert np.isnan(drive.lever_rad).all()
    assert "there is no lever angle" in drive.notes[0]
    np.testing.assert_allclose(np.linalg.norm(drive.grip_axis, axis=1), 1.0, atol=1e-12)
    np.testing.assert_allclose(np.sum(drive.lever_dir * drive.work_dir, axis=1), 0.0, atol=1e-12)


def test_an_upright_path_takes_the_direction_toward_the_operator_as_reference():
    path = MeasuredPath(np.array([[0.0, 0.0, 1.2], [0.0, 0.0, 0.9]]), np.array([10.0, 10.0]))
    along = path.along(STROKE, "crossbar")
    np.testing.assert_allclose(along.lever_dir, np.tile((0.0, -1.0, 0.0), (21, 1)), atol=1e-12)
    np.testing.assert_allclose(np.abs(along.grip_axis @ (1.0, 0.0, 0.0)), 1.0, atol=1e-12)


@pytest.mark.parametrize(
    ("points", "force", "words"),
    [
        ([[0.0, 0.0, 1.0]], [1.0], "at least two rows"),
        ([[0.0, 0.0, 1.0], [0.0, 0.0, 1.0]], [1.0, 2.0], "points 1 and 2 are the same place"),
        ([[0.0, 0.0, 1.0], [0.0, np.nan, 1.1]], [1.0, 2.0], "not a finite number"),
    ],
)
def test_points_that_make_no_path_are_refused(points, force, words):
    with pytest.raises(StudyError, match=words):
        MeasuredPath(np.array(points), np.array(force)).along(STROKE)
