"""Hand place and joint moments of the arm against Pinocchio's rigid-body algorithms, on 1,000 random postures.

A ball joint at the shoulder and a hinge at the elbow carry the links with the same masses; holding a force f on the
handle, the joints must give gravity(q) + J^T f.
"""

import numpy as np
import pinocchio as pin
import pytest

from ergo.arm import kernels as k
from tests.arm.made_operators import operators

RNG = np.random.default_rng(11)


def chain(op):
    """Return the Pinocchio model of one arm, links along x, hinge along y, and the id of the hand's frame."""
    model = pin.Model()
    model.gravity.linear = np.array([0.0, 0.0, -k.GRAVITY])
    shoulder = model.addJoint(0, pin.JointModelSpherical(), pin.SE3.Identity(), "shoulder")
    upper = pin.Inertia(op[k.UPPER_MASS], np.array([op[k.UPPER_COM] * op[k.UPPER], 0, 0]), 1e-3 * np.eye(3))
    model.appendBodyToJoint(shoulder, upper, pin.SE3.Identity())
    at_elbow = pin.SE3(np.eye(3), np.array([op[k.UPPER], 0, 0]))
    elbow = model.addJoint(shoulder, pin.JointModelRY(), at_elbow, "elbow")
    bone = op[k.FOREARM_COM] * (op[k.FOREARM] - op[k.WRIST])
    model.appendBodyToJoint(elbow, pin.Inertia(op[k.FOREARM_MASS], np.array([bone, 0, 0]), 1e-3 * np.eye(3)), pin.SE3.Identity())
    hand = pin.Inertia(op[k.HAND_MASS], np.array([op[k.FOREARM], 0, 0]), 1e-4 * np.eye(3))
    model.appendBodyToJoint(elbow, hand, pin.SE3.Identity())
    frame = model.addFrame(pin.Frame("hand", elbow, 0, pin.SE3(np.eye(3), np.array([op[k.FOREARM], 0, 0])), pin.FrameType.OP_FRAME))
    return model, frame


def random_arm(op):
    """Return a shoulder-to-grip vector that the arm can take, and a swivel."""
    far = RNG.uniform(0.25, 0.98) * (op[k.UPPER] + op[k.FOREARM])
    line = RNG.normal(size=3)
    return far * line / np.linalg.norm(line), RNG.uniform(-1.5, 2.2)


def placed(model, lines):
    """Return the joint places q that put the links along u and v."""
    u, v, h = (np.array(lines[i : i + 3]) for i in (0, 3, 6))
    turn = np.column_stack([u, h, np.cross(u, h)])  # link along x, hinge along y
    bend = np.arctan2(-(v @ turn[:, 2]), v @ u)  # about y, x turns toward -z
    q = pin.neutral(model)
    q[:4] = pin.Quaternion(turn).coeffs()
    q[4] = bend
    return q, turn


@pytest.mark.parametrize("seed", range(10))
def test_place_and_moments(seed):
    for op in operators(100, seed):
        model, frame = chain(op)
        data = model.createData()
        reach, swivel = random_arm(op)
        lines = k.arm_lines(*reach, op[k.UPPER], op[k.FOREARM], np.cos(swivel), np.sin(swivel))
        q, turn = placed(model, lines)
        pin.framesForwardKinematics(model, data, q)
        assert data.oMf[frame].translation == pytest.approx(reach, abs=1e-9)
        direction = RNG.normal(size=3)
        direction /= np.linalg.norm(direction)
        force = RNG.uniform(0.0, 200.0)
        jacobian = pin.computeFrameJacobian(model, data, q, frame, pin.LOCAL_WORLD_ALIGNED)[:3]
        needed = pin.computeGeneralizedGravity(model, data, q) + jacobian.T @ (force * direction)
        elbow_slope, elbow_weight, moment, weight = k.arm_moments(op, lines, *reach, *direction)
        # The hinge axis h = u x v bends the elbow; Pinocchio's +y is that axis.
        assert elbow_slope * force + elbow_weight == pytest.approx(needed[3], abs=1e-9)
        ours = np.array(moment) * force + np.array([weight[0], weight[1], 0.0])
        assert ours == pytest.approx(turn @ needed[:3], abs=1e-9)


def test_segment_masses_add_up_to_the_published_arm():
    # de Leva 1996 table 4: upper arm 2.71, forearm 1.62, hand 0.61 % of body mass in men
    op = operators(1, 0)[0]
    arm = op[k.UPPER_MASS] + op[k.FOREARM_MASS] + op[k.HAND_MASS]
    assert arm / op[k.MASS] == pytest.approx(0.0271 + 0.0162 + 0.0061)
