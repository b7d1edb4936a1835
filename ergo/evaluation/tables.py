"""The frozen tables of a result, from what the evaluation found."""

from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.evaluation.clearance import Gaps
from ergo.evaluation.letting_go import Release
from ergo.evaluation.opinions import Opinions, directions
from ergo.evaluation.plan import Plan
from ergo.evaluation.results import PeopleTable, StrokeTable
from ergo.evaluation.tally import Tally, shares_by_limit
from ergo.strength.hand_capability import LIMITS, HandCapability

Array = NDArray[np.float64]
_CURVES = (("women_p05", True, 5.0), ("women_p50", True, 50.0), ("women_p95", True, 95.0), ("men_p05", False, 5.0),
           ("men_p50", False, 50.0), ("men_p95", False, 95.0), ("men_p99", False, 99.0))  # fmt: skip


def percentile_curves(force_n: Array, women: NDArray[np.bool_]) -> dict[str, Array]:
    """Return percentiles (P,) of a force (n, P) by sex; NaN for a sex that is not drawn."""
    found = {}
    for name, sex, mark in _CURVES:
        chosen = women == sex
        found[name] = np.percentile(force_n[chosen], mark, axis=0) if chosen.any() else np.full(force_n.shape[1], np.nan)
    return found


def stroke_table(made: Plan, capability: HandCapability, gap: Gaps, second: Opinions, gone: Release,
                 counted: Tally) -> StrokeTable:  # fmt: skip
    """Return everything position by position."""
    drive, women = made.machine.drive, made.people.women
    pull, up, inward = directions(made)
    capable = percentile_curves(capability.force_n, women)
    everyone = np.ones(women.size, dtype=bool)
    fine = capability.reached & counted.strong & counted.clear
    nearest = gap.gap_m.min(axis=0) * 1e3
    return StrokeTable(
        stroke=drive.stroke,
        lever_deg=np.rad2deg(drive.lever_rad),
        handle_mm=drive.grip_m * 1e3,
        work_dir=drive.work_dir,
        demand_n=drive.demand_n,
        slide_mm=drive.slide_m * (1.0 if made.study.linkage.kind == "shaft" else 1e3),
        ratio=drive.ratio,
        side_force_n=drive.side_force_n,
        load_n=drive.load_n,
        friction_n=drive.friction_n,
        weight_n=drive.weight_n,
        pull=pull,
        up=up,
        inward=inward,
        capability_n=capable,
        allowed_n={name: value * made.task.share for name, value in capable.items()},
        served_share=fine.mean(axis=0),
        reach_share=capability.reached.mean(axis=0),
        governing=tuple(shares_by_limit(capability.limit[:, p], everyone) for p in range(drive.stroke.size)),
        lost=tuple(_lost(capability, counted, p) for p in range(drive.stroke.size)),
        table_n=second.table_n,
        en_1005_3_n=second.standard.reduced_n,
        overrun_mm=gone.overrun_mm,
        overrun_toward=gone.toward,
        balance=gone.balance,
        gap_mm=np.where(np.isfinite(nearest), nearest, np.nan),
        feel_n=gone.feel_n,
        not_covered={**second.not_covered, **gone.not_covered},
    )


def _lost(capability: HandCapability, counted: Tally, p: int) -> dict[str, float]:
    """Return the share of operators not served at one position, by what loses them."""
    reached, strong = capability.reached[:, p], counted.strong[:, p]
    rows = shares_by_limit(capability.limit[:, p], ~reached | ~strong)
    unclear = reached & strong & ~counted.clear[:, p]
    return {**rows, "clearance": float(unclear.mean())} if unclear.any() else rows


def crowd_table(made: Plan, capability: HandCapability, counted: Tally) -> PeopleTable:
    """Return one row an operator."""
    ops = made.bench.ops[:, k.FLEXION : k.ELBOW_EXTENSION + 1]
    strength = np.exp(np.mean(np.log(ops / np.median(ops, axis=0)), axis=1))
    finite = np.where(np.isfinite(counted.margin), counted.margin, np.inf).min(axis=1)
    return PeopleTable(
        women=made.people.women,
        age_years=made.people.age_years,
        stature_mm=made.people.stature_m * 1e3,
        mass_kg=made.people.mass_kg,
        strength_share=strength,
        stand_x_mm=made.bench.mirror * capability.stance[:, 0] * 1e3,
        stand_y_mm=capability.stance[:, 1] * 1e3,
        margin=finite,
        worst_stroke=counted.worst_stroke,
        limit=counted.limit,
        served=counted.served,
    )


def people_row(made: Plan) -> dict[str, Any]:
    """Return who was drawn."""
    asked = made.study.operators
    return {
        "population": asked.population,
        "count": int(made.people.women.size),
        "women_share": float(made.people.women.mean()),
        "age_years": list(asked.age_years),
        "hand": asked.hand,
        "posture": asked.posture,
        "limits": list(LIMITS),
    }
