"""The bare posture search: the strongest and the easiest posture at a stroke position within a stance.

A posture is three numbers: where the centre of mass stands over the feet (0 back, 1 front of the functional base),
the bend at the hips (rad) and the arm's swivel (rad). Stance and girdle bound the force without looking at the
swivel; so for each of the first two the swivel is only searched until the arm gives what they allow.
"""

import math

import numpy as np

from ergo.arm.kernels import (
    BALL,
    BEND_MAX,
    BEND_MIN,
    BODY_FRONT,
    CHEST_HALF,
    COM_SLACK,
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
    bare,
    front_at,
    judge_arm,
    place_body,
    stance_limit,
)  # fmt: skip

COM_STEPS, BEND_STEPS, SWIVEL_STEPS = 4, 5, 15
TOUCHING_GAP = 0.03  # m: a body this near the bench edge leans on it when braced
FINE = 0.011  # a search to smaller steps than this also looks at every swivel
NEVER = 1e9  # discomfort of a posture that does not carry what is needed
# Compass directions in units of (com share, bend): the best posture often sits on a ridge where two limits meet.
COMPASS = np.array([[1, 0], [-1, 0], [0, 1], [0, -1], [1, 1], [-1, -1], [1, -1], [-1, 1]], dtype=np.float64)


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
def best_swivel(op, shape, scene, limits, place, body, target, start, goal, wide):
    """Largest force of the arm over its swivel: (force, swivel, limit); left as soon as it gives `goal`.

    With `wide` the whole window is looked at first, else only the neighbourhood of `start`.
    """
    ball = scene[BALL] > 0.0
    best, code, _ = judge_arm(
        op, shape, limits, ball, place, body, target, math.cos(start), math.sin(start), NO_LIMIT, -1
    )
    at = start
    if best >= goal:
        return best, at, code
    step = (scene[SWIVEL_HIGH] - scene[SWIVEL_LOW]) / (SWIVEL_STEPS - 1)
    if wide or best < 0.0:
        turn_c, turn_s = math.cos(step), math.sin(step)
        c, s = math.cos(scene[SWIVEL_LOW]), math.sin(scene[SWIVEL_LOW])
        for k in range(SWIVEL_STEPS):
            force, limit, _ = judge_arm(op, shape, limits, ball, place, body, target, c, s, NO_LIMIT, -1)
            if force > best:
                best, at, code = force, scene[SWIVEL_LOW] + k * step, limit
                if best >= goal:
                    return best, at, code
            c, s = c * turn_c - s * turn_s, s * turn_c + c * turn_s
    while step > 0.006:
        step *= 0.5
        middle = at
        for side in (-1.0, 1.0):
            swivel = min(max(middle + side * step, scene[SWIVEL_LOW]), scene[SWIVEL_HIGH])
            force, limit, _ = judge_arm(
                op, shape, limits, ball, place, body, target, math.cos(swivel), math.sin(swivel), NO_LIMIT, -1
            )
            if force > best:
                best, at, code = force, swivel, limit
                if best >= goal:
                    return best, at, code
                break
    return best, at, code


@bare
def try_posture(op, shape, scene, limits, stand_x, stand_y, target, seen, com_share, bend, wide):
    """Judge a centre-of-mass place and a bend with their best swivel; keep them in `seen` (5,) if better.

    `seen` is com share, bend, swivel, force (below 0: how far from getting there), limit. Returns whether it was.
    """
    com_share = min(max(com_share, 0.0), 1.0)
    bend = min(max(bend, scene[BEND_MIN]), scene[BEND_MAX])
    value, code, place, body, ceiling, first, low, _ = prepare(
        op, scene, limits, stand_x, stand_y, target, com_share, bend
    )
    swivel = seen[2]
    if value >= 0.0:
        if ceiling <= seen[3]:
            return False
        value, swivel, arm_code = best_swivel(op, shape, scene, limits, place, body, target, swivel, ceiling, wide)
        code = arm_code
        if value >= ceiling:
            value, code = ceiling, first
        if 0.0 <= value < low:
            value = 0.0
    if value > seen[3] + 1e-4 * abs(seen[3]):
        seen[0], seen[1], seen[2], seen[3], seen[4] = com_share, bend, swivel, value, code
        return True
    return False


@bare
def along_bend(op, shape, scene, limits, stand_x, stand_y, target, line, bend, step, smallest, enough):
    """Best place of the centre of mass for one bend, from the place in `line` (5,), by steps that halve."""
    share = line[0]
    line[3] = -1e6
    try_posture(op, shape, scene, limits, stand_x, stand_y, target, line, share, bend, smallest < FINE)
    if scene[SEATED] > 0.0:
        return
    while step > smallest and line[3] < enough:
        middle, moved = line[0], False
        for side in (-1.0, 1.0):
            share = min(max(middle + side * step, 0.0), 1.0)
            if share != middle and try_posture(
                op, shape, scene, limits, stand_x, stand_y, target, line, share, bend, smallest < FINE
            ):  # fmt: skip
                moved = True
        if not moved:
            step *= 0.5


@bare
def look_from(op, shape, scene, limits, stand_x, stand_y, target, seen, step, smallest, enough):
    """Strongest posture near the one in `seen` (5,): bends by halving steps, the best place for each bend.

    Where two limits meet, the best place moves along with the bend; searching it for each bend follows that ridge.
    """
    line = seen.copy()
    along_bend(op, shape, scene, limits, stand_x, stand_y, target, line, seen[1], step, smallest, enough)
    seen[:] = line
    span = scene[BEND_MAX] - scene[BEND_MIN]
    while step > smallest and seen[3] < enough:
        middle, moved = seen[1], False
        for side in (-1.0, 1.0):
            bend = min(max(middle + side * step * span, scene[BEND_MIN]), scene[BEND_MAX])
            if bend == middle:
                continue
            line[:] = seen
            along_bend(op, shape, scene, limits, stand_x, stand_y, target, line, bend, step, smallest, enough)
            if line[3] > seen[3] + 1e-4 * abs(seen[3]):
                seen[:], moved = line, True
        if not moved:
            step *= 0.5


@bare
def look_everywhere(op, shape, scene, limits, stand_x, stand_y, target, seen, smallest, enough):
    """Strongest posture of all: a coarse look at each of a few bends, then `look_from` the best two of them."""
    # Leaning widens the way of the centre of mass, so more places are looked at.
    wide = COM_STEPS if scene[COM_SLACK] <= 0.0 else 2 * COM_STEPS
    steps = 1 if scene[SEATED] > 0.0 else wide
    lines = np.zeros((BEND_STEPS, 5))
    first, second = 0, -1
    for j in range(BEND_STEPS):
        line = lines[j]
        line[2], line[3] = seen[2], -1e6
        bend = scene[BEND_MIN] + j * (scene[BEND_MAX] - scene[BEND_MIN]) / (BEND_STEPS - 1)
        for i in range(steps):
            try_posture(op, shape, scene, limits, stand_x, stand_y, target, line, i / (wide - 1), bend, True)
        if line[3] >= enough:
            seen[:] = line
            return
        if line[3] > lines[first, 3]:
            first = j
    for j in range(BEND_STEPS):
        if abs(j - first) > 1 and (second < 0 or lines[j, 3] > lines[second, 3]):
            second = j
    seen[:] = lines[first]
    if smallest > 0.2:
        return
    look_from(op, shape, scene, limits, stand_x, stand_y, target, seen, 0.16, smallest, enough)
    if seen[3] < enough and second >= 0 and lines[second, 3] > 0.6 * seen[3]:
        other = lines[second]
        look_from(op, shape, scene, limits, stand_x, stand_y, target, other, 0.16, smallest, enough)
        if other[3] > seen[3]:
            seen[:] = other


@bare
def try_ease(op, shape, scene, limits, stand_x, stand_y, target, seen, com_share, bend, need, near):
    """Judge a place and a bend by the least discomfort of a swivel that carries `need`; keep it if easier.

    `seen` is com share, bend, swivel, force, discomfort; `near` looks only at swivels beside the one in `seen`.
    """
    com_share = min(max(com_share, 0.0), 1.0)
    bend = min(max(bend, scene[BEND_MIN]), scene[BEND_MAX])
    value, _, place, body, ceiling, _, low, ease = prepare(op, scene, limits, stand_x, stand_y, target, com_share, bend)
    if value < 0.0 or ceiling < need or low > need or ease >= seen[4]:
        return False
    ball, better = scene[BALL] > 0.0, False
    step = (scene[SWIVEL_HIGH] - scene[SWIVEL_LOW]) / (SWIVEL_STEPS - 1)
    first, count = (seen[2] - 0.5 * step, 3) if near else (scene[SWIVEL_LOW], SWIVEL_STEPS)
    step = 0.5 * step if near else step
    for k in range(count):
        swivel = min(max(first + k * step, scene[SWIVEL_LOW]), scene[SWIVEL_HIGH])
        force, _, bent = judge_arm(
            op, shape, limits, ball, place, body, target, math.cos(swivel), math.sin(swivel), NO_LIMIT, -1
        )
        if force >= need and ease + bent < seen[4] - 1e-3:
            seen[0], seen[1], seen[2], seen[3], seen[4] = com_share, bend, swivel, min(force, ceiling), ease + bent
            better = True
    return better


@bare
def look_for_ease(op, shape, scene, limits, stand_x, stand_y, target, seen, need, everywhere):
    """Easiest posture that carries `need` into `seen` (5,): a grid where `everywhere`, then a short compass."""
    seen[4] = NEVER
    span = scene[BEND_MAX] - scene[BEND_MIN]
    seated = scene[SEATED] > 0.0
    if everywhere:
        for i in range(1 if seated else COM_STEPS):
            for j in range(BEND_STEPS):
                bend = scene[BEND_MIN] + j * span / (BEND_STEPS - 1)
                try_ease(
                    op, shape, scene, limits, stand_x, stand_y, target, seen, i / (COM_STEPS - 1), bend, need, False
                )
    else:
        try_ease(op, shape, scene, limits, stand_x, stand_y, target, seen, seen[0], seen[1], need, True)
    step = 0.16 if everywhere else 0.04
    while step > 0.02 and seen[4] < NEVER:
        moved = False
        for n in range(4):
            if seated and COMPASS[n, 0] != 0.0:
                continue
            share, bend = seen[0] + step * COMPASS[n, 0], seen[1] + step * span * COMPASS[n, 1]
            if try_ease(op, shape, scene, limits, stand_x, stand_y, target, seen, share, bend, need, True):
                moved = True
        if not moved:
            step *= 0.5


@bare
def judge_posture(op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel):
    """One posture as it is: (force or shortfall, limit)."""
    value, code, place, body, ceiling, first, low, _ = prepare(
        op, scene, limits, stand_x, stand_y, target, com_share, bend
    )
    if value < 0.0:
        return value, code
    force, code, _ = judge_arm(
        op, shape, limits, scene[BALL] > 0.0, place, body, target, math.cos(swivel), math.sin(swivel), ceiling, first
    )
    return (force if force >= low else min(force, 0.0)), code
