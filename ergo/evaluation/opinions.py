"""The second and third opinion on force, beside the joint-moment model, position by position."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm.posture import Posture
from ergo.evaluation.plan import Plan
from ergo.strength.arm_force_table_mil_std_1472 import arm_force_table_mil_std_1472
from ergo.strength.en_1005_3_2002 import ForceLimit, en_1005_3_2002
from ergo.strength.hand_capability import HandCapability

Array = NDArray[np.float64]
LOUD = 0.40  # a disagreement beyond this share is said aloud (the project's model description)
STANDARD_PERCENTILE = 15.0


@dataclass(frozen=True)
class Opinions:
    """Handbook force of P5 men, the standard's limit (P,) [N], and what is to be said about them."""

    table_n: Array
    standard: ForceLimit
    sentences: tuple[str, ...]
    not_covered: dict[str, str]


def directions(plan: Plan) -> tuple[Array, Array, Array]:
    """Return the parts (P,) of the work direction seen from the trunk: pull, up, inward."""
    work = plan.machine.drive.work_dir
    inward = -work[:, 0] if plan.people.hand == "right" else work[:, 0]
    return -work[:, 1], work[:, 2], inward


def opinions(plan: Plan, capability: HandCapability, posture: Posture) -> Opinions:
    """Return the handbook's and the standard's answers at each position, at the men's middle elbow angle."""
    pull, up, inward = directions(plan)
    men = ~plan.people.women
    chosen = men if men.any() else plan.people.women
    elbow = np.median(posture.elbow_angle[chosen], axis=0)
    table = arm_force_table_mil_std_1472(elbow, pull, up, inward, plan.people.hand, plan.library)
    study = plan.study
    standard = en_1005_3_2002(
        pull,
        up,
        inward,
        standing=study.operators.posture == "standing",
        trunk_support=study.operators.brace == "seat back",
        action_s=study.duty.stroke_s + study.duty.hold_s,
        actions_per_minute=study.duty.strokes_per_minute,
        hours=study.duty.hours_per_shift,
        library=plan.library,
    )
    covered = {}
    if not table.covered.all():
        covered["table_n"] = table.reason
    if standard.reason:
        covered["en_1005_3_n"] = standard.reason
    said = [*_against_table(plan, capability, table.force_n, men), *_against_standard(plan, capability, standard)]
    return Opinions(table.force_n, standard, tuple(said), covered)


def _against_table(plan: Plan, capability: HandCapability, table_n: Array, men: NDArray[np.bool_]) -> list[str]:
    """Say where model and handbook disagree on P5 men by more than LOUD."""
    if not men.any() or not np.isfinite(table_n).any():
        return []
    reached = np.where(capability.reached[men], capability.force_n[men], np.nan)
    covered = np.isfinite(reached).any(axis=0)
    weak = np.nanpercentile(np.where(covered, reached, 0.0), 5.0, axis=0)
    ratio = np.where(np.isfinite(table_n) & (weak > 0.0), weak / table_n, 1.0)
    worst = int(np.argmax(np.abs(np.log(np.maximum(ratio, 1e-9)))))
    if abs(ratio[worst] - 1.0) <= LOUD:
        return ["The handbook table (MIL-STD-1472, seated, P5 men) and the model agree within 40 % at every position it"
                " covers."]  # fmt: skip
    share, at = ratio[worst], plan.machine.drive.stroke[worst]
    return [f"The model and the handbook table (MIL-STD-1472, seated, P5 men) disagree: at {100 * at:.0f} % of the stroke the"
            f" model gives {weak[worst]:.0f} N and the table {table_n[worst]:.0f} N ({share:.2f} times). The joint-moment"
            " model decides the ratings."]  # fmt: skip


def _against_standard(plan: Plan, capability: HandCapability, standard: ForceLimit) -> list[str]:
    """Say which risk zone of EN 1005-3 the largest force lies in, and whether standard or strengths ask for less."""
    demand = plan.machine.drive.demand_n
    if not np.isfinite(standard.reduced_n).all():
        return [f"EN 1005-3 is not covered here: {standard.reason}."]
    share = np.where(np.isfinite(demand) & (demand > 0.0), demand / standard.reduced_n, 0.0)
    worst = int(np.argmax(share))
    limit_n, at = standard.reduced_n[worst], 100 * plan.machine.drive.stroke[worst]
    if share[worst] <= 0.0:
        return ["EN 1005-3 has nothing to say: at no position does the hand put a force on a handle that moves."]
    zone = standard.zone(demand[worst : worst + 1])[0]
    # The standard's limit is meant for all but the weakest 15 % of its users.
    given_n = float(np.percentile(capability.force_n[:, worst], STANDARD_PERCENTILE)) * plan.task.share
    stricter = "The standard is" if limit_n < given_n else "The strengths above are"
    text = (f"EN 1005-3 (professional use) limits the hand force to {limit_n:.0f} N at {at:.0f} % of the stroke;"
            f" {demand[worst]:.0f} N needed is {share[worst]:.1f} times that: {zone}. {stricter} stricter there, against"
            f" {given_n:.0f} N of the operators' P{STANDARD_PERCENTILE:.0f}.")  # fmt: skip
    return [text, *([f"EN 1005-3: {standard.caveat}."] if standard.caveat else [])]
