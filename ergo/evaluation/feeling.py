"""What the hand still feels of the tool, beside a screw feed."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.plan import Plan
from ergo.letgo.feel import Touch, screw_noticed, smallest_noticed

Array = NDArray[np.float64]
MM = 1e-3


@dataclass(frozen=True)
class Felt:
    """Smallest noticed change of tool force (P,) [N], NaN where none is or it is not covered; in words."""

    newtons: Array
    sentence: str
    reason: str


def feel_row(made: Plan, touch: Touch) -> Felt:
    """Return what the hand on the lever notices along the stroke."""
    drive = made.machine.drive
    demand = np.where(np.isfinite(drive.demand_n), drive.demand_n, np.nan)
    felt = smallest_noticed(demand, drive.friction_n, drive.weight_n, drive.load_n, touch)
    known = felt.felt & felt.covered & np.isfinite(felt.smallest_n)
    newtons = np.where(known, felt.smallest_n, np.nan)
    reason = next((r for r in felt.reasons(touch) if r), "")
    if not known.any():
        return Felt(newtons, "The hand has no cue of the tool force in this range.", reason)
    at = int(np.nanargmax(np.where(known, drive.load_n, np.nan)))
    # Whole numbers: a part that rounds to nothing has no sign.
    rubbed, hung = (round(100.0 * part[at] / demand[at]) for part in (drive.friction_n, drive.weight_n))
    unit = "N m" if made.study.linkage.kind == "shaft" else "N"
    sentence = (f"At {100 * drive.stroke[at]:.0f} % of the stroke, of {drive.load_n[at]:.0f} {unit} at the tool the hand notices"
                f" a change of {newtons[at]:.0f} {unit} ({100 * felt.smallest_share[at]:.0f} %); friction takes"
                f" {rubbed} % of the hand force, lever weight and spring {hung} %.")  # fmt: skip
    return Felt(newtons, sentence, reason)


def screw_sentence(made: Plan) -> str:
    """Return how a screw feed under the same load would feel, empty where the study gives none."""
    screw = made.study.screw
    if screw is None:
        return ""
    load = float(np.nanmax(np.where(np.isfinite(made.machine.drive.load_n), made.machine.drive.load_n, np.nan)))
    touch = Touch.from_library(made.library)
    felt = screw_noticed(np.array([load]), screw.lead_mm * MM, screw.wheel_radius_mm * MM, screw.efficiency, touch)
    if not felt.felt[0]:
        return "A screw feed of the given lead passes nothing back to the wheel: the hand would get no cue at all."
    return f"On the given screw feed the hand would notice a change of {felt.smallest_n[0]:.0f} N."
