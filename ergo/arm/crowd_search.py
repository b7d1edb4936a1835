"""The bare search for a crowd: from what a few scouts found, each person's own stance and postures.

People differ little in where they stand and how they hold a lever. So only the scouts search everywhere; everyone else
starts from the answers of the scouts most like them and improves these with their own limits.
"""

import numpy as np
from numba import prange

from ergo.arm.kernels import bare, bare_parallel
from ergo.arm.linear_steps import improve, workspace
from ergo.arm.posture_search import ends_of, follow, keeps_up, look_hard
from ergo.arm.stance_search import (
    ALONE,
    MOST,
    better_stance,
    carry,
    keep_visited,
    margin_at,
    serve_operator,
    worst_of,
    worst_position,
)  # fmt: skip

FIRST_SIZE, FIRST_STEPS, FIRST_ENOUGH = 0.5, np.array([4]), 0.03
WORTH_MORE = 0.95  # a second answer is improved only if it comes this near the first
FOLLOWED = 2  # scouts' answers that are improved to the end


@bare
def answer_of(scout, stance, window, visit, at):
    """A scout's answer (its place in the stance window, its postures) for someone else's window, into `at`."""
    at[0] = window[0] + stance[0] * (window[1] - window[0])
    at[1] = window[2] + stance[1] * (window[3] - window[2])
    for n in range(visit.shape[0]):
        at[2 + 3 * n : 5 + 3 * n] = scout[visit[n], 0:3]


@bare
def best_answer(person, window, path, weights, visit, near, scouts, places, at, work):
    """Best stance for the visited positions from the scouts' answers, into `at`; returns its margin and the scout."""
    count = visit.shape[0]
    tried = np.zeros((near.shape[0], 3 + 3 * count))
    ends = np.zeros((2, 2 + 3 * count))
    ends_of(person[2], window, count, ends[0], ends[1])
    for n in range(near.shape[0]):
        answer_of(scouts[near[n]], places[near[n]], window, visit, tried[n, 1:])
        improve(person, path, weights, -1.0, ends, tried[n, 1:], FIRST_SIZE, FIRST_STEPS[0], FIRST_ENOUGH, work)
        tried[n, 0] = worst_of(work[0], weights, count)
    order = np.argsort(-tried[:, 0])
    best, who = -1e300, near[0]
    for n in range(min(FOLLOWED, near.shape[0])):
        row = tried[order[n]]
        if n > 0 and row[0] < best - (1.0 - WORTH_MORE) * abs(best):
            break
        margin = better_stance(person, window, path, weights, count, row[1:], 0.3, work)
        if margin > best:
            best, who, at[:] = margin, near[order[n]], row[1:]
    return best, who


@bare
def serve_like(person, window, targets, weights, needs, matter, near, scouts, places, out, codes, stance):
    """One operator from the answers of the scouts `near`; rows as `serve_operator` writes them."""
    count = targets.shape[0]
    work, found, ends = workspace(MOST), np.zeros((count, 6)), np.zeros((2, 5))
    visit, chosen = np.zeros(MOST, np.int64), np.zeros(count, np.bool_)
    visited = matter.shape[0]
    chosen[matter], visit[:visited] = True, matter
    unknowns, strongest = np.zeros(2 + 3 * MOST), np.full(count, -1.0)
    promised, who = best_answer(
        person, window, targets[visit[:visited]], weights[visit[:visited]], visit[:visited], near, scouts, places,
        unknowns[: 2 + 3 * visited], work,
    )  # fmt: skip
    while True:
        rows, at = visit[:visited], unknowns[: 2 + 3 * visited]
        stance[0], stance[1] = at[0], at[1]
        ends_of(person[2], np.array([at[0], at[0], at[1], at[1]]), 1, ends[0], ends[1])
        follow(person, at, targets, weights, strongest, ends, scouts[who][:, 0:4].copy(), not ALONE[0], found, work)
        keep_visited(person, targets, rows, at, found, work)
        where = worst_position(found, weights)
        if chosen[where] or visited == MOST:
            break
        beside = where + 1 if where == 0 else where - 1
        if not keeps_up(found, scouts[who][:, 0:4].copy(), where, beside, -1.0):
            look_hard(person, at[0], at[1], targets[where : where + 1], weights[where], -1.0, ends, found[where], work)
        if margin_at(found[where, 3], weights[where]) >= promised - 0.01 * abs(promised):
            break
        chosen[where], visit[visited] = True, where
        unknowns[2 + 3 * visited : 5 + 3 * visited] = found[where, 0:3]
        visited += 1
        rows = visit[:visited]
        promised = better_stance(person, window, targets[rows], weights[rows], visited, unknowns[: 2 + 3 * visited], 0.3, work)
    carry(person, stance, targets, weights, needs, ends, scouts[who][:, 4:8].copy(), not ALONE[0], found, out, codes, work)
    return margin_at(found[worst_position(found, weights), 3], 1.0)


@bare_parallel
def search_crowd(ops, shape, scene, limits, windows, targets, weights, needs, matter, near, scouts, places, out, codes, stances):
    """Every operator in parallel; each writes only its own rows, so the threads change nothing.

    `near` (n, K) are the scouts most like each, `scouts` (S, P, 8) and `places` (S, 2) their answers, the stances as
    shares of their windows. With K of 0, and where a person gets nowhere though such a scout does, by the whole search.
    """
    for n in prange(ops.shape[0]):
        person, worst, alone = (ops[n], shape, scene, limits), -1.0, near.shape[1] == 0
        if not alone:
            worst = serve_like(
                person, windows[n], targets, weights, needs, matter, near[n], scouts, places, out[n], codes[n], stances[n]
            )
        for m in range(near.shape[1]):
            alone = alone or (worst < 0.0 and scouts[near[n, m], :, 3].min() >= 0.0)
        if alone:
            serve_operator(person, windows[n], targets, weights, needs, out[n], codes[n], stances[n])
