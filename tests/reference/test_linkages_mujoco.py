"""Positions and static forces of crank, slot and rack against MuJoCo, a rigid-body engine.

The mechanism is given to MuJoCo as bodies, joints and a closing constraint. For a lever angle its closing
constraint is met by Newton steps on the engine's own residual and Jacobian; the hand force is what makes its
joint forces (load, gravity, hand through the engine's Jacobian, constraint forces) add up to nothing.
"""

import mujoco
import numpy as np
import pytest

from ergo.frames import GRAVITY_M_S2, lever_direction
from ergo.mechanism.drive import drive
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import ConnectingLink, Rack, SlottedArm

DEG = np.pi / 180.0
STROKE = np.linspace(0.0, 1.0, 9)
LOAD_N = 900.0
PIVOT = np.array([0.05, 0.3, 0.95])


def lever(start_deg, end_deg, axis="sideways"):
    return Lever(tuple(PIVOT), axis, 0.26, start_deg * DEG, end_deg * DEG, mass_kg=0.9, balance_m=0.1)


def text(vector):
    return " ".join(f"{v:.17g}" for v in vector)


def model(lv, arm_rad, inner, slide_at, slide_along, closing):
    """Lever with an inner joint at its arm, a slide on its line, and a closing constraint."""
    n = lv.unit_axis
    up, arm = lv.direction(0.0), lv.direction(arm_rad)
    xml = f"""
    <mujoco><compiler inertiafromgeom="false" angle="radian"/>
    <option gravity="0 0 -{GRAVITY_M_S2}" jacobian="dense"/>
    <worldbody>
      <body name="lever" pos="{text(PIVOT)}"><joint name="lever" type="hinge" axis="{text(n)}"/>
        <inertial pos="{text(lv.balance_point_m * up)}" mass="{lv.mass_kg}" diaginertia="1e-3 1e-3 1e-3"/>
        <site name="grip" pos="{text(lv.length_m * up)}"/>
        {inner(n, arm)}
      </body>
      <body name="slide" pos="{text(slide_at)}" gravcomp="1">
        <joint name="slide" type="slide" axis="{text(slide_along)}"/>
        <inertial pos="0 0 0" mass="0.5" diaginertia="1e-4 1e-4 1e-4"/><site name="pin"/></body>
    </worldbody><equality>{closing}</equality></mujoco>"""
    return mujoco.MjModel.from_xml_string(xml)


def close(m, d, lever_rad, guess):
    """Meet the closing constraint at a lever angle, from a guess of the other joints."""
    d.qpos[:] = [lever_rad, *guess]
    for _ in range(50):
        mujoco.mj_forward(m, d)
        jac = d.efc_J.reshape(-1, m.nv)[:, 1:]
        step = np.linalg.lstsq(jac, -d.efc_pos, rcond=None)[0]
        d.qpos[1:] += step
        if np.abs(step).max() < 1e-14:
            break
    mujoco.mj_forward(m, d)
    return d.qpos.copy()


def balance(m, d, along_sign, work_dir):
    """Hand force and constraint forces for which the engine's joint forces add up to nothing."""
    closing = d.efc_J.reshape(-1, m.nv)
    jacobian = np.zeros((3, m.nv))
    mujoco.mj_jacSite(m, d, jacobian, None, m.site("grip").id)
    load = np.zeros(m.nv)
    load[-1] = -along_sign * LOAD_N
    known = load - d.qfrc_bias + d.qfrc_gravcomp
    unknown = np.column_stack([jacobian.T @ work_dir, closing.T])
    answer, *_ = np.linalg.lstsq(unknown, -known, rcond=None)
    assert np.abs(unknown @ answer + known).max() < 1e-9
    return answer[0], answer[1:]


def link_body(length):
    def inner(n, arm):
        return f"""<body name="link" pos="{text(0.06 * arm)}" gravcomp="1">
          <joint name="link" type="hinge" axis="{text(n)}"/>
          <inertial pos="0 0 0" mass="0.1" diaginertia="1e-4 1e-4 1e-4"/>
          <site name="end" pos="{text(length * arm)}"/></body>"""

    return inner


@pytest.mark.parametrize("axis", ["sideways", "fore-aft", "upright", (1.0, 0.3, -0.4)])
@pytest.mark.parametrize("branch", ["open", "crossed"])
def test_slider_crank_positions_and_hand_force(branch, axis):
    lv = lever(-30.0, 60.0, axis)
    link = ConnectingLink(0.06, 0.11, 170.0 * DEG, 0.02, 95.0 * DEG, branch)
    along = lever_direction(lv.unit_axis, 170.0 * DEG)
    across = lever_direction(lv.unit_axis, 260.0 * DEG)
    closing = '<connect site1="end" site2="pin" solref="0.002 1"/>'
    m = model(lv, 95.0 * DEG, link_body(0.11), PIVOT + 0.02 * across, along, closing)
    d = mujoco.MjData(m)
    d.qpos[0] = lv.start_rad
    path = handle_path(lv, Grip(), STROKE)
    ours = drive(path, lv, link, lambda s: np.full(s.shape, LOAD_N))
    sign = np.sign(link.slide_m(lv.end_rad) - link.slide_m(lv.start_rad))
    arm, slide = link.pins_m(path.lever_rad)
    run = slide - arm
    guess = np.arctan2(run[:, 1], run[:, 0]) - path.lever_rad - 95.0 * DEG
    for k, angle in enumerate(path.lever_rad):
        q = close(m, d, angle, [guess[k] + 0.05, link.slide_m(angle) + 0.002])
        assert q[-1] == pytest.approx(float(link.slide_m(angle)), abs=1e-12)
        np.testing.assert_allclose(d.site("grip").xpos, path.grip_m[k], atol=1e-12)
        hand, forces = balance(m, d, sign, path.work_dir[k])
        assert hand == pytest.approx(ours.demand_n[k], rel=1e-9, abs=1e-9)
        assert np.linalg.norm(forces) == pytest.approx(ours.link_pin_force_n[k], rel=1e-9)
        assert abs(forces @ across) == pytest.approx(ours.side_force_n[k], rel=1e-9, abs=1e-9)


def test_the_engine_stands_still_under_our_hand_force():
    lv = lever(-30.0, 60.0)
    link = ConnectingLink(0.06, 0.11, 170.0 * DEG, 0.02, 95.0 * DEG)
    across = lever_direction(lv.unit_axis, 260.0 * DEG)
    closing = '<connect site1="end" site2="pin" solref="0.002 1" solimp="0.9999 0.9999 0.001"/>'
    along = lever_direction(lv.unit_axis, 170.0 * DEG)
    m = model(lv, 95.0 * DEG, link_body(0.11), PIVOT + 0.02 * across, along, closing)
    d = mujoco.MjData(m)
    path = handle_path(lv, Grip(), STROKE)
    ours = drive(path, lv, link, lambda s: np.full(s.shape, LOAD_N))
    arm, slide = link.pins_m(path.lever_rad)
    turn = np.arctan2(*(slide - arm).T[::-1]) - path.lever_rad - 95.0 * DEG
    sign = np.sign(link.slide_m(lv.end_rad) - link.slide_m(lv.start_rad))
    for k, angle in enumerate(path.lever_rad):
        close(m, d, angle, [turn[k], link.slide_m(angle)])
        speeds = []
        for hand in (ours.demand_n[k], 0.0):
            jacobian = np.zeros((3, m.nv))
            mujoco.mj_jacSite(m, d, jacobian, None, m.site("grip").id)
            d.qfrc_applied[:] = jacobian.T @ (hand * path.work_dir[k])
            d.qfrc_applied[-1] -= sign * LOAD_N
            mujoco.mj_forward(m, d)
            speeds.append(np.abs(d.qacc[0]))
        # the engine's constraint is soft: it lets through about 1e-4 of the unbalanced acceleration
        assert speeds[0] < 1e-3 * speeds[1]


def test_slotted_arm_positions_and_hand_force():
    lv = lever(20.0, 100.0)
    arm = SlottedArm(0.07, -20.0 * DEG, 15.0 * DEG)

    def inner(n, direction):
        return f"""<body name="block" gravcomp="1"><joint type="slide" axis="{text(direction)}"/>
          <inertial pos="0 0 0" mass="0.1" diaginertia="1e-4 1e-4 1e-4"/><site name="end"/></body>"""

    along, across = (lever_direction(lv.unit_axis, x * DEG) for x in (-20.0, 70.0))
    closing = '<connect site1="end" site2="pin" solref="0.002 1"/>'
    m = model(lv, 15.0 * DEG, inner, PIVOT + 0.07 * across, along, closing)
    d = mujoco.MjData(m)
    path = handle_path(lv, Grip(), STROKE)
    ours = drive(path, lv, arm, lambda s: np.full(s.shape, LOAD_N))
    sign = np.sign(arm.slide_m(lv.end_rad) - arm.slide_m(lv.start_rad))
    for k, angle in enumerate(path.lever_rad):
        q = close(m, d, angle, [0.1, 0.0])
        assert q[-1] == pytest.approx(float(arm.slide_m(angle)), abs=1e-12)
        assert q[1] == pytest.approx(float(arm.pin_on_arm_m(angle)), abs=1e-12)
        hand, forces = balance(m, d, sign, path.work_dir[k])
        assert hand == pytest.approx(ours.demand_n[k], rel=1e-9, abs=1e-9)
        assert abs(forces @ across) == pytest.approx(ours.side_force_n[k], rel=1e-9, abs=1e-9)


def test_rack_positions_and_hand_force():
    lv = lever(-40.0, 70.0)
    rack = Rack(0.025, 20.0 * DEG)
    closing = '<joint joint1="slide" joint2="lever" polycoef="0 0.025 0 0 0"/>'
    m = model(lv, 0.0, lambda n, arm: "", PIVOT, lever_direction(lv.unit_axis, 1.0), closing)
    d = mujoco.MjData(m)
    path = handle_path(lv, Grip(), STROKE)
    ours = drive(path, lv, rack, lambda s: np.full(s.shape, LOAD_N))
    for k, angle in enumerate(path.lever_rad):
        q = close(m, d, angle, [0.0])
        assert q[-1] == pytest.approx(float(rack.slide_m(angle)), abs=1e-13)
        hand, _ = balance(m, d, 1.0, path.work_dir[k])
        assert hand == pytest.approx(ours.demand_n[k], rel=1e-9)
