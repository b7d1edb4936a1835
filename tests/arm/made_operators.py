"""Operators and scenes made by hand for kernel tests: no population, round numbers, lognormal strengths."""

import numpy as np

from ergo.arm import kernels as k
from ergo.arm.joints import JointRanges
from ergo.datasets import library

LIMITS = JointRanges.from_library(library()).vector()
SHAPE = np.array(
    [[1, 0, 0, -0.005265, 0.004325], [1, 0, 0, 0.000484, 0], [0.8275, 0.0038, -0.0000209, -0.00123, 0],
     [0.8678, 0.00189, 0, -0.0014, 0]]
)  # fmt: skip
BODY = {
    k.UPPER: 0.283, k.FOREARM: 0.336, k.WRIST: 0.065, k.HALF_BREADTH: 0.173, k.ANKLE_Z: 0.10, k.LEG: 0.82, k.TRUNK: 0.48,
    k.BODY_FRONT: 0.13, k.CHEST_HALF: 0.145, k.FOOT: 0.29, k.TOE_AHEAD: 0.375,
}  # fmt: skip
STRENGTHS = {
    k.FLEXION: 90, k.EXTENSION: 112, k.ABDUCTION: 71, k.ADDUCTION: 67, k.HORIZONTAL_FLEXION: 92,
    k.HORIZONTAL_EXTENSION: 67, k.MEDIAL: 52, k.LATERAL: 33, k.ELBOW_FLEXION: 77, k.ELBOW_EXTENSION: 46,
    k.WRIST_FLEXION: 12.2, k.WRIST_EXTENSION: 7.1, k.RADIAL: 11, k.ULNAR: 9.5, k.GIRDLE_PULL: 430, k.GIRDLE_PUSH: 430,
    k.BREAKAWAY: 600, k.SLIDE: 113,
}  # fmt: skip


def operators(count, seed):
    """Return the packed standing operators (count, columns)."""
    rng = np.random.default_rng(seed)
    ops, size = np.zeros((count, k.OPERATOR_COLUMNS)), rng.normal(1.0, 0.05, count)
    for column, value in BODY.items():
        ops[:, column] = value * size
    ops[:, k.MASS] = 80.0 * size**2
    for column, share in ((k.UPPER_MASS, 0.0271), (k.FOREARM_MASS, 0.0162), (k.HAND_MASS, 0.0061)):
        ops[:, column] = share * ops[:, k.MASS]
    ops[:, k.UPPER_COM], ops[:, k.FOREARM_COM] = 0.577, 0.457
    ops[:, k.COM_LEG], ops[:, k.COM_TRUNK] = 0.73 * size, 0.21 * size
    ops[:, k.BACK_Y], ops[:, k.FRONT_Y] = -0.144, 0.271
    ops[:, k.HAND_DEPTH], ops[:, k.PROTRACTION] = 0.02, 0.057
    for column, value in STRENGTHS.items():
        ops[:, column] = value * rng.lognormal(0.0, 0.25, count)
    return ops


def scene(surface=0.9, friction=0.5, *, ball=False, seated=False):
    """Return the scene vector."""
    made = np.zeros(17)
    made[k.SURFACE_Z], made[k.FRICTION], made[k.BALL], made[k.SEATED] = surface, friction, float(ball), float(seated)
    made[k.BEND_MIN], made[k.BEND_MAX] = (-0.08, 0.35) if seated else (0.0, np.deg2rad(40.0))
    made[k.SEAT_Z] = 0.55 if seated else 0.0
    made[k.LEAN_MAX], made[k.SIDE_BASE], made[k.REACH_EASE] = np.sin(np.deg2rad(20.0)), 0.08, 0.95
    made[k.SWIVEL_LOW], made[k.SWIVEL_HIGH] = np.deg2rad([-90.0, 130.0])
    return made


def sit(op):
    """Return one operator seated."""
    made = op.copy()
    made[k.ANKLE_Z], made[k.LEG], made[k.COM_LEG], made[k.BACK_Y], made[k.FRONT_Y] = 0.64, 0.0, 0.097, -0.10, 0.45
    return made


def targets(rng, surface, positions):
    """Return random handle paths (positions, 9): grip, direction, grip axis."""
    length, start = rng.uniform(0.15, 0.4), rng.uniform(-60.0, 10.0)
    a = np.deg2rad(np.linspace(start, start + rng.uniform(30.0, 80.0), positions))
    pivot = np.array([rng.uniform(-0.1, 0.4), rng.uniform(0.05, 0.3), surface + rng.uniform(0.05, 0.4)])
    zero = np.zeros_like(a)
    grip = pivot + length * np.stack([zero, -np.sin(a), np.cos(a)], axis=1)
    way = rng.choice([-1.0, 1.0]) * np.stack([zero, -np.cos(a), -np.sin(a)], axis=1)
    tilt = rng.uniform(-1.0, 1.0)
    axis = np.tile([np.cos(tilt), 0.0, np.sin(tilt)], (positions, 1))
    if rng.random() < 0.5:
        axis = np.stack([zero, -np.sin(a + 0.3 * tilt), np.cos(a + 0.3 * tilt)], axis=1)
    return np.ascontiguousarray(np.concatenate([grip, way, axis], axis=1))
