"""Other controls: does the same hand reach them from its stance, and does reaching lead through a zone."""

from typing import Any

import numpy as np

from ergo.arm import kernels as k
from ergo.arm.posture import Posture
from ergo.evaluation.plan import Plan
from ergo.mechanism.zones import smallest_gap_m
from ergo.rating.reasons import percent


def touching(made: Plan, posture: Posture) -> dict[str, Any]:
    """Return, for every touch point, who reaches it from the stance at the stroke's start, and what is in the way.

    The arm is taken straight from the shoulder of the start posture with the shoulder brought forward; the forearm
    is its outer part, as a capsule of the P95 forearm.
    """
    rows = made.library.values("clearance_parameters")
    radius = 1e-3 * np.where(made.people.women, rows["forearm_radius_women_mm"], rows["forearm_radius_men_mm"])
    arm = made.bench.ops[:, k.UPPER] + made.bench.ops[:, k.FOREARM]
    longest = arm + made.bench.ops[:, k.PROTRACTION]
    fore = made.bench.ops[:, k.FOREARM] / arm
    shoulder = posture.shoulder[:, 0, :]
    found, said = [], []
    for point in made.study.touch_points:
        at = np.array(point.at_mm) * 1e-3
        reaches = np.linalg.norm(at - shoulder, axis=1) <= longest
        row: dict[str, Any] = {"name": point.name, "reach_share": float(reaches.mean())}
        sentence = f"{percent(float(reaches.mean()))} reach {point.name} from where they stand or sit."
        if made.machine.zones:
            elbow = at + (shoulder - at) * fore[:, None]
            gap, zone = smallest_gap_m(made.machine.zones, elbow, np.broadcast_to(at, elbow.shape), radius)
            enters = reaches & (gap <= 0.0)
            row |= {"enters_share": float(enters.mean()), "gap_mm": float(gap.min() * 1e3)}
            if enters.any():
                name = made.machine.zones[int(np.bincount(zone[enters]).argmax())].name
                sentence += f" Reaching it leads through {name} for {percent(float(enters.mean()))}: move the control."
        found.append(row)
        said.append(sentence)
    return {"points": found, "sentences": said}
