"""The bare stance search: one stance for the whole stroke, chosen for its worst position.

A stance is the body's midline x and the ankles' (or hips') y. Positions are visited worst first, so that a poor
stance is left after few of them.
"""

import math

import numpy as np
from numba import prange

from ergo.arm.kernels import (
    BALL,
    FOREARM,
    NO_LIMIT,
    UPPER,
    WRIST,
    arm_lines,
    bare,
    bare_parallel,
    hand_axis,
    place_body,
    shoulder_axes,
)  # fmt: skip
from ergo.arm.posture_search import NEVER, look_everywhere, look_for_ease, look_from, prepare

STANCES_X, STANCES_Y, STARTS = 6, 5, 3
FULL_LOOK_EVERY = 5
COARSE = 0.02  # steps of the search where a position does not decide
HOPELESS = 0.85  # a short look this far below the floor is not followed by a full one
STANCE_COMPASS = np.array(
    [[1, 0], [-1, 0], [0, 1], [0, -1], [1, 1], [-1, -1], [1, -1], [-1, 1]], dtype=np.float64
)


@bare
def stance_worth(op, shape, scene, limits, stand_x, stand_y, targets, weights, visit, floor, found, smallest):
    """Worst position's margin of a stance, left early once it falls to `floor`.

    `visit` is the order of positions; the position that decided is moved to its front. `found` (P, 5) holds each
    position's last best posture, from which the search starts again; a position that clears the floor well is not
    searched further, and a stance is only left after a full look at the position that decides. With `smallest` of
    1 and over only the coarse grid is looked at.
    """
    worst = NO_LIMIT
    for n in range(visit.shape[0]):
        p = visit[n]
        seen = found[p]
        enough = 1.1 * max(floor, 0.0) / weights[p] + 1e-6
        if smallest < 1.0:
            look_from(op, shape, scene, limits, stand_x, stand_y, targets[p], seen, 0.08, smallest, enough)
        hopeless = smallest < 1.0 and 0.0 < seen[3] * weights[p] < HOPELESS * floor
        if smallest >= 1.0 or seen[3] < 0.0 or (seen[3] * weights[p] <= floor and not hopeless):
            look_everywhere(op, shape, scene, limits, stand_x, stand_y, targets[p], seen, smallest, enough)
        margin = seen[3] * weights[p] if seen[3] >= 0.0 else seen[3]
        if margin < worst:
            worst = margin
            if worst <= floor:
                for m in range(n, 0, -1):
                    visit[m] = visit[m - 1]
                visit[0] = p
                return worst
    return worst


@bare
def best_stance(op, shape, scene, limits, window, targets, weights, visit, found, stance):
    """Best stance inside `window` (x low, x high, y low, y high) over the visited positions; returns its margin."""
    tried = np.full((STANCES_X * STANCES_Y, 3), -1e9)
    fixed = window[3] - window[2] < 1e-6
    best = -1e9
    for i in range(STANCES_Y if not fixed else 1):
        for j in range(STANCES_X):
            row = tried[i * STANCES_X + j]
            row[1] = window[0] + (window[1] - window[0]) * (j + 0.5) / STANCES_X
            row[2] = window[3] - (window[3] - window[2]) * i / (STANCES_Y - 1)
            # A stance that looks worse on the coarse grid may still lead to a better one.
            floor = best - 0.3 * abs(best)
            row[0] = stance_worth(op, shape, scene, limits, row[1], row[2], targets, weights, visit, floor, found, 1.0)
            best = max(best, row[0])
    order = np.argsort(-tried[:, 0])
    final = np.full(3, -1e9)
    for start in range(STARTS):
        row = tried[order[start]]
        row[0] = stance_worth(op, shape, scene, limits, row[1], row[2], targets, weights, visit, -1e9, found, 0.04)
        if row[0] < HOPELESS * final[0]:
            continue
        climb_stance(op, shape, scene, limits, window, targets, weights, visit, found, row, 0.1, 0.03, 0.04)
        if row[0] > final[0]:
            final[:] = row
    climb_stance(op, shape, scene, limits, window, targets, weights, visit, found, final, 0.06, 0.006, 0.008)
    stance[0], stance[1] = final[1], final[2]
    return final[0]


@bare
def climb_stance(op, shape, scene, limits, window, targets, weights, visit, found, row, step, last, smallest):
    """Compass search of a stance from `row` (worth, x, y), with a bold step along each gain."""
    while step > last:
        moved = False
        was_x, was_y = row[1], row[2]
        for n in range(9):
            if n >= 4 and n < 8 and moved:
                continue
            if n == 8 and not moved:
                break
            x = row[1] + step * STANCE_COMPASS[n % 8, 0] * (window[1] - window[0])
            y = row[2] + step * STANCE_COMPASS[n % 8, 1] * (window[3] - window[2])
            if n == 8:
                x, y = 2.0 * row[1] - was_x, 2.0 * row[2] - was_y
            x, y = min(max(x, window[0]), window[1]), min(max(y, window[2]), window[3])
            if x == row[1] and y == row[2]:
                continue
            value = stance_worth(op, shape, scene, limits, x, y, targets, weights, visit, row[0], found, smallest)
            if value > row[0] + 5e-4 * abs(row[0]):
                row[0], row[1], row[2], moved = value, x, y, True
        if not moved:
            step *= 0.5


@bare
def follow_strongest(op, shape, scene, limits, stance, targets, found):
    """Strongest posture at every position into `found` (P, 5): a full look at every few, short looks between."""
    count = targets.shape[0]
    trial = np.zeros(5)
    for p in range(count):
        if p % FULL_LOOK_EVERY == 0 or p == count - 1:
            look_everywhere(op, shape, scene, limits, stance[0], stance[1], targets[p], found[p], COARSE, NO_LIMIT)
    for p in range(count):
        if p % FULL_LOOK_EVERY == 0 or p == count - 1:
            continue
        found[p, 3] = -1e9
        after = min(p + FULL_LOOK_EVERY - p % FULL_LOOK_EVERY, count - 1)
        for start in (p - 1, after):
            # The second neighbour is only asked where the first leads to less than either has.
            if found[p, 3] >= 0.98 * min(found[p - 1, 3], found[after, 3]) and found[p, 3] > 0.0:
                break
            trial[:] = found[start]
            look_from(op, shape, scene, limits, stance[0], stance[1], targets[p], trial, 0.04, COARSE, NO_LIMIT)
            if trial[3] > found[p, 3]:
                found[p, :] = trial
        if found[p, 3] < 0.0:
            look_everywhere(op, shape, scene, limits, stance[0], stance[1], targets[p], found[p], COARSE, NO_LIMIT)


@bare
def follow_easiest(op, shape, scene, limits, stance, targets, needs, strongest, out):
    """Easiest posture that carries `needs` (P,) at every position into `out` (P, 8); the strongest where none does."""
    seen = np.zeros(5)
    fresh = True
    for p in range(targets.shape[0]):
        out[p, 4:8] = strongest[p, 0:4]
        if strongest[p, 3] < needs[p] or strongest[p, 3] < 0.0:
            fresh = True
            continue
        everywhere = fresh or p % FULL_LOOK_EVERY == 0
        look_for_ease(op, shape, scene, limits, stance[0], stance[1], targets[p], seen, needs[p], everywhere)
        if seen[4] >= NEVER and not everywhere:
            look_for_ease(op, shape, scene, limits, stance[0], stance[1], targets[p], seen, needs[p], True)
        fresh = seen[4] >= NEVER
        if not fresh:
            out[p, 4:8] = seen[0:4]


@bare
def serve_operator(op, shape, scene, limits, window, targets, weights, needs, out, codes, stance):
    """One operator: the stance for the whole stroke, then strongest and easiest posture at every position.

    `out` (P, 8): strongest com share, bend, swivel, force (below 0: not reached); easiest com share, bend, swivel,
    force. `codes` (P,) the limit of the strongest.
    """
    count = targets.shape[0]
    found, strongest = np.zeros((count, 5)), np.zeros((count, 5))
    found[:, 0], found[:, 2] = 0.5, 0.5
    chosen = np.zeros(count, np.bool_)
    chosen[0] = chosen[count - 1] = chosen[count // 2] = chosen[np.argmin(weights)] = True
    for _ in range(3):
        visit = np.nonzero(chosen)[0]
        promised = best_stance(op, shape, scene, limits, window, targets, weights, visit, found, stance)
        follow_strongest(op, shape, scene, limits, stance, targets, strongest)
        worst, where = NO_LIMIT, 0
        for p in range(count):
            margin = strongest[p, 3] * weights[p] if strongest[p, 3] >= 0.0 else strongest[p, 3]
            if margin < worst:
                worst, where = margin, p
        look_everywhere(op, shape, scene, limits, stance[0], stance[1], targets[where], strongest[where], 0.004, NO_LIMIT)
        if strongest[where, 3] >= 0.0:
            worst = strongest[where, 3] * weights[where]
        if chosen[where] or worst >= promised * (0.99 if promised > 0.0 else 1.01):
            break
        chosen[where] = True
        found[where] = strongest[where]
    out[:, 0:4] = strongest[:, 0:4]
    for p in range(count):
        codes[p] = int(strongest[p, 4])
    follow_easiest(op, shape, scene, limits, stance, targets, needs, strongest, out)


@bare_parallel
def serve(ops, shape, scene, limits, windows, targets, weights, needs, out, codes, stances):
    """Every operator, in parallel; each writes only its own rows, so the order of threads changes nothing."""
    for n in prange(ops.shape[0]):
        serve_operator(
            ops[n], shape, scene, limits, windows[n], targets, weights, needs, out[n], codes[n], stances[n]
        )


@bare
def describe_posture(op, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, row):
    """Points and lines of one posture into `row` (27,): see `ergo.arm.posture.Posture`."""
    value, _, place, body, _, _, _, _ = prepare(op, scene, limits, stand_x, stand_y, target, com_share, bend)
    sin_l, com = place_body(op, scene, stand_y, com_share, bend)[8], place_body(op, scene, stand_y, com_share, bend)[7]
    row[0:4] = np.array([body[0], body[1], body[2], body[3]])
    row[4], row[5], row[6] = place[0], place[1], place[2]
    rx, ry, rz = target[0] - place[0], target[1] - place[1], target[2] - place[2]
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    longest = 0.999 * (op[UPPER] + op[FOREARM])
    if far > longest:  # drawn at full stretch toward a handle that is not reached
        rx, ry, rz = rx * longest / far, ry * longest / far, rz * longest / far
    lines = arm_lines(rx, ry, rz, op[UPPER], op[FOREARM], math.cos(swivel), math.sin(swivel))
    axes = shoulder_axes(lines[0], lines[1], lines[2], body[2], body[3])
    _, tx, ty, tz, _ = hand_axis(lines + axes, target, scene[BALL] > 0.0, limits)
    for k in range(3):
        row[7 + k] = place[k] + op[UPPER] * lines[k]
        row[10 + k] = place[k] + op[UPPER] * lines[k] + (op[FOREARM] - op[WRIST]) * lines[3 + k]
        row[13 + k], row[16 + k] = lines[k], lines[3 + k]
    wx, wy, wz = (lines[7] * lines[5] - lines[8] * lines[4], lines[8] * lines[3] - lines[6] * lines[5],
                  lines[6] * lines[4] - lines[7] * lines[3])  # fmt: skip
    row[19] = tx * wx + ty * wy + tz * wz
    row[20] = tx * lines[6] + ty * lines[7] + tz * lines[8]
    along = target[6] * lines[3] + target[7] * lines[4] + target[8] * lines[5]
    same_way = target[6] * tx + target[7] * ty + target[8] * tz
    row[21] = 0.0 if scene[BALL] > 0.0 else (along if same_way >= 0.0 else -along)
    row[22], row[23], row[24], row[25], row[26] = com, sin_l, axes[2], axes[3], value


@bare_parallel
def describe(ops, scene, limits, stances, targets, postures, rows):
    """Points and lines of every operator's posture (n, P, 3) at every position into `rows` (n, P, 27)."""
    for n in prange(ops.shape[0]):
        for p in range(targets.shape[0]):
            chosen = postures[n, p]
            describe_posture(
                ops[n], scene, limits, stances[n, 0], stances[n, 1], targets[p], chosen[0], chosen[1], chosen[2],
                rows[n, p],
            )  # fmt: skip
