"""What every operator's hand can give along the work direction, from the best stance and posture: the kernel's face.

At one posture the capability is the smallest of what the joints, the shoulder girdle, the grip and the stance allow;
the strongest posture is taken at each position, inside the one stance that serves the whole stroke best.
"""

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.arm.body import STANCE_TABLE, Support, body_columns
from ergo.arm.joints import JointRanges
from ergo.arm.scouts import SCOUTS, Problem, search
from ergo.arm.segments import Segments
from ergo.datasets import Library
from ergo.people.operators import Operators
from ergo.strength.joint_moments import JointStrengths

Array = NDArray[np.float64]
LIMITS = (
    "raising or lowering the upper arm", "moving the upper arm across", "turning the upper arm", "elbow", "wrist",
    "shoulder girdle", "grip", "tipping", "slipping", "reach", "handle too close", "joint range",
    "trunk in the way", "bench in the way",
)  # fmt: skip
NOT_REACHED_FROM = k.LIMIT_REACH  # from this code on the hand does not get there at all
BRACES = ("none", "bench edge", "seat back")
_STRENGTH_COLUMNS = {
    k.FLEXION: "shoulder_flexion", k.EXTENSION: "shoulder_extension", k.ABDUCTION: "shoulder_abduction",
    k.ADDUCTION: "shoulder_adduction", k.HORIZONTAL_FLEXION: "horizontal_flexion",
    k.HORIZONTAL_EXTENSION: "horizontal_extension", k.MEDIAL: "medial_rotation", k.LATERAL: "lateral_rotation",
    k.ELBOW_FLEXION: "elbow_flexion", k.ELBOW_EXTENSION: "elbow_extension", k.WRIST_FLEXION: "wrist_flexion",
    k.WRIST_EXTENSION: "wrist_extension", k.RADIAL: "radial_deviation", k.ULNAR: "ulnar_deviation",
    k.GIRDLE_PULL: "girdle_pull", k.GIRDLE_PUSH: "girdle_push",
}  # fmt: skip


@dataclass(frozen=True)
class Workplace:
    """Where the operators stand or sit, and what holds them; lengths [m], angles [rad]."""

    surface_height_m: float
    toe_space_m: float
    floor_friction: float
    stand_x_m: tuple[float, float]
    stand_off_m: tuple[float, float]
    trunk_bend_max_rad: float
    support: Support
    brace: str = "none"
    leaning: bool = False


@dataclass(frozen=True)
class HandTask:
    """What the hand has to follow: grip centre (P, 3) [m], unit work direction (P, 3), unit grip axis (P, 3).

    `ball` says that the grip has no axis. `demand_n` (P,) is the needed hand force, `share` the part of the
    capability that repetition and duration leave.
    """

    grip_m: Array
    work_dir: Array
    grip_axis: Array
    ball: bool
    demand_n: Array
    share: float = 1.0
    margin_min: float = 1.0


@dataclass(frozen=True)
class HandCapability:
    """Result for n operators at P positions, in station coordinates of the hand used.

    `strongest` and `easiest` (n, P, 3) are postures: centre-of-mass share, bend [rad], swivel [rad]; the easiest
    is the most comfortable that still carries the demand. `stance` (n, 2) is midline x and ankle (or hip) y [m].
    """

    force_n: Array
    reached: NDArray[np.bool_]
    shortfall_m: Array
    limit: NDArray[np.int64]
    strongest: Array
    easiest: Array
    easiest_force_n: Array
    stance: Array


@dataclass(frozen=True)
class Bench:
    """The packed problem: everything the kernels need, for searching and for describing postures."""

    ops: Array
    shape: Array
    scene: Array
    limits: Array
    windows: Array
    targets: Array
    mirror: float

    @property
    def ankle_z_m(self) -> Array:
        """Height of the ankles, or of the hips when seated (n,) [m]."""
        return self.ops[:, k.ANKLE_Z]


def scene_vector(place: Workplace, task: HandTask, ranges: JointRanges, library: Library) -> Array:
    """Return the kernel's scene vector (17,)."""
    rows = library.values(STANCE_TABLE)
    scene = np.zeros(17)
    seated = place.support.seated
    scene[k.SURFACE_Z], scene[k.FRICTION] = place.surface_height_m, place.floor_friction
    scene[k.SEATED] = float(seated)
    scene[k.SEAT_Z] = place.support.seat_height_m if seated else 0.0
    scene[k.HIP_Y] = place.support.hip_y_m
    scene[k.BRACE_BENCH] = float(place.brace == "bench edge")
    scene[k.BRACE_BACK] = float(place.brace == "seat back")
    low = rows["seated_bend_min_deg"] if seated and place.brace != "seat back" else rows["standing_bend_min_deg"]
    scene[k.BEND_MIN], scene[k.BEND_MAX] = np.deg2rad(low), place.trunk_bend_max_rad
    scene[k.COM_SLACK] = rows["leaning_reach_mm"] * 1e-3 if place.leaning else 0.0
    scene[k.LEAN_MAX] = np.sin(np.deg2rad(rows["lean_max_deg"]))
    scene[k.SIDE_BASE] = 0.5e-3 * rows["feet_distance_mm"]
    scene[k.BALL] = float(task.ball)
    scene[k.SWIVEL_LOW], scene[k.SWIVEL_HIGH] = np.deg2rad([rows["swivel_low_deg"], rows["swivel_high_deg"]])
    scene[k.REACH_EASE] = ranges.reach_ease_share
    return scene


def stance_windows(people: Operators, place: Workplace, ops: Array, mirror: float) -> Array:
    """Return each operator's stance window (n, 4): midline x low, high, ankle (or hip) y low, high [m].

    The shoe tips stay behind the toe space; a seat fixes the hips.
    """
    windows = np.zeros((people.mass_kg.size, 4))
    windows[:, 0], windows[:, 1] = sorted(mirror * x for x in place.stand_x_m)
    if place.support.seated:
        windows[:, 2:] = place.support.hip_y_m
        return windows
    nearest, farthest = max(place.stand_off_m[0], -place.toe_space_m), place.stand_off_m[1]
    windows[:, 2] = -max(farthest, nearest) - ops[:, k.TOE_AHEAD]
    windows[:, 3] = -nearest - ops[:, k.TOE_AHEAD]
    return windows


def pack(people: Operators, place: Workplace, task: HandTask, breakaway_n: Array, slide_n: Array,
         library: Library) -> Bench:  # fmt: skip
    """Return the packed problem; a left hand is mirrored so that the kernel only knows a right one."""
    ranges = JointRanges.from_library(library)
    strengths = JointStrengths.from_library(library)
    ops = body_columns(people, Segments.from_library(library), ranges, place.support, library)
    levels = strengths.of(people, library)
    for column, name in _STRENGTH_COLUMNS.items():
        ops[:, column] = levels[name]
    ops[:, k.BREAKAWAY], ops[:, k.SLIDE] = breakaway_n, slide_n
    mirror = -1.0 if people.hand == "left" else 1.0
    targets = np.concatenate([task.grip_m, task.work_dir, task.grip_axis], axis=1)
    targets[:, [0, 3, 6]] *= mirror
    return Bench(
        ops=ops,
        shape=strengths.shape,
        scene=scene_vector(place, task, ranges, library),
        limits=ranges.vector(),
        windows=stance_windows(people, place, ops, mirror),
        targets=np.ascontiguousarray(targets),
        mirror=mirror,
    )


def hand_capability(bench: Bench, task: HandTask, scouts: Bench | None = None,
                    tell: Callable[[float], None] | None = None) -> HandCapability:  # fmt: skip
    """Find stance, postures and capability of every operator.

    Parameters
    ----------
    bench : Bench
        n operators, P positions, packed by `pack`.
    task : HandTask
        Demand (P,) [N]: positions that ask for nothing only have to be reached.
    scouts : Bench, optional
        People at the same place and task who are searched for first (see `ergo.arm.scouts`); else some of the
        operators are.
    tell : callable, optional
        Called with the share done, 0..1; may raise to stop.

    Returns
    -------
    HandCapability
        Force (n, P) [N], 0 where the handle is not reached (`reached` and `limit` say why).

    Notes
    -----
    A stance's worth is its worst position's force x share / demand; among postures the largest force counts.
    What the search misses are narrow pockets and ridges (figures in tests/arm/test_search_optimum.py), so a
    capability is never too high, sometimes too low.
    """
    asks = task.demand_n > 1e-6
    problem = Problem(
        shape=bench.shape, scene=bench.scene, limits=bench.limits, targets=bench.targets,
        weights=np.where(asks, task.share / np.maximum(task.demand_n, 1e-6), 1e6),
        needs=np.where(asks, task.demand_n * task.margin_min / max(task.share, 1e-9), 0.0),
    )  # fmt: skip
    ahead = scouts or _some_of(bench)
    found = search(problem, bench.ops, bench.windows, ahead.ops, ahead.windows, tell or _silent)
    force = found.postures[:, :, 3]
    reached = force >= 0.0
    return HandCapability(
        force_n=np.where(reached, force, 0.0),
        reached=reached,
        shortfall_m=np.maximum(-force - 1.0, 0.0),
        limit=found.limits,
        strongest=found.postures[:, :, 0:3].copy(),
        easiest=found.postures[:, :, 4:7].copy(),
        easiest_force_n=np.maximum(found.postures[:, :, 7], 0.0),
        stance=found.stances,
    )


def _some_of(bench: Bench) -> Bench:
    """Return a bench with some of the operators, evenly spread over the rows."""
    count = bench.ops.shape[0]
    rows = np.unique(np.linspace(0, count - 1, min(count, SCOUTS)).astype(np.int64))
    rows = np.repeat(rows, 2) if rows.size == 1 else rows
    return replace(bench, ops=bench.ops[rows], windows=bench.windows[rows])


def _silent(share: float) -> None:
    """Tell nobody."""
