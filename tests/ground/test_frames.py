"""The station frame: directions of the lever by the rule of the frame, written out by hand."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from ergo.frames import lever_direction, m_to_mm, mm_to_m, pivot_axis, rotate, unit, zero_direction

UP, AWAY, RIGHT = np.array([0.0, 0.0, 1.0]), np.array([0.0, 1.0, 0.0]), np.array([1.0, 0.0, 0.0])


@pytest.mark.parametrize(
    ("axis", "at_zero", "at_quarter"),
    [
        ("sideways", UP, -AWAY),  # positive turns the handle toward the operator
        ("fore-aft", UP, RIGHT),  # to the right
        ("upright", -AWAY, RIGHT),  # counter-clockwise seen from above, starting toward the operator
    ],
)
def test_lever_angles_of_the_named_axes(axis, at_zero, at_quarter):
    directions = lever_direction(pivot_axis(axis), np.deg2rad([0.0, 90.0]))
    assert directions == pytest.approx(np.array([at_zero, at_quarter]), abs=1e-12)


def test_thirty_degrees_toward_the_operator():
    direction = lever_direction(pivot_axis("sideways"), np.deg2rad(30.0))
    assert direction == pytest.approx([0.0, -0.5, np.sqrt(0.75)], abs=1e-12)  # sin toward, cos up


vectors = st.tuples(*[st.floats(-5, 5)] * 3).map(np.array).filter(lambda v: np.linalg.norm(v) > 1e-3)


@given(axis=vectors, angle=st.floats(-7, 7))
def test_a_lever_stays_square_to_any_axis_and_as_long(axis, angle):
    direction = lever_direction(axis, angle)
    assert abs(direction @ unit(axis)) < 1e-9
    assert np.linalg.norm(direction) == pytest.approx(1.0)
    assert direction @ zero_direction(axis) == pytest.approx(np.cos(angle), abs=1e-9)


@given(vector=vectors, axis=vectors, angle=st.floats(-7, 7))
def test_turning_there_and_back_ends_where_it_began(vector, axis, angle):
    n = unit(axis)
    assert rotate(rotate(vector, n, angle), n, -angle) == pytest.approx(vector, abs=1e-9)


def test_a_vector_without_length_is_refused():
    with pytest.raises(ValueError, match="no direction"):
        unit([0.0, 0.0, 0.0])


def test_millimetres_and_metres():
    assert mm_to_m(1250.0) == pytest.approx(1.25)
    assert m_to_mm([0.1, 2.0]) == pytest.approx([100.0, 2000.0])
