"""The bare search: the best posture at a stroke position within a stance, and the best stance for a stroke.

A posture is three numbers: where the centre of mass stands over the feet (0 back, 1 front of the functional
base), the bend at the hips (rad) and the arm's swivel (rad). A stance is two: the body's midline x and the ankles'
(or hips') y. Positions are visited worst first, so that a poor stance is left after few of them.
"""

import math

import numpy as np
from numba import prange

from ergo.arm.kernels import (
    BALL,
    BEND_MAX,
    BEND_MIN,
    BODY_FRONT,
    CHEST_HALF,
    COS_ELBOW_MIN,
    FOREARM,
    FOREARM_MASS,
    GIRDLE_PULL,
    GIRDLE_PUSH,
    HALF_BREADTH,
    HAND_DEPTH,
    HAND_MASS,
    LIMIT_GIRDLE,
    LIMIT_REACH,
    LIMIT_TOO_CLOSE,
    LIMIT_TRUNK_IN_WAY,
    MASS,
    NO_LIMIT,
    PROTRACTION,
    REACH_EASE,
    SEATED,
    SWIVEL_HIGH,
    SWIVEL_LOW,
    UPPER,
    UPPER_MASS,
    WRIST,
    arm_lines,
    bare,
    bare_parallel,
    front_at,
    hand_axis,
    judge_arm,
    place_body,
    shoulder_axes,
    stance_limit,
)

COM_STEPS, BEND_STEPS, SWIVEL_STEPS = 4, 4, 8
STANCES_X, STANCES_Y, STARTS = 3, 5, 3
FULL_LOOK_EVERY = 4
STANCE_COMPASS = np.array(
    [[1, 0], [-1, 0], [0, 1], [0, -1], [1, 1], [-1, -1], [1, -1], [-1, 1]], dtype=np.float64
)
TOUCHING_GAP = 0.03  # m: a body this near the bench edge leans on it when braced


@bare
def hand_in_trunk(op, target, stand_x, body, shoulder_z):
    """Whether the grip lies inside or behind the front of the trunk."""
    if abs(target[0] - stand_x) > op[CHEST_HALF] or target[2] < body[1] or target[2] > shoulder_z:
        return False
    line = body[0] + (target[2] - body[1]) * body[2] / max(body[3], 0.2)
    return target[1] < line + op[BODY_FRONT] + op[HAND_DEPTH]


@bare
def prepare(op, scene, limits, stand_x, stand_y, target, com_share, bend):
    """All that a posture decides before the arm swivels.

    Returns (value, limit, place, body, ceiling, ceiling limit, smallest force, discomfort): a value of 0 or more
    means that the hand gets there; below, how far it is from getting there.
    """
    fault, hip_y, hip_z, sin_t, cos_t, shoulder_y, shoulder_z, com, sin_l = place_body(
        op, scene, stand_y, com_share, bend
    )
    body = (hip_y, hip_z, sin_t, cos_t)
    place = (stand_x + op[HALF_BREADTH], shoulder_y, shoulder_z, stand_x)
    if fault >= 0:
        return -4.0, fault, place, body, 0.0, fault, 0.0, 9.0
    rx, ry, rz = target[0] - place[0], target[1] - shoulder_y, target[2] - shoulder_z
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    longest = op[UPPER] + op[FOREARM]
    # The shoulder comes forward only as far as the reach asks for it.
    toward = max((ry * cos_t - rz * sin_t) / far, 0.2)
    forward = min(max((far - scene[REACH_EASE] * longest) / toward, 0.0), op[PROTRACTION])
    place = (place[0], shoulder_y + forward * cos_t, shoulder_z - forward * sin_t, stand_x)
    rx, ry, rz = target[0] - place[0], target[1] - place[1], target[2] - place[2]
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    if far > 0.999 * longest:
        return -1.0 - (far - 0.999 * longest), LIMIT_REACH, place, body, 0.0, LIMIT_REACH, 0.0, 9.0
    nearest = op[UPPER] ** 2 + op[FOREARM] ** 2 - 2.0 * op[UPPER] * op[FOREARM] * limits[COS_ELBOW_MIN]
    if far * far < nearest:
        short = math.sqrt(nearest) - far
        return -1.0 - short, LIMIT_TOO_CLOSE, place, body, 0.0, LIMIT_TOO_CLOSE, 0.0, 9.0
    if hand_in_trunk(op, target, stand_x, body, shoulder_z):
        return -0.6, LIMIT_TRUNK_IN_WAY, place, body, 0.0, LIMIT_TRUNK_IN_WAY, 0.0, 9.0
    arm_share = (op[UPPER_MASS] + op[FOREARM_MASS] + op[HAND_MASS]) / op[MASS]
    touching = front_at(op, scene, stand_y, hip_y, hip_z, sin_t, cos_t, shoulder_z) > -TOUCHING_GAP
    ceiling, code, low = stance_limit(
        op, scene, stand_y, com + 0.5 * arm_share * ry, 0.5 * arm_share * rx, touching,
        target[0] - stand_x, target[1], target[2], target[3], target[4], target[5],
    )  # fmt: skip
    line = (rx * target[3] + ry * target[4] + rz * target[5]) / far
    girdle = op[GIRDLE_PUSH] / line if line > 1e-6 else (op[GIRDLE_PULL] / -line if line < -1e-6 else NO_LIMIT)
    if girdle < ceiling:
        ceiling, code = girdle, LIMIT_GIRDLE
    discomfort = 2.0 * (1.0 - cos_t) + 4.0 * sin_l * sin_l + 4.0 * forward * forward
    return 0.0, code, place, body, ceiling, code, low, discomfort


@bare
def judge_prepared(op, shape, scene, limits, ready, target, swivel, need):
    """One swivel of a prepared posture: (merit, force or shortfall, limit).

    The merit is what the search makes large: force, with a trace of what the arm alone could give, so that flat
    stretches under a stance limit still lead somewhere; once `need` is met, comfort.
    """
    value, code, place, body, ceiling, _, low, ease = ready
    arm, arm_code, bent = judge_arm(
        op, shape, limits, scene[BALL] > 0.0, place, body, target, math.cos(swivel), math.sin(swivel), NO_LIMIT, -1
    )
    if arm < 0.0:
        return arm, arm, arm_code
    force = min(arm, ceiling)
    if arm < ceiling:
        code = arm_code
    if force < low:
        force = 0.0
    if need >= 0.0 and force >= need:
        return 1e6 - ease - bent, force, code
    return force + 1e-3 * min(arm, 1e4), force, code


@bare
def judge_posture(op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, need):
    """One posture: (merit, force or shortfall, limit)."""
    ready = prepare(op, scene, limits, stand_x, stand_y, target, com_share, bend)
    if ready[0] < 0.0:
        return ready[0], ready[0], ready[1]
    return judge_prepared(op, shape, scene, limits, ready, target, swivel, need)


@bare
def grid_posture(op, shape, scene, limits, stand_x, stand_y, target, need, starts):
    """Coarse look over all postures: the best of each swivel into `starts` (SWIVEL_STEPS, 5).

    A row is com share, bend, swivel, force, merit. Returns the limit that keeps the hand away where all do.
    """
    steps = 1 if scene[SEATED] > 0.0 else COM_STEPS
    limit, nearest, best = LIMIT_REACH, -1e6, -1e6
    starts[:, 4] = -1e6
    span = (scene[SWIVEL_HIGH] - scene[SWIVEL_LOW]) / (SWIVEL_STEPS - 1)
    for i in range(steps):
        share = i / (COM_STEPS - 1)
        for j in range(BEND_STEPS):
            bend = scene[BEND_MIN] + j * (scene[BEND_MAX] - scene[BEND_MIN]) / (BEND_STEPS - 1)
            ready = prepare(op, scene, limits, stand_x, stand_y, target, share, bend)
            if ready[0] < 0.0 or (need < 0.0 and ready[4] < 0.7 * best):
                if ready[0] < 0.0 and ready[0] > nearest:
                    nearest, limit = ready[0], ready[1]
                    starts[0, 0], starts[0, 1], starts[0, 2] = share, bend, 0.5
                continue
            for k in range(SWIVEL_STEPS):
                swivel = scene[SWIVEL_LOW] + k * span
                merit, force, code = judge_prepared(op, shape, scene, limits, ready, target, swivel, need)
                if merit > starts[k, 4] and merit > nearest:
                    starts[k, 0], starts[k, 1], starts[k, 2] = share, bend, swivel
                    starts[k, 3], starts[k, 4] = force, merit
                    best = max(best, merit)
                    if force < 0.0:
                        limit = code
    if best < -1e5:
        starts[0, 3], starts[0, 4] = nearest, nearest
    return limit


# Compass directions in units of (com share, bend, swivel): the axes first, then the diagonals of each pair, because
# the best posture often sits on a ridge where two limits meet.
COMPASS = np.array(
    [[1, 0, 0], [-1, 0, 0], [0, 1, 0], [0, -1, 0], [0, 0, 1], [0, 0, -1],
     [1, 1, 0], [-1, -1, 0], [1, -1, 0], [-1, 1, 0], [0, 1, 1], [0, -1, -1], [0, 1, -1], [0, -1, 1],
     [1, 0, 1], [-1, 0, -1], [1, 0, -1], [-1, 0, 1]], dtype=np.float64
)  # fmt: skip


@bare
def refine_posture(op, shape, scene, limits, stand_x, stand_y, target, need, found, step, smallest, enough):
    """Compass search from `found` with halving steps, left early once the force is `enough`."""
    bend_span, swivel_span = scene[BEND_MAX] - scene[BEND_MIN], scene[SWIVEL_HIGH] - scene[SWIVEL_LOW]
    seated = scene[SEATED] > 0.0
    while step > smallest:
        moved = False
        for n in range(COMPASS.shape[0]):
            if n >= 6 and moved:
                break
            if seated and COMPASS[n, 0] != 0.0:
                continue
            com_share = min(max(found[0] + step * COMPASS[n, 0], 0.0), 1.0)
            bend = min(max(found[1] + step * bend_span * COMPASS[n, 1], scene[BEND_MIN]), scene[BEND_MAX])
            swivel = found[2] + step * swivel_span * COMPASS[n, 2]
            swivel = min(max(swivel, scene[SWIVEL_LOW]), scene[SWIVEL_HIGH])
            merit, force, _ = judge_posture(
                op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, need
            )
            if merit > found[4] + 1e-9:
                found[0], found[1], found[2], found[3], found[4] = com_share, bend, swivel, force, merit
                moved = True
                if force >= enough:
                    return
        if not moved:
            step *= 0.5


@bare
def look_again(op, shape, scene, limits, stand_x, stand_y, target, seen, need, smallest, enough):
    """Full look at one position: coarse grid, then the compass from its two best swivels, into `seen` (5,)."""
    starts = np.zeros((SWIVEL_STEPS, 5))
    grid_posture(op, shape, scene, limits, stand_x, stand_y, target, need, starts)
    first, second = 0, -1
    for k in range(1, SWIVEL_STEPS):
        if starts[k, 4] > starts[first, 4]:
            first = k
    for k in range(SWIVEL_STEPS):
        if abs(k - first) > 1 and (second < 0 or starts[k, 4] > starts[second, 4]):
            second = k
    if starts[first, 3] < enough:
        refine_posture(op, shape, scene, limits, stand_x, stand_y, target, need, starts[first], 0.125, smallest, enough)
        if starts[first, 3] < enough and starts[second, 4] > 0.5 * starts[first, 4]:
            refine_posture(
                op, shape, scene, limits, stand_x, stand_y, target, need, starts[second], 0.125, smallest, enough
            )
            first = second if starts[second, 4] > starts[first, 4] else first
    seen[:] = starts[first]


@bare
def look_from(op, shape, scene, limits, stand_x, stand_y, target, seen, need, step, smallest, enough):
    """Short look at one position: the compass from the posture in `seen` (5,) only."""
    merit, force, _ = judge_posture(
        op, shape, scene, limits, stand_x, stand_y, target, seen[0], seen[1], seen[2], need
    )
    seen[3], seen[4] = force, merit
    if force < enough:
        refine_posture(op, shape, scene, limits, stand_x, stand_y, target, need, seen, step, smallest, enough)


@bare
def stance_worth(op, shape, scene, limits, stand_x, stand_y, targets, weights, visit, floor, found):
    """Worst position's margin of a stance, left early once it falls to `floor`.

    `visit` is the order of positions; the position that decided is moved to its front. `found` (P, 5) holds each
    position's last best posture, from which the search starts again; a position that clears the floor by a tenth
    is not searched further, and a stance is only left after a full look at the position that decides.
    """
    worst = NO_LIMIT
    for n in range(visit.shape[0]):
        p = visit[n]
        seen = found[p]
        enough = 1.1 * max(floor, 0.0) / weights[p]
        look_from(op, shape, scene, limits, stand_x, stand_y, targets[p], seen, -1.0, 0.125, 0.03, enough)
        if seen[3] * weights[p] <= floor or seen[3] < 0.0:
            look_again(op, shape, scene, limits, stand_x, stand_y, targets[p], seen, -1.0, 0.03, enough)
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
            # A stance a little worse than the best so far may still lead to a better one.
            floor = best - 0.1 * abs(best)
            row[0] = stance_worth(op, shape, scene, limits, row[1], row[2], targets, weights, visit, floor, found)
            best = max(best, row[0])
    order = np.argsort(-tried[:, 0])
    best = -1e9
    for start in range(STARTS):
        row = tried[order[start]]
        if row[0] < tried[order[0], 0] - 0.1 * abs(tried[order[0], 0]):
            break
        climb_stance(op, shape, scene, limits, window, targets, weights, visit, found, row)
        if row[0] > best:
            best, stance[0], stance[1] = row[0], row[1], row[2]
    return best


@bare
def climb_stance(op, shape, scene, limits, window, targets, weights, visit, found, row):
    """Compass search of a stance from `row` (worth, x, y)."""
    step = 0.125
    while step > 0.015:
        moved = False
        for n in range(8):
            x = row[1] + step * STANCE_COMPASS[n, 0] * (window[1] - window[0])
            y = row[2] + step * STANCE_COMPASS[n, 1] * (window[3] - window[2])
            x, y = min(max(x, window[0]), window[1]), min(max(y, window[2]), window[3])
            if x == row[1] and y == row[2]:
                continue
            value = stance_worth(op, shape, scene, limits, x, y, targets, weights, visit, row[0], found)
            if value > row[0] + 1e-9:
                row[0], row[1], row[2], moved = value, x, y, True
        if not moved:
            step *= 0.5


@bare
def follow_stroke(op, shape, scene, limits, stance, targets, needs, found, ease):
    """Best posture at every position into `found` (P, 5): a full look at every fourth, short looks between.

    With `ease` the easiest posture that carries `needs` (P,), else the strongest.
    """
    count = targets.shape[0]
    trial = np.zeros(5)
    for p in range(count):
        if p % FULL_LOOK_EVERY == 0 or p == count - 1:
            need = needs[p] if ease else -1.0
            look_again(op, shape, scene, limits, stance[0], stance[1], targets[p], found[p], need, 0.015, NO_LIMIT)
    for p in range(count):
        if p % FULL_LOOK_EVERY == 0 or p == count - 1:
            continue
        need = needs[p] if ease else -1.0
        found[p, 4] = -1e9
        after = min(p + FULL_LOOK_EVERY - p % FULL_LOOK_EVERY, count - 1)
        for start in (p - 1, after):
            trial[:] = found[start]
            look_from(
                op, shape, scene, limits, stance[0], stance[1], targets[p], trial, need, 0.03125, 0.015, NO_LIMIT
            )
            if trial[4] > found[p, 4]:
                found[p, :] = trial
        if found[p, 4] < 0.0:
            look_again(op, shape, scene, limits, stance[0], stance[1], targets[p], found[p], need, 0.015, NO_LIMIT)


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
    for _ in range(4):
        visit = np.nonzero(chosen)[0]
        promised = best_stance(op, shape, scene, limits, window, targets, weights, visit, found, stance)
        follow_stroke(op, shape, scene, limits, stance, targets, needs, strongest, False)
        worst, where = NO_LIMIT, 0
        for p in range(count):
            margin = strongest[p, 3] * weights[p] if strongest[p, 3] >= 0.0 else strongest[p, 3]
            if margin < worst:
                worst, where = margin, p
        if chosen[where] or worst >= promised * (0.99 if promised > 0.0 else 1.01):
            break
        chosen[where] = True
        found[where] = strongest[where]
    out[:, 0:4] = strongest[:, 0:4]
    out[:, 4:8] = strongest[:, 0:4]
    follow_stroke(op, shape, scene, limits, stance, targets, needs, found, True)
    for p in range(count):
        seen = strongest[p]
        codes[p] = judge_posture(
            op, shape, scene, limits, stance[0], stance[1], targets[p], seen[0], seen[1], seen[2], -1.0
        )[2]
        if strongest[p, 3] >= needs[p] and found[p, 3] >= needs[p]:
            out[p, 4:8] = found[p, 0:4]


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
