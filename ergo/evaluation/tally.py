"""Who is served and who is lost, where and to what."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.plan import Plan
from ergo.strength.hand_capability import LIMITS, HandCapability

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]


@dataclass(frozen=True)
class Tally:
    """(n, P) margins and what each person lacks at each position; (n,) who is served and to what they are lost."""

    margin: Array
    strong: Flags
    clear: Flags
    safe: Flags
    served: Flags
    worst_stroke: Array
    limit: tuple[str, ...]


def margins(plan: Plan, capability: HandCapability) -> Array:
    """Return allowed over needed force (n, P), infinite where nothing is needed, zero where not reached."""
    demand = plan.task.demand_n
    asks = demand > 1e-6
    allowed = capability.force_n * plan.task.share
    return np.where(asks, allowed / np.where(asks, demand, 1.0), np.where(capability.reached, np.inf, 0.0))


def tally(plan: Plan, capability: HandCapability, clear: Flags, zone_of: tuple[tuple[str, ...], NDArray[np.int64]],
          safe: Flags, let_go_stroke: float) -> Tally:  # fmt: skip
    """Return who is served and to what the others are lost.

    Parameters
    ----------
    clear : array
        (n, P) whether the gap to every zone is kept.
    zone_of : tuple
        Zone names and (n, P) which zone is nearest.
    safe : array
        (n,) whether a let-go is survived.
    let_go_stroke : float
        Where that was judged.
    """
    margin = margins(plan, capability)
    strong = margin >= plan.task.margin_min
    through, stroke = capability.reached.all(axis=1), plan.machine.drive.stroke
    served = through & strong.all(axis=1) & clear.all(axis=1) & safe
    limits, worst = [], np.zeros(served.size)
    for n in range(served.size):
        name, at = "", 0.0
        if not served[n]:
            name, at = _lost(plan, capability, margin[n], clear[n], zone_of, bool(safe[n]), let_go_stroke, n)
        elif np.isfinite(margin[n]).any():
            at = float(stroke[int(np.argmin(margin[n]))])
        limits.append(name)
        worst[n] = at
    return Tally(margin, strong, clear, safe, served, worst, tuple(limits))


def _lost(plan: Plan, capability: HandCapability, margin: Array, clear: Flags,
          zone_of: tuple[tuple[str, ...], NDArray[np.int64]], safe: bool, let_go_stroke: float,
          n: int) -> tuple[str, float]:  # fmt: skip
    """Return what loses one person, in the order reach, force, clearance, let-go, and where."""
    stroke = plan.machine.drive.stroke
    if not capability.reached[n].all():
        p = int(np.argmax(np.where(capability.reached[n], -1.0, capability.shortfall_m[n])))
        return LIMITS[capability.limit[n, p]], float(stroke[p])
    if (margin < plan.task.margin_min).any():
        p = int(np.argmin(margin))
        return LIMITS[capability.limit[n, p]], float(stroke[p])
    if not clear.all():
        p = int(np.argmin(clear))
        return f"clearance to {zone_of[0][zone_of[1][n, p]]}", float(stroke[p])
    return ("let-go", let_go_stroke) if not safe else ("", 0.0)


def shares_by_limit(codes: NDArray[np.int64], chosen: Flags) -> dict[str, float]:
    """Return the share of all operators whom each limit holds, among the chosen (n,)."""
    counts = np.bincount(codes[chosen], minlength=len(LIMITS)) / max(codes.size, 1)
    return {name: float(share) for name, share in zip(LIMITS, counts, strict=True) if share > 0.0}
