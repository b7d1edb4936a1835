"""Views and scales, against points placed by hand."""

import numpy as np
import pytest

from ergo.pictures.projection import (
    FRONT,
    PLAN,
    PLAN_FRONT,
    SIDE,
    Extent,
    Frame,
    laid,
    lever_views,
    scale_for,
)

POINT = np.array([100.0, 250.0, 1100.0])  # right, away, up


@pytest.mark.parametrize(
    ("view", "flat"),
    [(SIDE, (250, 1100)), (PLAN, (250, -100)), (FRONT, (100, 1100)), (PLAN_FRONT, (100, 250))],
)
def test_each_view_lays_the_station_axes_as_a_drawing_office_does(view, flat):
    assert view.flat(POINT) == pytest.approx(flat)


@pytest.mark.parametrize(
    ("view", "toward"),
    [(SIDE, (1, 0, 0)), (PLAN, (0, 0, 1)), (FRONT, (0, -1, 0)), (PLAN_FRONT, (0, 0, 1))],
)
def test_the_reader_looks_from_where_the_view_says(view, toward):
    assert view.toward_reader == pytest.approx(toward)


@pytest.mark.parametrize(
    ("axis", "first"),
    [("sideways", SIDE), ("fore-aft", FRONT), ("upright", PLAN), ((0.9, 0.1, 0.1), SIDE)],
)
def test_the_first_view_shows_the_lever_in_true_length(axis, first):
    view, other = lever_views(axis)
    assert view is first
    assert other is not first


def test_a_quarter_millimetre_a_unit_at_the_scale():
    frame = Frame(SIDE, 5.0, (100.0, 500.0))
    # 250 mm at 1 : 5 are 50 mm on paper, 200 units; 1100 mm are 220 mm, 880 units, upward.
    assert frame.at(POINT) == pytest.approx([300.0, -380.0])
    assert frame.back(frame.at(POINT)) == pytest.approx(SIDE.flat(POINT))


def test_the_scale_is_the_largest_that_fits():
    # 800 mm in 400 units (100 mm of paper) need 1 : 8, and 1 : 10 is the next scale.
    assert scale_for((800.0, 10.0), (400.0, 400.0)) == 10.0
    assert scale_for((99.0, 99.0), (400.0, 400.0)) == 1.0


def test_an_extent_leaves_out_what_is_not_a_number():
    extent = Extent.of(SIDE, POINT, np.array([np.nan, 0.0, 0.0]))
    assert extent.low == extent.high == (250.0, 1100.0)


def test_a_laid_frame_starts_at_its_corner():
    extent = Extent((0.0, 1000.0), (250.0, 1100.0))
    frame = laid(SIDE, extent, 5.0, 30.0, 40.0)
    assert frame.flat_at([0.0, 1100.0]) == pytest.approx([30.0, 40.0])
