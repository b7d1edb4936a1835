"""Representative operators, ready to be drawn, and the lines that they reach."""

import numpy as np
from numpy.typing import NDArray

from ergo.arm.posture import Posture
from ergo.arm.reach import reach_line_m
from ergo.evaluation.plan import Plan
from ergo.evaluation.results import Person
from ergo.strength.hand_capability import HandCapability

Array = NDArray[np.float64]
HEAD_ABOVE_SHOULDER = "head_above_shoulder_mm"


def representatives(plan: Plan) -> dict[str, int]:
    """Return which operators stand for the rest: the small woman, the middle person, the large man."""
    people = plan.people
    found: dict[str, int] = {}
    if people.women.any():
        found["small woman (P5)"] = _nearest(people.stature_m, people.women, 5.0)
    found["middle (P50)"] = _nearest(people.stature_m, np.ones_like(people.women), 50.0)
    if (~people.women).any():
        found["large man (P95)"] = _nearest(people.stature_m, ~people.women, 95.0)
    return found


def _nearest(stature_m: Array, chosen: NDArray[np.bool_], percentile: float) -> int:
    rows = np.nonzero(chosen)[0]
    return int(rows[np.argmin(np.abs(stature_m[rows] - np.percentile(stature_m[rows], percentile)))])


def persons(plan: Plan, capability: HandCapability, posture: Posture, served: NDArray[np.bool_]) -> tuple[Person, ...]:
    """Return the representatives with the points of their easiest posture at every position."""
    head = plan.library.values("stance_parameters")[HEAD_ABOVE_SHOULDER] * 1e-3
    return tuple(_person(plan, capability, posture, served, name, n, head) for name, n in representatives(plan).items())


def _person(plan: Plan, capability: HandCapability, posture: Posture, served: NDArray[np.bool_], name: str, n: int,
            head_m: float) -> Person:  # fmt: skip
    trunk = posture.trunk[n][:, None]
    up = np.concatenate([np.zeros_like(trunk), np.sin(trunk), np.cos(trunk)], axis=1)
    # The middle of the shoulders, straight above the hips along the trunk.
    middle = posture.shoulder[n].copy()
    middle[:, 0] = posture.hip[n][:, 0]
    ankle, hip = posture.ankle[n], posture.hip[n]
    knee = hip + np.array([0.0, plan.people.buttock_knee_m[n] - 0.1, 0.0])
    if not plan.place.support.seated:
        knee = 0.5 * (ankle + hip)
    foot = ankle.copy()
    if plan.place.support.seated:
        foot = knee.copy()
        foot[:, 2] = plan.people.ankle_height_m[n]
    points = {
        "foot": foot,
        "knee": knee,
        "hip": hip,
        "neck": middle,
        "head": middle + head_m * up,
        "shoulder": posture.shoulder[n],
        "elbow": posture.elbow[n],
        "wrist": posture.wrist[n],
        "grip": plan.machine.drive.grip_m,
    }
    return Person(
        name=name,
        women=bool(plan.people.women[n]),
        stature_mm=float(plan.people.stature_m[n] * 1e3),
        mass_kg=float(plan.people.mass_kg[n]),
        served=bool(served[n]),
        points_mm={key: value * 1e3 for key, value in points.items()},
        trunk_deg=np.rad2deg(posture.trunk[n]),
        elbow_deg=np.rad2deg(posture.elbow_angle[n]),
        capability_n=capability.force_n[n],
    )


def reach_lines_mm(plan: Plan, capability: HandCapability) -> dict[str, list[list[float]]]:
    """Return the side-view reach line of each representative from their own stance: [x, y, z] points [mm]."""
    angles = np.deg2rad(np.linspace(-70.0, 100.0, 35))
    found = {}
    for name, n in representatives(plan).items():
        if name.startswith("middle"):
            continue
        line = reach_line_m(plan.bench.ops[n], plan.bench.scene, capability.stance[n, 1], angles)
        x = plan.bench.mirror * (capability.stance[n, 0] + plan.people.shoulder_half_breadth_m[n])
        found[name] = [[x * 1e3, float(y) * 1e3, float(z) * 1e3] for y, z in line]
    return found
