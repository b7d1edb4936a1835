"""The bare stance search: one stance for the whole stroke, chosen for its worst position.

A stance is the body's midline x and the ankles' (or hips') y. A grid of stances is judged at a few positions, the most
promising are improved together with their postures; whichever other position then turns out the worst joins them.
"""

import numpy as np

from ergo.arm import kernels as k
from ergo.arm.kernels import bare
from ergo.arm.linear_steps import improve, workspace
from ergo.arm.posture_limits import judge_posture, verdict
from ergo.arm.posture_search import FINE, NEVER, ends_of, follow, look_everywhere, look_hard, settle

STANCES_X, STANCES_Y, STARTS = 7, 6, 6
MOST = 7  # positions that a stance is sought for at once
LAST_STEPS = np.array([16])
GRID_STEPS, GRID_ENOUGH = np.array([8]), 0.02  # of the postures on the grid
ALONE = np.array([True])
CLOSE_TO_BEST = 0.85  # a stance on the grid that falls below this share of the best so far is left
SPOILT = 0.9  # a worst position below this share of what was promised has the stances looked at again


@bare
def margin_at(force, weight):
    """Force times weight where the hand gets there, else how far it is from getting there."""
    return force * weight if force >= 0.0 else force


@bare
def worst_of(rows, weights, count):
    """Worst position's margin of `count` judged positions."""
    worst = k.NO_LIMIT
    for p in range(count):
        worst = min(worst, margin_at(verdict(rows[p])[0], weights[p]))
    return worst


@bare
def judge_stance(person, stance, path, weights, visit, floor, found, work):
    """Worst position's margin of a stance, left early once it falls to `floor`.

    `visit` is the order of positions; the position that decided is moved to its front. `found` (count, 6) holds each
    position's last best posture, which is tried beside a full look.
    """
    ends, at = np.zeros((2, 5)), np.zeros(5)
    ends_of(person[2], np.array([stance[0], stance[0], stance[1], stance[1]]), 1, ends[0], ends[1])
    worst = k.NO_LIMIT
    for n in range(visit.shape[0]):
        p = visit[n]
        seen = found[p]
        at[0], at[1], at[2:] = stance[0], stance[1], seen[0:3]
        known, seen[3] = seen[3] >= 0.0, -1e9
        if known:
            settle(person, path[p : p + 1], -1.0, ends, at, 0.6, GRID_STEPS[0], GRID_ENOUGH, seen, work)
        look_everywhere(person, stance[0], stance[1], path[p : p + 1], weights[p], -1.0, ends, seen, work)
        worst = min(worst, margin_at(seen[3], weights[p]))
        if worst <= floor:
            for m in range(n, 0, -1):
                visit[m] = visit[m - 1]
            visit[0] = p
            return worst
    return worst


@bare
def judge_grid(person, window, path, weights, count, tried, work):
    """Margins and unknowns of a grid of stances into `tried` (stances, 1 + 2 + 3 count)."""
    found, visit = np.zeros((count, 6)), np.arange(count)
    found[:, 3] = -1e9
    deep = STANCES_Y if window[3] - window[2] > 1e-6 else 1
    tried[:, 0] = -1e300
    best = -1e300
    for i in range(deep):
        for j in range(STANCES_X):
            # There and back, so that each stance lies beside the one before.
            row = tried[i * STANCES_X + (j if i % 2 == 0 else STANCES_X - 1 - j)]
            row[1] = window[0] + (window[1] - window[0]) * ((j if i % 2 == 0 else STANCES_X - 1 - j) + 0.5) / STANCES_X
            row[2] = window[3] - (window[3] - window[2]) * (i + 0.5) / deep
            floor = best - (1.0 - CLOSE_TO_BEST) * abs(best)
            row[0] = judge_stance(person, row[1:3], path, weights, visit, floor, found, work)
            best = max(best, row[0])
            for p in range(count):
                row[3 + 3 * p : 6 + 3 * p] = found[p, 0:3]


@bare
def best_stance(person, window, path, weights, count, at, work):
    """Best stance for `count` positions with their postures into `at` (2 + 3 count,); returns its margin."""
    tried = np.zeros((STANCES_X * STANCES_Y, 3 + 3 * count))
    judge_grid(person, window, path, weights, count, tried, work)
    order = np.argsort(-tried[:, 0])
    best = -1e300
    for n in range(STARTS):
        row = tried[order[n]]
        if n > 0 and row[0] < best - (1.0 - CLOSE_TO_BEST) * abs(best):
            break
        margin = better_stance(person, window, path, weights, count, row[1:], 1.0, work)
        if margin > best:
            best, at[:] = margin, row[1:]
    return best


@bare
def better_stance(person, window, path, weights, count, at, size, work):
    """Improve a stance and its postures from where they are; returns its margin."""
    ends = np.zeros((2, 2 + 3 * count))
    ends_of(person[2], window, count, ends[0], ends[1])
    improve(person, path, weights, -1.0, ends, at, size, LAST_STEPS[0], FINE, work)
    return worst_of(work[0], weights, count)


@bare
def serve_operator(person, window, targets, weights, needs, out, codes, stance):
    """One operator: the stance for the whole stroke, then strongest and easiest posture at every position.

    `out` (P, 8): strongest com share, bend, swivel, force (below 0: not reached); easiest com share, bend, swivel,
    force. `codes` (P,) the limit of the strongest.
    """
    count = targets.shape[0]
    work, found, ends = workspace(MOST), np.zeros((count, 6)), np.zeros((2, 5))
    visit = np.zeros(MOST, np.int64)
    chosen = np.zeros(count, np.bool_)
    chosen[0] = chosen[count - 1] = chosen[count // 2] = chosen[np.argmin(weights)] = True
    visited = np.nonzero(chosen)[0].size
    visit[:visited] = np.nonzero(chosen)[0]
    unknowns, strongest = np.zeros(2 + 3 * MOST), np.full(count, -1.0)
    again, even = True, np.ones((count, 4))
    while True:
        rows, at = visit[:visited], unknowns[: 2 + 3 * visited]
        if again:
            promised = best_stance(person, window, targets[rows], weights[rows], visited, at, work)
        else:
            promised = better_stance(person, window, targets[rows], weights[rows], visited, at, 0.5, work)
        stance[0], stance[1] = at[0], at[1]
        ends_of(person[2], np.array([at[0], at[0], at[1], at[1]]), 1, ends[0], ends[1])
        follow(person, at, targets, weights, strongest, ends, even, ALONE[0], found, work)
        keep_visited(person, targets, rows, at, found, work)
        where = worst_position(found, weights)
        if chosen[where] or visited == MOST:
            break
        look_hard(person, at[0], at[1], targets[where : where + 1], weights[where], -1.0, ends, found[where], work)
        worst = margin_at(found[where, 3], weights[where])
        if worst >= promised - 0.01 * abs(promised):
            break
        again = worst < promised - (1.0 - SPOILT) * abs(promised)
        chosen[where], visit[visited] = True, where
        unknowns[2 + 3 * visited : 5 + 3 * visited] = found[where, 0:3]
        visited += 1
    carry(person, stance, targets, weights, needs, ends, even, ALONE[0], found, out, codes, work)


@bare
def keep_visited(person, targets, visit, at, found, work):
    """Where the search of the stance knew a stronger posture of a position, take that one."""
    op, shape, scene, limits = person
    for n in range(visit.shape[0]):
        p, kept = visit[n], at[2 + 3 * n : 5 + 3 * n]
        force, code = judge_posture(op, shape, scene, limits, at[0], at[1], targets[p], kept[0], kept[1], kept[2], work[8])
        if force > found[p, 3]:
            found[p, 0:3], found[p, 3], found[p, 4] = kept, force, code


@bare
def worst_position(found, weights):
    """Position with the smallest margin."""
    where, worst = 0, k.NO_LIMIT
    for p in range(weights.shape[0]):
        margin = margin_at(found[p, 3], weights[p])
        if margin < worst:
            where, worst = p, margin
    return where


@bare
def carry(person, stance, targets, weights, needs, ends, scout, alone, found, out, codes, work):
    """Rows of one operator from the strongest postures `found` (P, 6): these, and the easiest that carry `needs`.

    Where a need is not carried even by the strongest posture, that one stands for the easiest.
    """
    count = targets.shape[0]
    easy, wanted = found.copy(), needs.copy()
    for p in range(count):
        out[p, 0:4], codes[p] = found[p, 0:4], int(found[p, 4])
        easy[p, 5] = NEVER
        if found[p, 3] < needs[p]:
            wanted[p] = NEVER
    follow(person, stance, targets, weights, wanted, ends, scout, alone, easy, work)
    for p in range(count):
        out[p, 4:8] = easy[p, 0:4] if easy[p, 5] < NEVER else found[p, 0:4]
