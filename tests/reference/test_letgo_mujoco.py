"""A let-go of the same arm and lever in MuJoCo: the arm's posture changes, the lever turns on its pivot.

The model of the project keeps the arm's effective mass and takes the path as a line; the engine does neither.
The muscle's force acts in the engine at the handle, along the path: what it held, what stiffness and damping
take off, and the decay after the latency. Gravity is off, as the arm is carried before and after alike.
"""

import dataclasses

import mujoco
import numpy as np
import pytest

from ergo.arm.inertia import guided_hand_mass_along, hand_mass_along
from ergo.arm.segments import Segments
from ergo.datasets import library
from ergo.letgo.hand import Muscle, run_on

ARM = Segments.from_library(library()).arm(False, 80.0, 0.34, 0.065)
SHIPPED = Muscle.from_library(library(), scenarios=1)
LEVER_M, LEVER_KG = 0.30, 0.9
SHOULDER = np.array([0.17, -0.30, 1.40])


def text(vector):
    return " ".join(f"{v:.15g}" for v in np.ravel(vector))


def link_frame(link, axis):
    long = link / np.linalg.norm(link)
    return np.column_stack([np.cross(axis, long), axis, long])


def body(name, place, frame, joint, mass, com, radii, length, inner):
    """One body whose own frame has the link along z and the elbow's axis along y."""
    quat = np.empty(4)
    mujoco.mju_mat2Quat(quat, np.ascontiguousarray(frame).ravel())
    own = mass * (np.asarray(radii) * length) ** 2
    return f"""<body name="{name}" pos="{text(place)}" quat="{text(quat)}">{joint}{inner}
        <inertial pos="0 0 {com * length:.15g}" mass="{mass:.15g}" diaginertia="{text(own)}"/></body>"""


def arm_xml(elbow, grip):
    upper, lower = elbow - SHOULDER, grip - elbow
    axis = np.cross(upper, lower)
    axis /= np.linalg.norm(axis)
    first, second = link_frame(upper, axis), link_frame(lower, axis)
    reach = np.linalg.norm(lower)
    forearm = body(
        "forearm", [0, 0, np.linalg.norm(upper)], first.T @ second,
        '<joint name="elbow" type="hinge" axis="0 1 0"/>',
        ARM.forearm_hand_kg, ARM.forearm_hand_com, ARM.forearm_hand_gyration, reach,
        f'<site name="hand" pos="0 0 {reach:.15g}"/>',
    )  # fmt: skip
    return body(
        "upper", SHOULDER, first, '<joint name="shoulder" type="ball"/>', ARM.upper_arm_kg, ARM.upper_arm_com,
        ARM.upper_arm_gyration, np.linalg.norm(upper), forearm,
    )  # fmt: skip


def lever_xml(grip, up):
    """A lever as a uniform rod from pivot to grip, turning about the sideways axis."""
    pivot, own = grip - LEVER_M * up, np.full(3, LEVER_KG * LEVER_M**2 / 12.0)
    return f"""<body name="lever" pos="{text(pivot)}"><joint name="lever" type="hinge" axis="1 0 0"/>
        <inertial pos="{text(0.5 * LEVER_M * up)}" mass="{LEVER_KG}" diaginertia="{text(own)}"/>
        <site name="handle" pos="{text(LEVER_M * up)}"/></body>"""


def scene(elbow, grip, up, step=1e-4):
    """Arm and lever, the hand tied to the handle so stiffly that it strays by micrometres."""
    return mujoco.MjModel.from_xml_string(f"""<mujoco><compiler inertiafromgeom="false"/>
      <option gravity="0 0 0" timestep="{step}" integrator="implicitfast" jacobian="dense" iterations="200"
        tolerance="1e-14"/>
      <worldbody>{arm_xml(elbow, grip)}{lever_xml(grip, up)}</worldbody>
      <equality><connect site1="hand" site2="handle" solref="{5 * step} 1" solimp="0.9999 0.9999 0.001"/>
      </equality>
      </mujoco>""")


def postures():
    """Elbow, grip, lever direction and sense of turn, of a right arm before the trunk."""
    up, out = np.array([0.0, 0.0, 1.0]), np.array([0.0, -1.0, 0.0])
    return {
        "pull, lever up": (np.array([0.30, -0.22, 1.14]), np.array([0.20, 0.08, 1.22]), up, 1.0),
        "push, lever up": (np.array([0.30, -0.30, 1.13]), np.array([0.20, 0.02, 1.18]), up, -1.0),
        "down, lever out": (np.array([0.33, -0.15, 1.22]), np.array([0.22, 0.15, 1.22]), out, 1.0),
    }  # fmt: skip


def path_dir(up, turn):
    return turn * np.cross([1.0, 0.0, 0.0], up)


def engine_run(elbow, grip, up, turn, force, muscle):
    """Travel, peak speed and time to the turn, the work of the muscle, and energy at the peak."""
    m = scene(elbow, grip, up)
    d = mujoco.MjData(m)
    mujoco.mj_forward(m, d)
    joint = m.joint("lever").dofadr[0]
    stiffness, damping = muscle.stiffness_n_per_m(force)[0], muscle.damping_ns_per_m(force)[0]
    travel = speed = peak = work = energy = 0.0
    while speed >= 0.0 and d.time < muscle.watched_s[0]:
        fade = np.exp(-max(d.time - muscle.latency_s[0], 0.0) / muscle.relaxation_s[0])
        drive = force * fade - stiffness * travel - damping * speed
        d.qfrc_applied[joint] = turn * LEVER_M * drive
        mujoco.mj_step(m, d)
        before, travel = travel, turn * LEVER_M * d.qpos[m.joint("lever").qposadr[0]]
        speed = turn * LEVER_M * d.qvel[joint]
        work += drive * (travel - before)
        if speed > peak:
            whole = np.empty((m.nv, m.nv))
            mujoco.mj_fullM(m, d, whole)
            peak, energy = speed, (0.5 * d.qvel @ whole @ d.qvel, work)
    return travel, peak, d.time, energy


@pytest.mark.parametrize("name", list(postures()))
def test_the_arms_mass_is_what_the_engine_accelerates(name):
    # the engine's first acceleration of the tied handle, and of the free hand under the same force
    elbow, grip, up, turn = postures()[name]
    direction = path_dir(up, turn)
    m = scene(elbow, grip, up)
    d = mujoco.MjData(m)
    joint = m.joint("lever").dofadr[0]
    d.qfrc_applied[joint] = turn * LEVER_M * 100.0
    mujoco.mj_forward(m, d)
    tied = turn * LEVER_M * d.qacc[joint]
    lever_kg = LEVER_KG / 3.0
    guided = guided_hand_mass_along(SHOULDER, elbow, grip, direction, ARM)
    # the constraint's impedance of 0.9999 leaves 1e-4 of the force to slip past it
    assert tied == pytest.approx(100.0 / (guided + lever_kg), rel=1e-3)
    m.eq_active0[0] = 0
    loose = mujoco.MjData(m)
    jacobian = np.zeros((3, m.nv))
    mujoco.mj_forward(m, loose)
    mujoco.mj_jacSite(m, loose, jacobian, None, m.site("hand").id)
    loose.qfrc_applied[:] = jacobian.T @ direction * 100.0
    mujoco.mj_forward(m, loose)
    free = hand_mass_along(SHOULDER, elbow, grip, direction, ARM)
    assert direction @ jacobian @ loose.qacc == pytest.approx(100.0 / free, rel=1e-9)


def ours(name, force, muscle):
    elbow, grip, up, turn = postures()[name]
    guided = guided_hand_mass_along(SHOULDER, elbow, grip, path_dir(up, turn), ARM)
    run = run_on([force], np.full((1, 1), guided), muscle, fixed_mass_kg=LEVER_KG / 3.0)
    travel, peak, time, mass = (
        float(v[0, 0, 0]) for v in (run.overrun_m, run.peak_speed_m_s, run.time_s, run.moving_mass_kg)
    )
    return travel, peak, time, 0.5 * mass * peak**2


@pytest.mark.parametrize("name", list(postures()))
def test_overrun_peak_speed_time_and_energy_at_100_n(name):
    # 84 mm of travel turn the lever by 16 degrees and change the arm's mass: 3 % on overrun, 4 % on speed and
    # energy at the peak, 10 % on the time of the turn, which a flat top makes uncertain
    found = engine_run(*postures()[name], 100.0, SHIPPED)
    expected = ours(name, 100.0, SHIPPED)
    assert expected[0] == pytest.approx(found[0], rel=0.03)
    assert expected[1] == pytest.approx(found[1], rel=0.04)
    assert expected[2] == pytest.approx(found[2], rel=0.10)
    assert expected[3] == pytest.approx(found[3][0], rel=0.04)
    # the engine's own balance: kinetic energy is the muscle's work, but for its steps and the soft tie
    assert found[3][0] == pytest.approx(found[3][1], rel=0.005)


@pytest.mark.parametrize("name", list(postures()))
def test_a_run_of_few_millimetres_agrees_to_a_hundredth(name):
    # so short a run leaves the posture alone: what differs is the engine's step of 0.1 ms and its soft tie
    stiff = dataclasses.replace(SHIPPED, relaxed_n_per_m=np.array([20000.0]), damping_time_s=np.array([0.002]))
    found = engine_run(*postures()[name], 100.0, stiff)
    expected = ours(name, 100.0, stiff)
    assert expected[0] < 0.012
    assert expected[0] == pytest.approx(found[0], rel=0.01)
    assert expected[1] == pytest.approx(found[1], rel=0.01)
    assert expected[2] == pytest.approx(found[2], rel=0.01)
    assert expected[3] == pytest.approx(found[3][0], rel=0.02)
