"""The bare outlines: points and lines of the postures that the search chose."""

import math

import numpy as np
from numba import prange

from ergo.arm import kernels as k
from ergo.arm.kernels import arm_lines, bare, bare_parallel, place_body, shoulder_axes
from ergo.arm.posture_limits import COLUMNS, body_limits, hand_axis


@bare
def outline(op, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, row):
    """Points and lines of one posture into `row` (24,): see `ergo.arm.posture.Posture`."""
    place, body, _ = body_limits(op, scene, limits, stand_x, stand_y, target, com_share, bend, np.zeros(COLUMNS))
    placed = place_body(op, scene, stand_y, com_share, bend)
    row[0], row[1], row[2], row[3] = body
    row[4], row[5], row[6] = place[0], place[1], place[2]
    rx, ry, rz = target[0] - place[0], target[1] - place[1], target[2] - place[2]
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    longest = 0.999 * (op[k.UPPER] + op[k.FOREARM])
    if far > longest:  # drawn at full stretch toward a handle that is not reached
        rx, ry, rz = rx * longest / far, ry * longest / far, rz * longest / far
    lines = arm_lines(rx, ry, rz, op[k.UPPER], op[k.FOREARM], math.cos(swivel), math.sin(swivel))
    arm = lines + shoulder_axes(lines[0], lines[1], lines[2], body[2], body[3])
    ball = scene[k.BALL] > 0.0
    tx, ty, tz, _, _, _ = hand_axis(arm, target, ball)
    for n in range(3):
        row[7 + n] = place[n] + op[k.UPPER] * lines[n]
        row[10 + n] = place[n] + op[k.UPPER] * lines[n] + (op[k.FOREARM] - op[k.WRIST]) * lines[3 + n]
        row[13 + n], row[16 + n] = lines[n], lines[3 + n]
    wx, wy, wz = (lines[7] * lines[5] - lines[8] * lines[4], lines[8] * lines[3] - lines[6] * lines[5],
                  lines[6] * lines[4] - lines[7] * lines[3])  # fmt: skip
    row[19] = tx * wx + ty * wy + tz * wz
    row[20] = tx * lines[6] + ty * lines[7] + tz * lines[8]
    along = target[6] * lines[3] + target[7] * lines[4] + target[8] * lines[5]
    same_way = target[6] * tx + target[7] * ty + target[8] * tz
    row[21] = 0.0 if ball else (along if same_way >= 0.0 else -along)
    row[22], row[23] = placed[6], placed[7]


@bare_parallel
def describe(ops, scene, limits, stances, targets, postures, rows):
    """Points and lines of every operator's posture (n, P, 3) at every position into `rows` (n, P, 24)."""
    for n in prange(ops.shape[0]):
        for p in range(targets.shape[0]):
            chosen = postures[n, p]
            outline(
                ops[n], scene, limits, stances[n, 0], stances[n, 1], targets[p], chosen[0], chosen[1], chosen[2],
                rows[n, p],
            )  # fmt: skip
