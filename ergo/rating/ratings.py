"""The ratings 0..100, each with its interval, target, worst position, cause and one sentence."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.rating import reasons
from ergo.rating.intervals import mean_interval, share_interval
from ergo.rating.posture_en_1005_4 import PARTS

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Rating:
    """One rating: `value`, `low`, `high` and `target` in 0..100, `worst_stroke` 0..1."""

    name: str
    value: float
    low: float
    high: float
    target: float
    met: bool
    worst_stroke: float
    cause: str
    reason: str


def direction(pull: Array, demand_n: Array, step_m: Array, stroke: Array, *, pull_share_min: float,
              pull_where_force_above_n: float, allowed_push_n: float = 0.35) -> Rating:  # fmt: skip
    """Rate the direction: the pulled share of the loaded work, and no push where the force is high.

    Parameters
    ----------
    pull : Array
        (P,) part of the work direction toward the trunk, -1..1.
    demand_n, step_m, stroke : Array
        (P,) needed hand force [N], hand travel that a position stands for [m], stroke 0..1.
    pull_share_min, pull_where_force_above_n
        Targets; where the demand exceeds the second the stroke must not be a push.
    allowed_push_n : float
        Part of a push that still counts as neither (a third of the direction, as for the drawing's grey).

    Returns
    -------
    Rating
        Value: work of the pulled part over work of the pulled and pushed parts, x 100; 100 where the loaded
        stroke is neither. No operator enters, so the interval is the value.
    """
    work = np.maximum(demand_n, 0.0) * step_m
    pulled, pushed = float(np.sum(work * np.maximum(pull, 0.0))), float(np.sum(work * np.maximum(-pull, 0.0)))
    loaded = float(np.sum(work))
    along = pulled + pushed
    sideways = along < 0.05 * loaded or loaded <= 0.0
    share = 1.0 if sideways else pulled / along
    high = (demand_n > pull_where_force_above_n) & (pull < -allowed_push_n)
    met = share >= pull_share_min and not high.any()
    worst = int(np.argmax(np.where(high, demand_n, 0.0))) if high.any() else int(np.argmin(pull + 1e-9 * stroke))
    reason = reasons.direction(share, pull, demand_n, stroke, high, pull_where_force_above_n, sideways)
    cause = "push under load" if high.any() else ("pushed work" if share < pull_share_min else "pull")
    value = 100.0 * share
    return Rating("direction", value, value, value, 100.0 * pull_share_min, met, float(stroke[worst]), cause, reason)


def reach(reached: Flags, limit: NDArray[np.int64], names: tuple[str, ...], women: Flags, stroke: Array, *,
          served_share: float) -> Rating:  # fmt: skip
    """Rate reach: the share of operators whose hand gets to the handle through the whole stroke, from one stance.

    `reached` (n, P); `limit` (n, P) says what kept the hand away, as a number into `names`.
    """
    through = np.logical_and.reduce(reached, axis=1)
    share, low, high = share_interval(through, women)
    at = reached.mean(axis=0)
    worst = int(np.argmin(at))
    cause = reasons.commonest(limit[~reached], names) if not reached.all() else "none"
    reason = reasons.reach(share, ~through, women, float(stroke[worst]), cause)
    return Rating("reach", 100 * share, 100 * low, 100 * high, 100 * served_share, share >= served_share,
                  float(stroke[worst]), cause, reason)  # fmt: skip


def force(margin: Array, reached: Flags, limit: NDArray[np.int64], names: tuple[str, ...], women: Flags, stroke: Array,
          demand_n: Array, *, served_share: float, margin_min: float) -> Rating:  # fmt: skip
    """Rate force: the share of operators, of those who reach, whose allowed force covers the demand throughout.

    `margin` (n, P) allowed over needed force, infinite where nothing is needed.
    """
    able = np.logical_and.reduce(reached, axis=1)
    enough = np.logical_and.reduce(~reached | (margin >= margin_min), axis=1)
    if not able.any():
        return Rating("force", 0.0, 0.0, 0.0, 100 * served_share, False, 0.0, "reach",
                      "Nobody reaches through the whole stroke, so nobody can give the force.")  # fmt: skip
    share, low, high = share_interval(enough[able], women[able])
    short = able[:, None] & reached & (margin < margin_min)
    worst = int(np.argmax(short.mean(axis=0) + 1e-9 * demand_n))
    cause = reasons.commonest(limit[short], names) if short.any() else "none"
    reason = reasons.force(share, able & ~enough, women, float(stroke[worst]), cause, float(demand_n[worst]))
    return Rating("force", 100 * share, 100 * low, 100 * high, 100 * served_share, share >= served_share,
                  float(stroke[worst]), cause, reason)  # fmt: skip


def posture(points: Array, reached: Flags, weight: Array, women: Flags, stroke: Array, *, target: float) -> Rating:
    """Rate posture: mean over operators of the load-weighted mean over the stroke of the worst part's points.

    `points` (n, P, 4) of `PARTS`; `weight` (P,) how much a position counts; positions out of reach count zero.
    """
    worst_part = points.min(axis=2) * reached
    person = (worst_part * weight).sum(axis=1) / weight.sum()
    mean, low, high = mean_interval(person, women)
    at = worst_part.mean(axis=0)
    worst = int(np.argmin(at))
    lost = (100.0 - points[:, worst]).mean(axis=0)
    cause = PARTS[int(np.argmax(lost))] if lost.max() > 0.0 else "none"
    reason = reasons.posture(mean, float(stroke[worst]), cause, float(at[worst]))
    return Rating("posture", mean, max(low, 0.0), min(high, 100.0), target, mean >= target, float(stroke[worst]), cause,
                  reason)  # fmt: skip


def clearance(gap_m: Array, zone: NDArray[np.int64], zone_names: tuple[str, ...], counted: Flags, women: Flags,
              stroke: Array, *, served_share: float, gap_min_m: float) -> Rating:  # fmt: skip
    """Rate clearance: the share of operators whose hand and forearm keep the gap at every position.

    `gap_m` (n, P) smallest gap; `zone` (n, P) which zone is nearest; `counted` (n,) those who reach.
    """
    if not zone_names:
        return Rating("clearance", 100.0, 100.0, 100.0, 100 * served_share, True, 0.0, "no zones",
                      "No zones are given, so nothing is near the hand.")  # fmt: skip
    keeps = np.logical_and.reduce(gap_m >= gap_min_m, axis=1)
    keeps_counted, women_counted = (keeps[counted], women[counted]) if counted.any() else (keeps, women)
    share, low, high = share_interval(keeps_counted, women_counted)
    person, worst = np.unravel_index(int(np.argmin(gap_m)), gap_m.shape)
    cause = zone_names[int(zone[person, worst])]
    reason = reasons.clearance(share, float(gap_m[person, worst]), cause, float(stroke[worst]), bool(women[person]), gap_min_m)
    return Rating("clearance", 100 * share, 100 * low, 100 * high, 100 * served_share, share >= served_share,
                  float(stroke[worst]), cause, reason)  # fmt: skip


def let_go(safe: Flags, low_safe: Flags, high_safe: Flags, women: Flags, stroke_at: float, cause: str, sentence: str, *,
           served_share: float, counts: bool = True) -> Rating:  # fmt: skip
    """Rate let-go: the share of operators who keep their footing and whose hand meets nothing that hurts.

    `safe` (n,) at the middle of the parameter ranges; `low_safe`, `high_safe` (n,) at their worst and best ends,
    which widen the interval. Where the load is not said to let go (`counts` false) the target is met whatever the
    share.
    """
    share, low, high = share_interval(safe, women)
    low = min(low, share_interval(low_safe, women)[0])
    high = max(high, share_interval(high_safe, women)[0])
    met = share >= served_share or not counts
    return Rating("let_go", 100 * share, 100 * low, 100 * high, 100 * served_share, met, stroke_at, cause, sentence)  # fmt: skip


def served(mask: Flags, women: Flags, worst_stroke: Array, cause: tuple[str, ...], *, served_share: float) -> Rating:
    """Rate served: the share of operators who meet every target at every position.

    `worst_stroke` (n,) and `cause` (n,) say where and to what each lost operator is lost first.
    """
    share, low, high = share_interval(mask, women)
    lost = ~mask
    names = [name for name, out in zip(cause, lost, strict=True) if out]
    main = max(set(names), key=lambda n: (names.count(n), n)) if names else "none"
    chosen = lost & np.array([name == main for name in cause])
    where = float(np.median(worst_stroke[chosen])) if chosen.any() else 0.0
    reason = reasons.served(share, low, high, main, where, lost, women)
    return Rating("served", 100 * share, 100 * low, 100 * high, 100 * served_share, share >= served_share, where, main,
                  reason)  # fmt: skip
