"""How near hand and forearm come to the zones, over all operators and positions."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm.posture import Posture
from ergo.evaluation.plan import Plan
from ergo.mechanism.zones import smallest_gap_m

Array = NDArray[np.float64]
GLOVE_ADDS = "glove_{}_depth_mm"


@dataclass(frozen=True)
class Gaps:
    """Smallest gap (n, P) [m] of hand or forearm to any zone, and which zone (n, P); no zones, no gap."""

    gap_m: Array
    zone: NDArray[np.int64]
    names: tuple[str, ...]


def gaps(plan: Plan, posture: Posture) -> Gaps:
    """Return the gaps of fist and forearm capsules to every zone.

    The capsules are those of the P95 hand of each sex, gloved as the study says; the forearm runs from elbow to
    wrist, the fist round the grip's centre.
    """
    n, positions = posture.elbow.shape[:2]
    zones = plan.machine.zones
    if not zones:
        return Gaps(np.full((n, positions), np.inf), np.zeros((n, positions), dtype=np.int64), ())
    rows = plan.library.values("clearance_parameters")
    glove = plan.library.values("body_model_parameters")[GLOVE_ADDS.format(plan.people.glove)]
    women = plan.people.women[:, None]
    forearm = 1e-3 * np.where(women, rows["forearm_radius_women_mm"], rows["forearm_radius_men_mm"])
    fist = 1e-3 * (np.where(women, rows["fist_radius_women_mm"], rows["fist_radius_men_mm"]) + glove)
    arm_gap, arm_zone = smallest_gap_m(zones, posture.elbow, posture.wrist, np.broadcast_to(forearm, (n, positions)))
    grip = np.broadcast_to(plan.machine.drive.grip_m, posture.wrist.shape)
    hand_gap, hand_zone = smallest_gap_m(zones, posture.wrist, grip, np.broadcast_to(fist, (n, positions)))
    nearer = hand_gap < arm_gap
    return Gaps(
        np.where(nearer, hand_gap, arm_gap), np.where(nearer, hand_zone, arm_zone), tuple(z.name for z in zones)
    )
