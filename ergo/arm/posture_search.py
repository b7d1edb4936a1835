"""The bare posture search: the strongest and the easiest posture at a stroke position within a stance.

A posture is three numbers: where the centre of mass stands over the feet (0 back, 1 front of the functional base),
the bend at the hips (rad) and the arm's swivel (rad). A coarse look over all three finds where to start, linear
steps do the rest.
"""

import math

import numpy as np

from ergo.arm import kernels as k
from ergo.arm.kernels import bare
from ergo.arm.linear_steps import improve
from ergo.arm.posture_limits import (
    CLOSE,
    EASE,
    LOADS,
    LOW,
    REACH,
    ROOMS_END,
    arm_is_formed,
    arm_limits,
    body_limits,
    judge_posture,
    verdict,
)

BENDS, SHARES, SWIVELS = 4, 3, 6  # of a full look
HARD_BENDS, HARD_SHARES = 5, 4
AS_GOOD = 0.97  # a position that came out this much worse than its neighbour is tried again
ROOMY = 0.05  # a bound nearer than this [m, or as a cosine or sine] speaks against a posture in the coarse look
SECOND_WORTH = 1.7  # a second start is followed if its load is up to this much larger than the first's
STRIDE = 5  # positions from one full look to the next
ALL_STEPS, FEW_STEPS = np.array([24]), np.array([10])  # arrays, so that numba compiles one search for all
FINE, COARSE, EASY = 0.002, 0.01, 0.02  # shares of what is sought that the steps still have to promise
MISSED = 1e6  # badness of a posture that is not possible, and more the more room is missing
NEVER = 1e9


@bare
def badness(row, weight, need):
    """What the coarse look makes small: load and lacking room; with a `need`, the discomfort where it is carried."""
    room, top = 1.0, 0.0
    for n in range(LOADS, ROOMS_END):
        room = min(room, row[n])
    for n in range(LOADS):
        top = max(top, row[n])
    if need < 0.0:
        room = min(room, 1.0 - row[LOW] * top)
        if room < 0.0:
            return MISSED * (1.0 - room)
        return top / weight * (1.0 + 0.3 * max(1.0 - room / ROOMY, 0.0))
    lacking = max(need * top - 1.0, (row[LOW] - need) / (need + 1.0), -100.0 * room, 0.0)
    return row[EASE] + 50.0 * lacking


@bare
def look(person, stand_x, stand_y, target, weight, need, bends, shares, starts, row):
    """Coarse look at all postures: the best of each bend into `starts` (bends, 4): share, bend, swivel, badness."""
    op, shape, scene, limits = person
    ball = scene[k.BALL] > 0.0
    shares = 1 if scene[k.SEATED] > 0.0 else (2 * shares if scene[k.COM_SLACK] > 0.0 else shares)
    width = (scene[k.SWIVEL_HIGH] - scene[k.SWIVEL_LOW]) / SWIVELS
    for i in range(bends):
        start = starts[i]
        start[3] = NEVER
        bend = scene[k.BEND_MIN] + (scene[k.BEND_MAX] - scene[k.BEND_MIN]) * (i + 0.15) / (bends - 0.7)
        for j in range(shares):
            share = (j + 0.5) / shares
            place, body, ease = body_limits(op, scene, limits, stand_x, stand_y, target, share, bend, row)
            formed = arm_is_formed(row)
            for s in range(SWIVELS if formed else 1):
                swivel = scene[k.SWIVEL_LOW] + (s + 0.5) * width
                if formed:
                    row[EASE] = ease + arm_limits(
                        op, shape, limits, ball, place, body, target, math.cos(swivel), math.sin(swivel), row
                    )
                    found = badness(row, weight, need)
                else:
                    found = MISSED * (1.0 + max(-row[REACH], -row[CLOSE]))
                if found < start[3]:
                    start[0], start[1], start[2], start[3] = share, bend, swivel, found


@bare
def ends_of(scene, window, count, lowest, highest):
    """Ends of the unknowns: the stance inside its window, then every position's posture."""
    lowest[0], highest[0], lowest[1], highest[1] = window
    for p in range(count):
        lowest[2 + 3 * p], highest[2 + 3 * p] = 0.0, 1.0
        lowest[3 + 3 * p], highest[3 + 3 * p] = scene[k.BEND_MIN], scene[k.BEND_MAX]
        lowest[4 + 3 * p], highest[4 + 3 * p] = scene[k.SWIVEL_LOW], scene[k.SWIVEL_HIGH]


@bare
def settle(person, path, need, ends, at, size, steps, enough, seen, work):
    """Improve one posture from `at` (5,) with the stance fixed; keep it in `seen` (6,) if better.

    `seen` is share, bend, swivel, force (below 0: how far from getting there), limit, discomfort.
    """
    one = np.ones(1)
    improve(person, path, one, need, ends, at, size, steps, enough, work)
    force, code = verdict(work[0][0])
    ease = work[0][0, EASE]
    if need < 0.0:
        better = force > seen[3]
    else:
        better = force >= need and work[0][0, LOW] <= need and ease < seen[5]
    if better:
        seen[0], seen[1], seen[2], seen[3], seen[4], seen[5] = at[2], at[3], at[4], force, code, ease


@bare
def look_everywhere(person, stand_x, stand_y, path, weight, need, ends, seen, work):
    """Best posture at one position (`path` (1, 9)) into `seen`, from a coarse look and its two best bends."""
    starts, at = np.zeros((BENDS, 4)), np.zeros(5)
    at[0], at[1] = stand_x, stand_y
    look(person, stand_x, stand_y, path[0], weight, need, BENDS, SHARES, starts, work[8])
    order = np.argsort(starts[:, 3])
    for n in range(2):
        start = starts[order[n]]
        if n > 0 and start[3] > SECOND_WORTH * starts[order[0], 3]:
            break
        at[2:] = start[0:3]
        settle(person, path, need, ends, at, 0.6, ALL_STEPS[0], FINE, seen, work)


@bare
def look_hard(person, stand_x, stand_y, path, weight, need, ends, seen, work):
    """As `look_everywhere`, from a closer look and every bend's best; for the positions that decide."""
    starts, at = np.zeros((HARD_BENDS, 4)), np.zeros(5)
    at[0], at[1] = stand_x, stand_y
    middle = 0.5 * (person[2][k.SWIVEL_LOW] + person[2][k.SWIVEL_HIGH])
    for side in range(2):
        scene = person[2].copy()
        scene[k.SWIVEL_LOW if side == 0 else k.SWIVEL_HIGH] = middle
        half = (person[0], person[1], scene, person[3])
        look(half, stand_x, stand_y, path[0], weight, need, HARD_BENDS, HARD_SHARES, starts, work[8])
        for n in range(HARD_BENDS):
            at[2:] = starts[n, 0:3]
            settle(person, path, need, ends, at, 0.4, ALL_STEPS[0], FINE, seen, work)


@bare
def follow(person, at, targets, weights, needs, ends, scout, alone, found, work):
    """Best posture at every position of a stance into `found` (P, 6).

    `at` begins with the stance. `needs` (P,): below 0 for the strongest posture, else the force that the easiest one
    has to carry, `NEVER` to leave a position as it is. Every few positions begin with a full look where `alone`, else
    with the posture of `scout` (P, 4: share, bend, swivel, force); the positions between go on from these.
    """
    count = targets.shape[0]
    trial = np.zeros(5)
    trial[0], trial[1] = at[0], at[1]
    for p in range(count):
        if needs[p] >= NEVER:
            continue
        found[p, 3], found[p, 5] = -1e9, NEVER
        if p % STRIDE == 0 or p == count - 1:
            path = targets[p : p + 1]
            if not alone:
                trial[2:] = scout[p, 0:3]
                settle(person, path, needs[p], ends, trial, 0.4, ALL_STEPS[0], COARSE if needs[p] < 0.0 else EASY, found[p], work)
            if alone or (lacks(found[p], needs[p]) and scout[p, 3] >= 0.0):
                look_everywhere(person, at[0], at[1], path, weights[p], needs[p], ends, found[p], work)
    for p in range(count):
        if p % STRIDE == 0 or p == count - 1 or needs[p] >= NEVER:
            continue
        before, after = p - p % STRIDE, min(p + STRIDE - p % STRIDE, count - 1)
        go_between(person, at, targets, needs, before, p, after, ends, scout, trial, found, work)
        if lacks(found[p], needs[p]) and (alone or scout[p, 3] >= 0.0):
            look_everywhere(person, at[0], at[1], targets[p : p + 1], weights[p], needs[p], ends, found[p], work)
    # Back over the stroke: a position that fell behind the next one is tried from the next one's posture.
    for p in range(count - 2, -1, -1):
        if needs[p] < NEVER and not keeps_up(found, scout, p, p + 1, needs[p]):
            trial[2:] = found[p + 1, 0:3]
            settle(person, targets[p : p + 1], needs[p], ends, trial, 0.3, FEW_STEPS[0], COARSE, found[p], work)


@bare
def go_between(person, at, targets, needs, before, p, after, ends, scout, trial, found, work):
    """Best posture at position p from the postures at `before` and `after`, and from its neighbour's if that fails."""
    share, path, need = (p - before) / (after - before), targets[p : p + 1], needs[p]
    for start in range(2):
        if start == 0:
            trial[2:] = (1.0 - share) * found[before, 0:3] + share * found[after, 0:3]
            if need >= 0.0 and takes(person, path[0], need, trial, found[p], work):
                return
        else:
            trial[2:] = found[p - 1, 0:3]
        settle(person, path, need, ends, trial, 0.2, FEW_STEPS[0], COARSE if need < 0.0 else EASY, found[p], work)
        if keeps_up(found, scout, p, p - 1, need):
            return


@bare
def takes(person, target, need, at, seen, work):
    """Take the posture in `at` as it is if it carries the need; returns whether it did."""
    op, shape, scene, limits = person
    force, code = judge_posture(op, shape, scene, limits, at[0], at[1], target, at[2], at[3], at[4], work[8])
    if force < need or work[8][LOW] > need:
        return False
    seen[0], seen[1], seen[2], seen[3], seen[4], seen[5] = at[2], at[3], at[4], force, code, work[8][EASE]
    return True


@bare
def lacks(seen, need):
    """Whether no posture was found: none that gets there, or none that carries the need."""
    return seen[3] < 0.0 if need < 0.0 else seen[5] >= NEVER


@bare
def keeps_up(found, scout, p, other, need):
    """Whether position p came out no worse than its neighbour `other`, beside how the scout's compare."""
    if need >= 0.0:
        return found[p, 5] <= 1.1 * found[other, 5] + 0.05
    return found[p, 3] > 0.0 and found[p, 3] * scout[other, 3] >= AS_GOOD * found[other, 3] * scout[p, 3]
