"""The bare search by linear steps: the posture, or the stance with its postures, whose tightest limit is loosest.

What is sought is the smallest largest limit, which lies on a ridge where several limits meet. So every limit is
replaced by its slope, the best step within a box is found exactly (a small linear program, by the simplex method with
exchanged rows and columns), and the box grows or shrinks as the true limits keep what their slopes promised.
"""

import numpy as np

from ergo.arm.kernels import bare
from ergo.arm.posture_limits import COLUMNS, EASE, LOADS, LOW, ROOMS_END, posture_limits

FREE = 5  # unknowns a position: stance x, y, centre-of-mass share, bend, swivel
WIDE, TIGHT, TIGHTEN = 0.012, 0.0006, 0.2  # room that a bound keeps at first and at the end [m, or as a cosine or sine]
AT_FIRST = 0.2  # where what is to be made small stands on the scale: bounds that are missed stand above 1
SLACK = 0.01  # share of a needed force that is kept over
PROBES = np.array([0.002, 0.002, 0.01, 0.004, 0.01])  # finite steps of the slopes
BOX = np.array([0.15, 0.15, 0.4, 0.3, 0.7])  # half the first box
SMALLEST_BOX = 0.004
FIXED = 1e-6  # m: a stance with less room than this does not move
PIVOTS = 80
TINY = 1e-11


@bare
def workspace(positions):
    """Arrays that a search needs for up to `positions` positions at once."""
    unknowns = 2 + 3 * positions
    most = COLUMNS * positions + unknowns + 1
    return (
        np.zeros((positions, COLUMNS)), np.zeros((positions, COLUMNS)), np.zeros((positions, COLUMNS)),
        np.zeros((positions, COLUMNS, FREE)), np.zeros((most, unknowns + 2)), np.zeros(unknowns + 1, np.int64),
        np.zeros(most, np.int64), np.zeros((3, unknowns)), np.zeros(COLUMNS), np.zeros(COLUMNS),
    )  # fmt: skip


@bare
def scaled(row, weight, scale, need, kept, out):
    """Limits of one posture on one scale into `out`, and the largest: below 1 all is well.

    With a `need` below 0 the largest load counts; else the discomfort counts and `need` newtons are a bound. `kept` is
    the room that a bound keeps [m, or as a cosine or sine].
    """
    for n in range(LOADS, ROOMS_END):
        out[n] = 1.0 - row[n] / kept
    top = 0.0
    for n in range(LOADS):
        top = max(top, row[n])
    if need < 0.0:
        for n in range(LOADS):
            out[n] = row[n] / (weight * scale)
        out[LOW], out[EASE] = 1.0 - (1.0 - row[LOW] * top) / kept, 0.0
    else:
        for n in range(LOADS):
            out[n] = 1.0 - (1.0 - need * row[n]) / SLACK
        out[LOW] = 1.0 - (need - row[LOW]) / (SLACK * (need + 1.0)) if row[LOW] > 0.0 else 0.0
        out[EASE] = row[EASE] / scale
    largest = out[0]
    for n in range(1, COLUMNS):
        largest = max(largest, out[n])
    return largest


@bare
def scale_of(rows, weights, count, need):
    """Scale on which what is to be made small stands at `AT_FIRST`, so that a bound that is met does not count."""
    found = 0.0
    for p in range(count):
        if need >= 0.0:
            found = max(found, rows[p, EASE])
            continue
        for n in range(LOADS):
            found = max(found, rows[p, n] / weights[p])
    return max(found, 0.02 if need >= 0.0 else 1e-14) / AT_FIRST


@bare
def exchange(table, rows, columns, r, s):
    """Exchange row r's and column s's variables in the simplex table."""
    pivot = 1.0 / table[r, s]
    for j in range(columns):
        table[r, j] *= pivot
    for i in range(rows):
        factor = table[i, s]
        if i != r and factor != 0.0:
            for j in range(columns):
                table[i, j] -= factor * table[r, j]
            table[i, s] = -factor * pivot
    table[r, s] = pivot


@bare
def solve_table(table, limits, unknowns, at_top, on_side):
    """Largest value of the table's first variable; `at_top`, `on_side` tell where each variable stands."""
    rows, columns = limits + unknowns + 1, unknowns + 2
    for _ in range(PIVOTS):
        s = 0
        for j in range(1, columns - 1):
            if table[rows - 1, j] < table[rows - 1, s]:
                s = j
        if table[rows - 1, s] > -TINY:
            break
        r, least = -1, 0.0
        for i in range(rows - 1):
            if table[i, s] > 1e-9:
                ratio = table[i, columns - 1] / table[i, s]
                if r < 0 or ratio < least:
                    r, least = i, ratio
        if r < 0:
            break
        exchange(table, rows, columns, r, s)
        at_top[s], on_side[r] = on_side[r], at_top[s]
    return table[rows - 1, columns - 1]


@bare
def lowest_promise(now, slopes, count, first, box):
    """Value that no step within the box can get below by the slopes: the best that each limit could do alone."""
    floor = -1e300
    for p in range(count):
        for n in range(COLUMNS):
            least = now[p, n]
            for f in range(first, FREE):
                j = f if f < 2 else f + 3 * p
                least += min(slopes[p, n, f] * box[0, j], slopes[p, n, f] * box[1, j])
            floor = max(floor, least)
    return floor


@bare
def fill_limits(now, slopes, count, first, box, table, on_side):
    """Rows of the table for the limits that can matter within the box; returns (rows, largest at the low corner)."""
    unknowns, floor = 2 + 3 * count - first, lowest_promise(now, slopes, count, first, box)
    limits, corner_top = 0, -1e300
    for p in range(count):
        for n in range(COLUMNS):
            at_corner, most = now[p, n], now[p, n]
            for f in range(first, FREE):
                j = f if f < 2 else f + 3 * p
                at_corner += slopes[p, n, f] * box[0, j]
                most += max(slopes[p, n, f] * box[0, j], slopes[p, n, f] * box[1, j])
            if most < floor:
                continue
            table[limits, :] = 0.0
            table[limits, 0], table[limits, unknowns + 1], on_side[limits] = 1.0, at_corner, -1
            for f in range(first, FREE):
                table[limits, 1 + (f if f < 2 else f + 3 * p) - first] = slopes[p, n, f]
            corner_top = max(corner_top, at_corner)
            limits += 1
    return limits, corner_top


@bare
def best_step(now, slopes, count, first, box, table, at_top, on_side, step):
    """Step within the box that makes the largest limit smallest by the slopes; returns the value it promises.

    `now` (count, COLUMNS) limits, `slopes` (count, COLUMNS, FREE), `box` (3, unknowns) low and high, `first` 0 with
    the stance free and 2 with it fixed. `step` gets the step, in the order of the unknowns.
    """
    unknowns = 2 + 3 * count - first
    limits, corner_top = fill_limits(now, slopes, count, first, box, table, on_side)
    for i in range(limits):
        table[i, unknowns + 1] = corner_top - table[i, unknowns + 1]
    for j in range(unknowns):
        table[limits + j, :] = 0.0
        table[limits + j, 1 + j], table[limits + j, unknowns + 1] = 1.0, box[1, first + j] - box[0, first + j]
        on_side[limits + j], at_top[1 + j] = -1, 1 + j
        step[first + j] = box[0, first + j]
    table[limits + unknowns, :] = 0.0
    table[limits + unknowns, 0], at_top[0] = -1.0, 0
    gained = solve_table(table, limits, unknowns, at_top, on_side)
    for i in range(limits + unknowns):
        if on_side[i] > 0:
            step[first + on_side[i] - 1] += table[i, unknowns + 1]
    return corner_top - gained


@bare
def fill_slopes(person, path, weights, count, need, scale, kept, first, ends, at, now, slopes, row, out):
    """Slopes of every limit of every position by finite steps that stay inside the unknowns' ends."""
    op, shape, scene, limits = person
    for p in range(count):
        for f in range(first, FREE):
            j = f if f < 2 else f + 3 * p
            was, probe = at[j], PROBES[f]
            if was + probe > ends[1, j]:
                probe = -probe
            at[j] = was + probe
            posture_limits(op, shape, scene, limits, at[0], at[1], path[p], at[2 + 3 * p], at[3 + 3 * p], at[4 + 3 * p], row)
            at[j] = was
            scaled(row, weights[p], scale, need, kept, out)
            for n in range(COLUMNS):
                slopes[p, n, f] = (out[n] - now[p, n]) / probe


@bare
def judge_all(person, path, weights, count, need, scale, kept, at, rows, now):
    """Limits of every position at the unknowns `at`; returns the largest on the scale."""
    op, shape, scene, limits = person
    largest = -1e300
    for p in range(count):
        posture_limits(op, shape, scene, limits, at[0], at[1], path[p], at[2 + 3 * p], at[3 + 3 * p], at[4 + 3 * p], rows[p])
        largest = max(largest, scaled(rows[p], weights[p], scale, need, kept, now[p]))
    return largest


@bare
def calm(now, slopes, count, first, reached, step):
    """Leave out every part of a step that its promise does not need: what matters to no limit stays where it is."""
    for j in range(first, 2 + 3 * count):
        part, needed = step[j], False
        step[j] = 0.0
        for p in range(count):
            if j >= 2 and (j - 2) // 3 != p:
                continue
            for n in range(COLUMNS):
                value = now[p, n]
                for f in range(first, FREE):
                    value += slopes[p, n, f] * step[f if f < 2 else f + 3 * p]
                needed = needed or value > reached
        if needed:
            step[j] = part


@bare
def step_to(at, step, first, ends, trial):
    """Unknowns after a step, held inside their ends, into `trial`."""
    for j in range(first, at.shape[0]):
        trial[j] = min(max(at[j] + step[j], ends[0, j]), ends[1, j])


@bare
def retry(ahead, now, slopes, count, first, need, kept_promise, box, table, at_top, on_side):
    """Another step for one that kept only a share of its promise, in place in `box`.

    Discomfort is bowl-shaped: there the step goes to the bottom of the parabola through what was seen. Elsewhere the
    bounds are bent: the same slopes are laid through where the limits truly came to.
    """
    bowl = need >= 0.0
    for p in range(count):
        for n in range(EASE):
            bowl = bowl and ahead[p, n] <= max(ahead[p, EASE], now[p, EASE])
    if bowl:
        box[2] *= min(max(0.5 / (1.0 - kept_promise), 0.1), 0.8)
        return
    straighten(ahead, slopes, count, first, box[2])
    best_step(ahead, slopes, count, first, box, table, at_top, on_side, box[2])


@bare
def straighten(ahead, slopes, count, first, step):
    """Turn the limits at the end of a step into those at its start that the slopes would have needed."""
    for p in range(count):
        for n in range(COLUMNS):
            for f in range(first, FREE):
                ahead[p, n] -= slopes[p, n, f] * step[f if f < 2 else f + 3 * p]


@bare
def set_box(at, lowest, highest, first, size, box):
    """Box of a size around the unknowns, cut at their ends."""
    for j in range(first, at.shape[0]):
        half = size * BOX[j if j < 2 else 2 + (j - 2) % 3]
        box[0, j], box[1, j] = max(-half, lowest[j] - at[j]), min(half, highest[j] - at[j])


@bare
def length_of(at, other, first):
    """Largest part of a step, as a share of the full box."""
    far = 0.0
    for j in range(first, at.shape[0]):
        far = max(far, abs(other[j] - at[j]) / BOX[j if j < 2 else 2 + (j - 2) % 3])
    return far


@bare
def try_step(person, path, weights, need, scale, kept, value, promised, first, ends, at, trial, other, work):
    """Take the step in the box, and another where it keeps too little of its promise; the better one into `trial`."""
    rows, now, ahead, slopes, table, at_top, on_side, box, _row, _out = work
    count = path.shape[0]
    step_to(at, box[2], first, ends, trial)
    gained = value - judge_all(person, path, weights, count, need, scale, kept, trial, rows, ahead)
    if gained < 0.6 * promised:
        retry(ahead, now, slopes, count, first, need, gained / promised, box, table, at_top, on_side)
        step_to(at, box[2], first, ends, other)
        again = value - judge_all(person, path, weights, count, need, scale, kept, other, rows, ahead)
        if again > gained:
            gained, trial[:] = again, other
    return gained


@bare
def look_around(person, path, weights, need, kept, first, ends, at, work):
    """Scale, value and slopes of the limits at the unknowns: (scale, value)."""
    rows, now, _ahead, slopes, _table, _at_top, _on_side, _box, row, out = work
    count, value = path.shape[0], -1e300
    judge_all(person, path, weights, count, need, 1.0, kept, at, rows, now)
    scale = scale_of(rows, weights, count, need)
    for p in range(count):
        value = max(value, scaled(rows[p], weights[p], scale, need, kept, now[p]))
    fill_slopes(person, path, weights, count, need, scale, kept, first, ends, at, now, slopes, row, out)
    return scale, value


@bare
def improve(person, path, weights, need, ends, at, size, steps, enough, work):
    """Improve the unknowns `at` (2 + 3 count,) in place by up to `steps` linear steps, from a box of `size`.

    The stance moves too if its `ends` leave it room. Stops where the slopes promise under `enough` of the value, with
    bounds kept as tightly as they are at the end. The positions' limits stand in the workspace's first array afterwards.
    """
    rows, now, _ahead, slopes, table, at_top, on_side, box, _row, _out = work
    count, kept = path.shape[0], WIDE
    first = 2 if ends[1, 0] - ends[0, 0] < FIXED and ends[1, 1] - ends[0, 1] < FIXED else 0
    scale, value, fresh = 0.0, 0.0, True
    trial, other = at.copy(), at.copy()
    for _ in range(steps):
        if fresh:
            scale, value = look_around(person, path, weights, need, kept, first, ends, at, work)
        set_box(at, ends[0], ends[1], first, size, box)
        reached = best_step(now, slopes, count, first, box, table, at_top, on_side, box[2])
        promised, stuck = value - reached, value - reached < enough * value
        if not stuck:
            calm(now, slopes, count, first, reached + 1e-6 * abs(reached), box[2])
            gained = try_step(person, path, weights, need, scale, kept, value, promised, first, ends, at, trial, other, work)
            far, fresh = length_of(at, trial, first), gained > 0.05 * promised
            if fresh:
                at[:] = trial
            if gained > 0.7 * promised:
                size = min(max(size, 2.0 * far), 1.0)
            elif gained < 0.3 * promised:
                size = 0.4 * min(far, size)
            stuck = size < SMALLEST_BOX
        if stuck:
            if kept <= TIGHT:
                break
            kept, size, fresh = max(TIGHTEN * kept, TIGHT), max(size, 0.1), True
    judge_all(person, path, weights, count, need, scale, kept, at, rows, now)
