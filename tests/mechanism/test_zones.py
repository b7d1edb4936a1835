"""Zones: distances at hand-worked places, capsules by brute force, the kernels' NumPy twin, bad zones."""

import numpy as np
import pytest

from ergo.mechanism.zones import Ball, Box, Cylinder, Zone, smallest_gap_m

BOX = Zone("fence", "obstacle", Box((0.1, 0.2, 0.3), (0.2, 0.4, 0.6)))
SPINDLE = Zone("spindle", "hazard", Cylinder((0.0, 0.0, 0.8), (0.3, 0.1, 1.0), 0.05))
KNOB = Zone("knob", "hazard", Ball((-0.1, 0.3, 1.0), 0.08))
ZONES = (BOX, SPINDLE, KNOB)
EACH = pytest.mark.parametrize("zone", ZONES, ids=lambda zone: zone.name)


def twin(zone, points):
    """Signed distance by plain NumPy: the kernels' oracle."""
    shape, p = zone.shape, np.asarray(points, dtype=float)
    if isinstance(shape, Ball):
        return np.linalg.norm(p - shape.centre_m, axis=-1) - shape.radius_m
    if isinstance(shape, Box):
        over = np.abs(p - shape.centre_m) - np.asarray(shape.size_m) / 2
    else:
        a, b = np.asarray(shape.from_m), np.asarray(shape.to_m)
        axis = (b - a) / np.linalg.norm(b - a)
        z = (p - (a + b) / 2) @ axis
        rho = np.linalg.norm(p - (a + b) / 2 - z[..., None] * axis, axis=-1)
        over = np.stack([rho - shape.radius_m, np.abs(z) - np.linalg.norm(b - a) / 2], axis=-1)
    outside = np.linalg.norm(np.maximum(over, 0.0), axis=-1)
    return outside + np.minimum(over.max(axis=-1), 0.0)


def cloud(seed, count, zone, spread=0.5):
    middle = zone.shape.row()[1:4]
    return middle + np.random.default_rng(seed).uniform(-spread, spread, (count, 3))


def test_hand_worked_distances():
    # beside a face, off an edge (3-4-5), off a corner, and 50 mm inside the nearest face
    points = [(0.5, 0.2, 0.3), (0.23, 0.44, 0.3), (0.3, 0.5, 0.7), (0.15, 0.2, 0.3)]
    expected = [0.3, 0.05, np.sqrt(0.01 + 0.01 + 0.01), -0.05]
    np.testing.assert_allclose(BOX.distance_m(points), expected, atol=1e-15)
    upright = Zone("post", "obstacle", Cylinder((0, 0, 0), (0, 0, 1), 0.1))
    points = [(0.3, 0, 0.5), (0, 0, 1.2), (0.13, 0, 1.04), (0, 0.05, 0.5), (0, 0, 0.98)]
    np.testing.assert_allclose(upright.distance_m(points), [0.2, 0.2, 0.05, -0.05, -0.02], atol=1e-15)
    np.testing.assert_allclose(
        KNOB.distance_m([(-0.1, 0.3, 1.2), (-0.1, 0.3, 1.0)]), [0.12, -0.08], atol=1e-15
    )


@EACH
def test_the_kernels_agree_with_their_numpy_twin(zone):
    points = cloud(1, 3000, zone).reshape(50, 60, 3)
    np.testing.assert_allclose(zone.distance_m(points), twin(zone, points), atol=1e-15)


@EACH
def test_the_nearest_place_is_on_the_surface_and_at_the_distance(zone):
    points = cloud(2, 2000, zone)
    near, distance = zone.nearest_m(points), zone.distance_m(points)
    np.testing.assert_allclose(twin(zone, near), 0.0, atol=1e-15)
    np.testing.assert_allclose(np.linalg.norm(near - points, axis=1), np.abs(distance), atol=1e-15)
    step = 1e-4 * zone.toward(points)
    # going that way, the distance falls by the step itself (but where another face comes nearer inside)
    fall = distance - zone.distance_m(points + step)
    np.testing.assert_allclose(fall[distance > 1e-3], 1e-4, rtol=1e-9)


def test_where_all_ways_out_are_equal_one_is_still_given():
    np.testing.assert_allclose(KNOB.nearest_m([(-0.1, 0.3, 1.0)]), [(-0.1, 0.3, 1.08)], atol=1e-15)
    on_axis = np.array([(0.15, 0.05, 0.9)])
    np.testing.assert_allclose(twin(SPINDLE, SPINDLE.nearest_m(on_axis)), 0.0, atol=1e-15)


@EACH
def test_capsule_gaps_against_sampling(zone):
    a, b = cloud(3, 400, zone, 0.4), cloud(4, 400, zone, 0.4)
    gap = zone.gap_m(a, b, 0.03)
    t = np.linspace(0.0, 1.0, 4001)[:, None, None]
    sampled = twin(zone, a + t * (b - a)).min(axis=0) - 0.03
    assert (gap < -0.03).any()
    assert (gap > 0.0).any()
    # sampling can only miss the lowest place, by at most half a step of the segment
    assert np.all(sampled >= gap - 1e-12)
    assert np.all(sampled - gap <= np.linalg.norm(b - a, axis=1) / 8000 + 1e-12)


@EACH
def test_capsule_gaps_against_a_refined_search(zone):
    from scipy.optimize import minimize_scalar

    a, b = cloud(5, 60, zone, 0.4), cloud(6, 60, zone, 0.4)
    gap = zone.gap_m(a, b, 0.0)
    for k in range(60):

        def along(t, k=k):
            return float(twin(zone, a[k] + t * (b[k] - a[k])))

        found = minimize_scalar(along, bounds=(0.0, 1.0), method="bounded", options={"xatol": 1e-12})
        best = min(found.fun, along(0.0), along(1.0))
        # the search stops about 1e-8 of the segment from the lowest place, on a slope of up to 1
        assert gap[k] == pytest.approx(best, abs=2e-8)
        assert gap[k] <= best + 1e-12


def test_capsules_broadcast_over_operators_and_positions():
    a = cloud(7, 5 * 7, SPINDLE).reshape(5, 7, 3)
    b = cloud(8, 5, SPINDLE).reshape(5, 1, 3)
    radius = np.linspace(0.02, 0.06, 5)[:, None]
    gap = SPINDLE.gap_m(a, b, radius)
    assert gap.shape == (5, 7)
    assert gap[2, 3] == pytest.approx(float(SPINDLE.gap_m(a[2, 3], b[2, 0], radius[2, 0])), abs=1e-15)
    gaps, which = smallest_gap_m(ZONES, a, b, radius)
    each = np.stack([zone.gap_m(a, b, radius) for zone in ZONES])
    np.testing.assert_array_equal(gaps, each.min(axis=0))
    np.testing.assert_array_equal(which, each.argmin(axis=0))


def test_a_capsule_without_length_is_a_ball():
    p = cloud(9, 200, BOX)
    np.testing.assert_allclose(BOX.gap_m(p, p, 0.02), twin(BOX, p) - 0.02, atol=1e-15)


def test_a_gap_to_nothing_has_no_value():
    with pytest.raises(ValueError, match="no zone"):
        smallest_gap_m((), np.zeros(3), np.ones(3), 0.1)


@pytest.mark.parametrize(
    ("shape", "where"),
    [
        (Box((0, 0, 0), (0.1, 0.0, 0.1)), "zones[0].size_mm"),
        (Ball((0, 0, 0), 0.0), "zones[0].radius_mm"),
        (Cylinder((0, 0, 0), (0, 0, 0), 0.1), "zones[0].to_mm"),
        (Cylinder((0, 0, 0), (0, 0, 1), -0.1), "zones[0].radius_mm"),
    ],
)
def test_zones_without_size_are_problems(shape, where):
    assert [p.where for p in Zone("x", "hazard", shape).problems("zones[0]")] == [where]
    assert KNOB.problems("zones[1]") == ()
