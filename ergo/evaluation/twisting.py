"""A handle that is also turned to clamp: who can, and what gives out first."""

from typing import Any

import numpy as np

from ergo.arm.joints import JointRanges
from ergo.arm.posture import Posture
from ergo.evaluation.plan import Plan
from ergo.letgo.twist import grip_torque_nm, twist
from ergo.rating.reasons import percent
from ergo.strength.grip import grip_strength_n
from ergo.strength.hand_capability import HandCapability
from ergo.strength.joint_moments import JointStrengths

TABLES = ("letgo_twist",)


def twisting(made: Plan, capability: HandCapability, posture: Posture) -> dict[str, Any]:
    """Return who can turn the grip at the positions asked, the weaker way of turning, and what gives out first."""
    grip = made.study.grip
    if not grip.turns:
        return {"sentences": []}
    stroke = made.machine.drive.stroke
    wanted = grip.twist_at or (float(stroke[-1]),)
    at = [int(np.argmin(np.abs(stroke - where))) for where in wanted]
    strengths = JointStrengths.from_library(made.library).of(made.people, made.library)
    ranges = JointRanges.from_library(made.library)
    weaker = "pronation" if np.mean(strengths["pronation"]) <= np.mean(strengths["supination"]) else "supination"
    sign, end = (-1.0, ranges.pronation_rad) if weaker == "pronation" else (1.0, ranges.supination_rad)
    strength = np.where(capability.reached[:, at], strengths[weaker][:, None], np.nan)
    rows = made.library.values("grip_on_handle")
    glove = made.people.glove
    friction = rows["friction_bare"] if glove == "none" else rows[f"friction_glove_{glove}"]
    people = made.people
    held = grip_strength_n(people.women, people.age_years, people.hand, people.strength_common_z, made.library)
    slips = grip_torque_nm(held, friction, grip.diameter_mm * 1e-3, made.library)[:, None]
    share = made.task.share
    found = twist(np.full(len(at), grip.twist_torque_nm), np.zeros(len(at)), strength * share, slips * share,
                  sign * posture.turn[:, at], end)  # fmt: skip
    said = []
    for n, p in enumerate(at):
        first = {name: v[n] for name, v in found.shares().items() if v[n] > 0.0 and not name.startswith("nothing")}
        loses = ", ".join(f"{name} {percent(float(v))}" for name, v in sorted(first.items(), key=lambda i: -i[1]))
        able = float(np.mean(found.able[:, n]))
        said.append(f"Turning the grip with {grip.twist_torque_nm:g} N m at {100 * stroke[p]:.0f} % of the stroke ({weaker}):"
                    f" {percent(able)} can{'; gives out first: ' + loses if loses else ''}.")  # fmt: skip
    return {"able_share": [float(v) for v in np.mean(found.able, axis=0)], "way": weaker, "sentences": said}
