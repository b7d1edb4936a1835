"""Effective mass of the arm against Pinocchio's mass matrix and frame Jacobian of the same chain."""

import numpy as np
import pinocchio as pin
import pytest

from ergo.arm.inertia import guided_hand_mass_along, hand_mass_along
from ergo.arm.segments import Segments
from ergo.datasets import library

SEGMENTS = Segments.from_library(library())
# Both sides are the same closed form in floating point; 1e-8 is the tolerance the job asks for.
TOLERANCE = 1e-8


def arms(count, seed):
    """Random arms: sex, mass, joint centres, and a work direction."""
    rng = np.random.default_rng(seed)
    women = rng.random(count) < 0.5
    mass, forearm, wrist = (
        rng.uniform(50, 110, count),
        rng.uniform(0.29, 0.38, count),
        rng.uniform(0.05, 0.08, count),
    )
    shoulder = rng.normal(0.0, 0.3, (count, 3)) + np.array([0.0, 0.0, 1.4])
    upper = rng.normal(size=(count, 3))
    upper *= rng.uniform(0.25, 0.34, (count, 1)) / np.linalg.norm(upper, axis=1, keepdims=True)
    lower = rng.normal(size=(count, 3))
    lower *= forearm[:, None] / np.linalg.norm(lower, axis=1, keepdims=True)
    d = rng.normal(size=(count, 3))
    masses = SEGMENTS.arm(women, mass, forearm, wrist)
    return (
        shoulder,
        shoulder + upper,
        shoulder + upper + lower,
        d / np.linalg.norm(d, axis=1, keepdims=True),
        masses,
    )


def chain(shoulder, elbow, grip, masses, k):
    """One arm as a Pinocchio chain whose world axes at rest are turned into the posture by placements."""
    upper, lower = elbow - shoulder, grip - elbow
    axis = np.cross(upper, lower)
    axis /= np.linalg.norm(axis)

    def frame(link):
        long = link / np.linalg.norm(link)
        return np.column_stack([np.cross(axis, long), axis, long])

    model = pin.Model()
    first, second = frame(upper), frame(lower)
    ball = model.addJoint(0, pin.JointModelSpherical(), pin.SE3(first, shoulder), "shoulder")
    turn = pin.SE3(first.T @ second, first.T @ upper)
    hinge = model.addJoint(ball, pin.JointModelRY(), turn, "elbow")
    for joint, link, mass, com, radii in (
        (ball, upper, masses.upper_arm_kg[k], masses.upper_arm_com[k], masses.upper_arm_gyration[k]),
        (
            hinge,
            lower,
            masses.forearm_hand_kg[k],
            masses.forearm_hand_com[k],
            masses.forearm_hand_gyration[k],
        ),
    ):
        length = np.linalg.norm(link)
        own = np.diag(mass * (radii * length) ** 2)
        model.appendBodyToJoint(joint, pin.Inertia(mass, np.array([0, 0, com * length]), own), pin.SE3.Identity())
    at = pin.SE3(np.eye(3), np.array([0.0, 0.0, np.linalg.norm(lower)]))
    hand = model.addFrame(pin.Frame("hand", hinge, at, pin.FrameType.OP_FRAME))
    return model, hand


def engine_mobility(shoulder, elbow, grip, masses, k):
    model, hand = chain(shoulder[k], elbow[k], grip[k], masses, k)
    data, q = model.createData(), pin.neutral(model)
    inertia = pin.crba(model, data, q)
    inertia = np.triu(inertia) + np.triu(inertia, 1).T
    jacobian = pin.computeFrameJacobian(model, data, q, hand, pin.LOCAL_WORLD_ALIGNED)[:3]
    pin.framesForwardKinematics(model, data, q)
    assert np.allclose(data.oMf[hand].translation, grip[k], atol=1e-12)
    return jacobian @ np.linalg.solve(inertia, jacobian.T)


@pytest.mark.parametrize("seed", [1, 2])
def test_effective_masses_are_pinocchios(seed):
    shoulder, elbow, grip, d, masses = arms(60, seed)
    free = hand_mass_along(shoulder, elbow, grip, d, masses)
    guided = guided_hand_mass_along(shoulder, elbow, grip, d, masses)
    for k in range(60):
        w = engine_mobility(shoulder, elbow, grip, masses, k)
        assert free[k] == pytest.approx(1.0 / (d[k] @ w @ d[k]), rel=TOLERANCE)
        assert guided[k] == pytest.approx(d[k] @ np.linalg.solve(w, d[k]), rel=TOLERANCE)


def test_a_shoulder_that_gives_way_is_pinocchios_mobility_plus_its_own():
    shoulder, elbow, grip, d, masses = arms(20, 3)
    given = hand_mass_along(shoulder, elbow, grip, d, masses, shoulder_mass_kg=np.full(20, 40.0))
    for k in range(20):
        w = engine_mobility(shoulder, elbow, grip, masses, k) + np.eye(3) / 40.0
        assert given[k] == pytest.approx(1.0 / (d[k] @ w @ d[k]), rel=TOLERANCE)
