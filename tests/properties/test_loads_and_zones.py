"""Properties of loads and zones."""

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from ergo.datasets import library
from ergo.load.drilling import Drilling
from ergo.load.press_fit import Metal, PressFit
from ergo.load.table import TableLoad
from ergo.mechanism.zones import Ball, Box, Cylinder, Zone

LIBRARY = library()
PLACE = st.tuples(*[st.floats(-0.5, 0.5)] * 3)
SIZE = st.floats(0.01, 0.5)
SHAPES = st.one_of(
    st.builds(Box, PLACE, st.tuples(SIZE, SIZE, SIZE)),
    st.builds(Ball, PLACE, SIZE),
    st.builds(lambda a, d, r: Cylinder(a, tuple(np.add(a, d)), r), PLACE, st.tuples(SIZE, SIZE, SIZE), SIZE),
)


def moved(shape, by):
    if isinstance(shape, Cylinder):
        return Cylinder(tuple(np.add(shape.from_m, by)), tuple(np.add(shape.to_m, by)), shape.radius_m)
    rest = shape.size_m if isinstance(shape, Box) else shape.radius_m
    return type(shape)(tuple(np.add(shape.centre_m, by)), rest)


@given(SHAPES, PLACE, PLACE, PLACE)
def test_a_gap_does_not_change_when_zone_and_capsule_move_together(shape, a, b, by):
    one = Zone("z", "hazard", shape).gap_m(a, b, 0.04)
    two = Zone("z", "hazard", moved(shape, by)).gap_m(np.add(a, by), np.add(b, by), 0.04)
    np.testing.assert_allclose(two, one, atol=1e-11)


@given(SHAPES, PLACE, PLACE)
def test_a_gap_is_the_same_from_either_end_and_no_more_than_at_any_place_between(shape, a, b):
    zone = Zone("z", "hazard", shape)
    gap = zone.gap_m(a, b, 0.0)
    np.testing.assert_allclose(zone.gap_m(b, a, 0.0), gap, atol=3e-12)
    between = np.asarray(a) + np.linspace(0.0, 1.0, 201)[:, None] * np.subtract(b, a)
    assert np.all(zone.distance_m(between) >= gap - 3e-12)


@given(SHAPES, PLACE, PLACE)
def test_distance_changes_no_faster_than_the_place(shape, a, b):
    zone = Zone("z", "hazard", shape)
    change = abs(float(zone.distance_m(a)) - float(zone.distance_m(b)))
    assert change <= np.linalg.norm(np.subtract(a, b)) + 1e-12


@given(st.floats(0.0016, 0.0155), st.floats(0.00001, 0.00048), st.sampled_from(["standard", "split"]))
def test_thrust_grows_with_feed_and_a_split_point_needs_less(diameter, feed, point):
    def thrust(feed_m, kind):
        drill = Drilling.from_library(
            LIBRARY, diameter_m=diameter, feed_m_per_rev=feed_m, material="brass", point=kind
        )
        return drill.thrust_n()

    assert thrust(feed * 1.02, point) > thrust(feed, point)
    assert thrust(feed, "split") < thrust(feed, "standard")


@given(st.floats(0.003, 0.03), st.floats(1.05, 6.0), st.floats(1e-6, 1e-4), st.floats(0.0, 0.9))
def test_press_fit_is_linear_in_interference_and_falls_with_the_bore(shaft, ratio, interference, bore):
    metal = Metal(206e9, 0.3)

    def pressure(delta, bore_share):
        fit = PressFit(shaft, ratio * shaft, 0.01, delta, metal, metal, 0.1, bore_share * shaft)
        return fit.pressure_pa()

    np.testing.assert_allclose(pressure(2 * interference, bore), 2 * pressure(interference, bore), rtol=1e-12)
    assert pressure(interference, bore) <= pressure(interference, 0.0) * (1 + 1e-12)


@given(
    st.lists(st.tuples(st.floats(0.001, 0.1), st.floats(0.0, 1e4)), min_size=2, max_size=8), st.floats(0, 1)
)
def test_a_table_never_leaves_the_band_of_its_rows(rows, share):
    slide = tuple(np.cumsum([row[0] for row in rows]))
    force = tuple(row[1] for row in rows)
    at = slide[0] + share * (slide[-1] - slide[0])
    value = TableLoad(slide, force).force_n(np.array([at]))[0]
    assert min(force) - 1e-9 <= value <= max(force) + 1e-9
