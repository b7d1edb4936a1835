"""The ratings, from what the evaluation found."""

import numpy as np
from numpy.typing import NDArray

from ergo.arm.joints import JointRanges
from ergo.arm.posture import Posture
from ergo.evaluation.clearance import Gaps
from ergo.evaluation.letting_go import Release
from ergo.evaluation.plan import Plan
from ergo.evaluation.tally import Tally
from ergo.rating import ratings
from ergo.rating.posture_en_1005_4 import PostureBands, posture_en_1005_4
from ergo.rating.ratings import Rating
from ergo.strength.hand_capability import LIMITS, HandCapability

Array = NDArray[np.float64]


def rate(made: Plan, capability: HandCapability, posture: Posture, gap: Gaps, gone: Release,
         counted: Tally) -> dict[str, Rating]:  # fmt: skip
    """Return the seven ratings by name."""
    drive, targets, women = made.machine.drive, made.study.targets, made.people.women
    through = np.logical_and.reduce(capability.reached, axis=1)
    demand = made.task.demand_n
    points, bands = posture_points(made, posture)
    weight = np.maximum(demand, 0.0) + 0.05 * max(float(np.max(demand)), 1.0)
    return {
        "direction": ratings.direction(
            -drive.work_dir[:, 1], demand, steps_m(drive.hand_travel_m), drive.stroke,
            pull_share_min=targets.pull_share_min, pull_where_force_above_n=targets.pull_where_force_above_n,
        ),
        "reach": ratings.reach(
            capability.reached, capability.limit, LIMITS, women, drive.stroke, served_share=targets.served_share
        ),
        "force": ratings.force(
            counted.margin, capability.reached, capability.limit, LIMITS, women, drive.stroke, demand,
            served_share=targets.served_share, margin_min=targets.margin_min,
        ),
        "posture": ratings.posture(
            points, capability.reached, weight, women, drive.stroke, target=bands.target
        ),
        "clearance": ratings.clearance(
            gap.gap_m, gap.zone, gap.names, through, women, drive.stroke, served_share=targets.served_share,
            gap_min_m=targets.gap_min_mm * 1e-3,
        ),
        "let_go": gone.rating,
        "served": ratings.served(
            counted.served, women, counted.worst_stroke, counted.limit, served_share=targets.served_share
        ),
    }  # fmt: skip


def posture_points(made: Plan, posture: Posture) -> tuple[Array, PostureBands]:
    """Return posture points (n, P, parts) of the easiest postures, and the bands they were judged by."""
    ranges = JointRanges.from_library(made.library)
    bands = PostureBands.from_library(made.library, made.study.duty.strokes_per_minute)
    arm = posture.elbow - posture.shoulder
    behind = arm[..., 1] * np.cos(posture.trunk) - arm[..., 2] * np.sin(posture.trunk) < 0.0
    turn_end = np.where(posture.turn >= 0.0, ranges.supination_rad, ranges.pronation_rad)
    bent_end = np.where(posture.deviation >= 0.0, ranges.ulnar_deviation_rad, ranges.radial_deviation_rad)
    wrist = np.zeros_like(posture.turn) if made.machine.ball else np.abs(posture.deviation) / bent_end
    fore = np.zeros_like(posture.turn) if made.machine.ball else np.abs(posture.turn) / turn_end
    return posture_en_1005_4(posture.elevation, behind, posture.trunk, wrist, fore, bands), bands


def steps_m(travel_m: Array) -> Array:
    """Return the hand travel that each position stands for (trapezoid weights)."""
    step = np.abs(np.diff(travel_m))
    return 0.5 * (np.concatenate([step, [0.0]]) + np.concatenate([[0.0], step]))
