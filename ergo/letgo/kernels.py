"""The bare kernels of hand overrun: one mass, a drive that holds and then decays, stiffness, damping.

Within a phase the motion is linear, so its Taylor series is known to any order from the state at a step's
start: a step is exact to rounding, whatever its parameters, and events are roots of the series. Everything a
kernel calls stays in this file: numba's cache follows one file's content only.
"""

import numpy as np
from numba import njit, prange

# With rate x step at most 1 the first dropped term is below 1 / 17!.
ORDER = 17
PART = 1.0 / np.arange(1.0, ORDER + 1.0)
NOT_MET, STILL_MOVING, TURNED, MET = 0, 1, 2, 3
# Columns of a case's answer.
OVERRUN, PEAK_SPEED, TIME, SPEED, PRESS, HOW = range(6)
ANSWERS = 6

bare = njit(cache=True, error_model="numpy")
bare_parallel = njit(cache=True, error_model="numpy", parallel=True)


@bare
def series(x, v, drive, against, mass, damping, stiffness, decay, place, speed, push):
    """Fill the Taylor coefficients (ORDER,) of travel, speed and acceleration from one state on."""
    place[0], speed[0] = x, v
    ease = 1.0 / mass
    drive, b, c = drive * ease, damping * ease, stiffness * ease
    net = drive - against * ease
    for k in range(ORDER - 1):
        part = PART[k]
        push[k] = net - b * v - c * x
        x, v = v * part, push[k] * part
        place[k + 1], speed[k + 1] = x, v
        drive *= -decay * part
        net = drive
    push[ORDER - 1] = 0.0


@bare
def at(terms, time):
    """Value of a series at a time, by Horner's rule."""
    value = terms[ORDER - 1]
    for k in range(ORDER - 2, -1, -1):
        value = value * time + terms[k]
    return value


@bare
def crossing(terms, level, until):
    """First-order safe root: the time in 0..until at which a series that crosses `level` once meets it."""
    low, high = 0.0, until
    rising = at(terms, until) > level
    time = 0.5 * until
    for _ in range(60):
        value, slope = terms[ORDER - 1], 0.0
        for k in range(ORDER - 2, -1, -1):
            slope = slope * time + value
            value = value * time + terms[k]
        off = value - level
        if (off > 0.0) == rising:
            high = time
        else:
            low = time
        nearer = time - off / slope if slope != 0.0 else low
        if not low < nearer < high:
            nearer = 0.5 * (low + high)
        if abs(nearer - time) <= 1e-13 * until:
            return nearer
        time = nearer
    return time


@bare
def end_of_step(place, speed, step, ahead):
    """Time within a step, travel there and how it ends: at a turn, at what is ahead, or still moving."""
    last, how = step, STILL_MOVING
    if at(speed, step) <= 0.0:
        last, how = crossing(speed, 0.0, step), TURNED
    reached = at(place, last)
    if reached >= ahead:
        return crossing(place, ahead, last), ahead, MET
    return last, reached, how


@bare
def quickest(speed, push, last):
    """Greatest speed from a step's start until `last`: at its end, or where the push turns to a brake."""
    if push[0] > 0.0 and at(push, last) < 0.0:
        return at(speed, crossing(push, 0.0, last))
    return at(speed, last)


@bare
def one_case(force, against, against_rate, mass, damping, stiffness, latency, decay, watched, ahead, work, answer):
    """Follow one hand from let-go until it turns, meets what is `ahead`, or is no longer watched."""
    place, speed, push = work[0], work[1], work[2]
    answer[:] = 0.0
    if ahead <= 0.0 or force - against <= 0.0:
        answer[HOW] = MET if ahead <= 0.0 else TURNED
        answer[PRESS] = max(force - against, 0.0)
        return
    spring = stiffness + against_rate
    x = v = now = 0.0
    for phase in range(2):
        end, fade = (min(latency, watched), 0.0) if phase == 0 else (watched, decay)
        rate = max(damping / mass + np.sqrt(spring / mass), fade)
        steps = int(np.ceil(max((end - now) * rate, 1.0)))
        step = (end - now) / steps
        drive = force
        for _ in range(steps):
            series(x, v, drive, against, mass, damping, spring, fade, place, speed, push)
            last, x, how = end_of_step(place, speed, step, ahead)
            answer[PEAK_SPEED] = max(answer[PEAK_SPEED], quickest(speed, push, last))
            drive *= np.exp(-fade * last)
            v = at(speed, last)
            now += last
            if how != STILL_MOVING:
                answer[OVERRUN], answer[TIME], answer[HOW] = x, now, how
                if how == MET:
                    answer[SPEED], answer[PRESS] = max(v, 0.0), max(drive - against - spring * x, 0.0)
                return
        now = end
    answer[OVERRUN], answer[TIME], answer[SPEED], answer[HOW] = x, watched, v, STILL_MOVING


@bare_parallel
def all_cases(force, against, against_rate, arm_mass, fixed_mass, ahead, muscle, answers):
    """Fill answers (n, P, S, ANSWERS) from arrays (n, P) and the muscle's scenarios (7, S).

    Rows of `muscle`: latency, decay rate, stiffness per force, damping time, relaxed stiffness, factor on the
    arm's mass, watched time.
    """
    for i in prange(force.shape[0]):
        work = np.empty((3, ORDER))
        for j in range(force.shape[1]):
            for s in range(muscle.shape[1]):
                stiffness = muscle[2, s] * max(force[i, j], 0.0) + muscle[4, s]
                mass = muscle[5, s] * arm_mass[i, j] + fixed_mass[i, j]
                one_case(
                    force[i, j], against[i, j], against_rate[i, j], mass, muscle[3, s] * stiffness, stiffness,
                    muscle[0, s], muscle[1, s], muscle[6, s], ahead[i, j], work, answers[i, j, s],
                )  # fmt: skip


@bare
def sampled(times, force, against, mass, damping, stiffness, latency, decay, found):
    """Fill travel, speed and drive (T, 3) at rising times (T,) from let-go, past the turn too."""
    work = np.empty((3, ORDER))
    x = v = now = 0.0
    for t in range(times.shape[0]):
        while now < times[t]:
            fade = 0.0 if now < latency else decay
            end = min(times[t], latency) if now < latency else times[t]
            rate = max(damping / mass + np.sqrt(stiffness / mass), fade)
            steps = int(np.ceil(max((end - now) * rate, 1.0)))
            step = (end - now) / steps
            for k in range(steps):
                drive = force * np.exp(-decay * max(now + k * step - latency, 0.0))
                series(x, v, drive, against, mass, damping, stiffness, fade, work[0], work[1], work[2])
                x, v = at(work[0], step), at(work[1], step)
            now = end
        found[t, 0], found[t, 1] = x, v
        found[t, 2] = force * np.exp(-decay * max(times[t] - latency, 0.0))
