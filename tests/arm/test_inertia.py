"""Effective mass of the arm: planar textbook form, limits, and what must not change it."""

import numpy as np
import pytest
from scipy.spatial.transform import Rotation

from ergo.arm.inertia import guided_hand_mass_along, hand_mass_along
from ergo.arm.segments import ArmMasses, Segments
from ergo.datasets import library

SEGMENTS = Segments.from_library(library())
ONE = SEGMENTS.arm(False, 80.0, 0.34, 0.065)


def planar_arm(included_deg, upper=0.31, lower=0.34):
    """Shoulder at the origin, arm in the plane x-z, hand on the x axis."""
    span = np.sqrt(upper**2 + lower**2 - 2 * upper * lower * np.cos(np.radians(included_deg)))
    first = np.arccos((upper**2 + span**2 - lower**2) / (2 * upper * span))
    elbow = upper * np.array([np.cos(first), 0.0, -np.sin(first)])
    return np.zeros(3), elbow, np.array([span, 0.0, 0.0])


@pytest.mark.parametrize(
    ("included", "along", "across"),
    # arm_endpoint_mass: worked out outside this project from PMC2784227 table 1, printed to 0.01 kg
    [(60, 1.12, 1.77), (75, 1.21, 1.44), (90, 1.35, 1.25), (105, 1.59, 1.12), (120, 2.02, 1.03),
     (135, 2.95, 0.97), (150, 5.61, 0.93)],
)  # fmt: skip
def test_two_link_limb_of_pmc2784227(included, along, across):
    # I 0.04 and 0.06 kg m2 about the centres of mass, at 0.45 and 0.50 of links of 0.31 and 0.34 m
    radii = [np.sqrt(i / m) / length for i, m, length in ((0.04, 1.93, 0.31), (0.06, 1.52, 0.34))]
    limb = ArmMasses(*(np.array(v) for v in (1.93, 1.52, 0.45, 0.50)), np.full(3, radii[0]), np.full(3, radii[1]))
    points = planar_arm(included)
    assert hand_mass_along(*points, [1.0, 0.0, 0.0], limb) == pytest.approx(along, abs=0.006)
    assert hand_mass_along(*points, [0.0, 0.0, 1.0], limb) == pytest.approx(across, abs=0.006)


def test_a_straight_arm_is_locked_in_line_unless_the_shoulder_gives_way():
    points = planar_arm(180.0)
    line, across = [1.0, 0.0, 0.0], [0.0, 0.0, 1.0]
    assert hand_mass_along(*points, line, ONE) == np.inf
    assert guided_hand_mass_along(*points, line, ONE) == np.inf
    assert hand_mass_along(*points, line, ONE, shoulder_mass_kg=40.0) == pytest.approx(40.0, rel=1e-9)
    assert np.isfinite(hand_mass_along(*points, across, ONE))
    assert guided_hand_mass_along(*points, across, ONE) < 5.0


def test_a_pendulum_swung_across_itself_weighs_inertia_over_length_squared():
    # elbow at the shoulder's height far out, arm straight, pushed square to the arm's plane: both links turn
    # as one rod about the shoulder, and the hinge cannot help
    shoulder, elbow, grip = planar_arm(120.0)
    side = [0.0, 1.0, 0.0]
    lengths = (0.31, 0.34)
    masses = ArmMasses(*(np.array(v) for v in (2.0, 1.5, 0.5, 0.5)), np.zeros(3) + 1e-9, np.zeros(3) + 1e-9)
    # point masses at half links, free ball joint: W = r.(sum m (c c^T ...))^-1; worked for axes in the plane
    com1, com2 = 0.5 * elbow, elbow + 0.5 * (grip - elbow)
    about = sum(m * (c @ c * np.eye(3) - np.outer(c, c)) for m, c in ((2.0, com1), (1.5, com2)))
    moment = np.cross(grip, side)
    assert np.allclose(lengths, (np.linalg.norm(elbow), np.linalg.norm(grip - elbow)))
    expected = 1.0 / (moment @ np.linalg.solve(about, moment))
    assert hand_mass_along(shoulder, elbow, grip, side, masses) == pytest.approx(expected, rel=1e-6)


def test_turning_and_moving_arm_and_direction_together_changes_nothing():
    rng = np.random.default_rng(5)
    points, d = planar_arm(100.0), np.array([0.6, 0.0, 0.8])
    whole = Rotation.from_rotvec(rng.normal(size=3)).as_matrix()
    moved = [whole @ p + [0.3, -0.2, 1.1] for p in points]
    for mass in (hand_mass_along, guided_hand_mass_along):
        assert mass(*moved, whole @ d, ONE) == pytest.approx(mass(*points, d, ONE), rel=1e-10)


def test_a_mirrored_arm_weighs_the_same():
    shoulder, elbow, grip = (np.array(p) for p in ([0.2, 0, 1.4], [0.35, 0.1, 1.15], [0.2, 0.35, 1.1]))
    mirror, d = np.array([-1.0, 1.0, 1.0]), np.array([0.36, -0.48, 0.8])
    right = hand_mass_along(shoulder, elbow, grip, d, ONE)
    left = hand_mass_along(shoulder * mirror, elbow * mirror, grip * mirror, d * mirror, ONE)
    assert left == pytest.approx(right, rel=1e-12)


def test_guiding_the_hand_never_makes_it_lighter_and_principal_directions_agree():
    rng = np.random.default_rng(7)
    points, d = planar_arm(95.0), rng.normal(size=(50, 3))
    d /= np.linalg.norm(d, axis=1, keepdims=True)
    free, guided = hand_mass_along(*points, d, ONE), guided_hand_mass_along(*points, d, ONE)
    assert np.all(guided >= free * (1 - 1e-12))
    side = np.array([0.0, 1.0, 0.0])  # square to the arm's plane: a principal direction by symmetry
    guided = guided_hand_mass_along(*points, side, ONE)
    assert guided == pytest.approx(hand_mass_along(*points, side, ONE), rel=1e-9)


def test_operators_and_positions_stay_apart():
    many = SEGMENTS.arm([False, True, False], [80.0, 60.0, 100.0], [0.34, 0.31, 0.36], [0.065, 0.06, 0.07])
    shoulder, elbow, grip = planar_arm(110.0)
    raised = grip + np.array([0.0, 0.0, 0.03])
    positions = np.stack([grip, raised])[None] + np.zeros((3, 1, 1))
    d = np.array([[1.0, 0.0, 0.0], [0.0, 0.0, 1.0]])
    table = hand_mass_along(shoulder, elbow, positions, d, many, shoulder_mass_kg=[40.0, 30.0, 50.0])
    assert table.shape == (3, 2)
    third = SEGMENTS.arm(False, 100.0, 0.36, 0.07)
    assert table[2, 1] == pytest.approx(
        hand_mass_along(shoulder, elbow, positions[2, 1], d[1], third, shoulder_mass_kg=50.0), rel=1e-12
    )
    assert np.all(table[1] < table[0])
    assert np.all(table[0] < table[2])
