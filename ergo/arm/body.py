"""The body that carries the arm, packed for the kernel: links, masses, supports, one row an operator."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.arm.joints import JointRanges
from ergo.arm.segments import Segments
from ergo.datasets import Library
from ergo.people.operators import Operators

Array = NDArray[np.float64]
STANCE_TABLE = "stance_parameters"
# Shank and thigh share the leg between ankle and hip as de Leva's mean lengths do (440 and 422 mm of 862).
SHANK_SHARE = 0.51


@dataclass(frozen=True)
class Support:
    """Where an operator's weight may rest, and how the trunk may move; one posture kind, all operators.

    `seat_height_m` and `hip_y_m` count only when `seated`.
    """

    seated: bool
    seat_height_m: float = 0.0
    hip_y_m: float = 0.0


def body_columns(people: Operators, segments: Segments, ranges: JointRanges, support: Support,
                 library: Library) -> Array:  # fmt: skip
    """Return the kernel's operator array (n, OPERATOR_COLUMNS) with the body filled in and strengths at zero.

    Parameters
    ----------
    people : Operators
        n operators.
    segments, ranges, support
        Segment shares, joint ranges and the kind of support.

    Returns
    -------
    Array
        Columns as named in `ergo.arm.kernels`.

    Notes
    -----
    Centre of mass over the feet: sin(lean) COM_LEG + sin(trunk) COM_TRUNK, with both arms hanging from the
    shoulders; the working arm's reach is added by the kernel.
    Source: de_leva_1996 table 4 (segments), table `stance_parameters` (support).
    """
    ops = np.zeros((people.mass_kg.size, k.OPERATOR_COLUMNS))
    women = people.women
    rows = library.values(STANCE_TABLE)
    ops[:, k.UPPER], ops[:, k.FOREARM], ops[:, k.WRIST] = people.upper_arm_m, people.forearm_grip_m, people.wrist_grip_m
    ops[:, k.HALF_BREADTH], ops[:, k.CHEST_HALF] = people.shoulder_half_breadth_m, people.chest_half_breadth_m
    ops[:, k.FOOT], ops[:, k.MASS] = people.foot_length_m, people.mass_kg
    ops[:, k.TOE_AHEAD] = people.foot_length_m - people.ankle_ahead_of_heel_m
    ops[:, k.HAND_DEPTH], ops[:, k.PROTRACTION] = 0.5 * people.hand_depth_m, ranges.protraction_m
    for column, name in ((k.UPPER_MASS, "upper_arm"), (k.FOREARM_MASS, "forearm"), (k.HAND_MASS, "hand")):
        ops[:, column] = segments.mass_share(name, women) * people.mass_kg
    ops[:, k.UPPER_COM] = segments.com_share("upper_arm", women)
    ops[:, k.FOREARM_COM] = segments.com_share("forearm", women)
    if support.seated:
        _sit(ops, people, segments, support, rows)
    else:
        _stand(ops, people, segments, rows)
    return ops


def _trunk_moment(ops: Array, people: Operators, segments: Segments, head_m: float) -> Array:
    """Return the mass moment of trunk, head and hanging arms about the hips over body mass (n,) [m]."""
    women, trunk = people.women, ops[:, k.TRUNK]
    arms = 2.0 * sum(segments.mass_share(name, women) for name in ("upper_arm", "forearm", "hand"))
    # de Leva's trunk centre of mass is counted from the shoulders down.
    torso = segments.mass_share("trunk_3", women) * (1.0 - segments.com_share("trunk_3", women)) * trunk
    return torso + segments.mass_share("head_2", women) * (trunk + head_m) + arms * trunk


def _stand(ops: Array, people: Operators, segments: Segments, rows: dict[str, float]) -> None:
    women = people.women
    shoulder = people.acromion_height_m - people.shoulder_joint_drop_m
    ops[:, k.ANKLE_Z] = people.ankle_height_m
    ops[:, k.LEG] = people.hip_height_m - people.ankle_height_m
    ops[:, k.TRUNK] = shoulder - people.hip_height_m
    ops[:, k.BODY_FRONT] = people.body_front_m
    ops[:, k.COM_TRUNK] = _trunk_moment(ops, people, segments, rows["head_above_shoulder_mm"] * 1e-3)
    shank = SHANK_SHARE * (1.0 - segments.com_share("shank", women))
    thigh = SHANK_SHARE + (1.0 - SHANK_SHARE) * (1.0 - segments.com_share("thigh", women))
    above = 1.0 - 2.0 * sum(segments.mass_share(name, women) for name in ("thigh", "shank", "foot"))
    share = 2.0 * (segments.mass_share("shank", women) * shank + segments.mass_share("thigh", women) * thigh)
    ops[:, k.COM_LEG] = (share + above) * ops[:, k.LEG]
    foot, older = people.foot_length_m, people.age_years >= 60.0
    quiet, loaded = rows["quiet_point_share"], rows["loaded_base_share"]
    ahead = np.where(older, rows["base_ahead_of_ankle_60_share"], rows["base_ahead_of_ankle_share"])
    behind = np.where(older, rows["base_behind_ankle_60_share"], rows["base_behind_ankle_share"])
    # One foot ahead of the other: the base runs from behind the rear ankle to ahead of the front one.
    half_step = 0.5e-3 * rows["foot_stagger_mm"]
    ops[:, k.FRONT_Y] = quiet * foot + loaded * (half_step + (ahead - quiet) * foot)
    ops[:, k.BACK_Y] = quiet * foot - loaded * (half_step + (quiet + behind) * foot)
    ops[:, k.TOE_AHEAD] += half_step


def _sit(ops: Array, people: Operators, segments: Segments, support: Support, rows: dict[str, float]) -> None:
    ops[:, k.ANKLE_Z] = support.seat_height_m + people.hip_above_seat_m
    ops[:, k.TRUNK] = people.acromion_above_seat_m - people.shoulder_joint_drop_m - people.hip_above_seat_m
    ops[:, k.BODY_FRONT] = people.body_front_seated_m
    ops[:, k.COM_TRUNK] = _trunk_moment(ops, people, segments, rows["head_above_shoulder_mm"] * 1e-3)
    ops[:, k.COM_LEG] = rows["seated_mass_ahead_of_hip_mm"] * 1e-3
    ops[:, k.BACK_Y] = -rows["seat_base_behind_hip_mm"] * 1e-3
    # The feet stand under the knees: the buttock-knee length less the buttocks behind the hip joints.
    ops[:, k.FRONT_Y] = people.buttock_knee_m - rows["seat_base_behind_hip_mm"] * 1e-3
