"""What the strongest operator does to the lever, its pin and their material."""

import math
from typing import Any

import numpy as np

from ergo.evaluation.plan import Plan
from ergo.letgo import structure
from ergo.strength.hand_capability import HandCapability
from ergo.study.machine import Structure

MM = 1e-3
TABLES = ("strong_end_parameters", "lever_materials", "metric_threads_coarse")


def strong_end(made: Plan, capability: HandCapability) -> dict[str, Any]:
    """Return the P99 force of the men along the stroke, and the safety of lever root and pin where they are given."""
    men = ~made.people.women
    if not men.any() or made.machine.lever is None:
        return {"sentences": ["The strong end is not covered: no men are drawn, or the path has no lever."]}
    strongest = np.percentile(capability.force_n[men], 99.0, axis=0)
    at = int(np.argmax(strongest))
    force, stroke = float(strongest[at]), made.machine.drive.stroke[at]
    said = [f"The strong end: P99 of the men give {force:.0f} N at {100 * stroke:.0f} % of the stroke; lever, pins and stops"
            " must survive that."]  # fmt: skip
    parts = _parts(made, made.study.structure, force) if made.study.structure is not None else []
    if not parts:
        return {"force_n": force, "sentences": [*said, "No [structure] dimensions are given, so no stress is worked out."]}
    verdict = structure.strong_end(force, parts, made.library)
    rows = [{"part": p.name, "kind": p.kind, "stress_mpa": p.notched_pa * 1e-6, "safety": p.safety, "status": p.status}
            for p in parts]  # fmt: skip
    return {"force_n": force, "parts": rows, "weak": verdict.weak.name, "sentences": [*said, verdict.sentence()]}


def _parts(made: Plan, given: Structure, force_n: float) -> list[structure.Part]:
    """Return the stressed parts that the study dimensions."""
    lever = made.machine.lever
    assert lever is not None  # `strong_end` has looked
    found = []
    plain = structure.Finish.from_library(made.library, "plain")
    modulus = _modulus(given)
    if modulus is not None:
        material = structure.Material.from_library(made.library, given.lever_material)
        found.append(structure.bent("lever root", force_n, lever.length_m, modulus, material, plain))
    if given.pin_diameter_mm is None and given.pin_thread is None:
        return found
    material = structure.Material.from_library(made.library, given.pin_material)
    # The pivot carries the hand's force and what the linkage answers with at the hardest place.
    linkage = float(np.max(np.where(np.isfinite(made.machine.drive.pin_force_n), made.machine.drive.pin_force_n, 0.0)))
    demand = float(np.max(made.task.demand_n))
    load = force_n * max(linkage / demand, 1.0) if demand > 0.0 else force_n
    planes = structure.SHEAR_PLANES[given.pin_shear]
    if given.pin_thread is not None:
        area = structure.stress_area_m2(made.library, given.pin_thread)
        finish = structure.Finish.from_library(made.library, "rolled thread")
        found.append(structure.sheared(f"pivot pin, {given.pin_thread} thread", load, area, planes, material, finish))
    elif given.pin_diameter_mm is not None:
        area = math.pi / 4.0 * (given.pin_diameter_mm * MM) ** 2
        found.append(structure.sheared("pivot pin", load, area, planes, material, plain))
    return found


def _modulus(given: Structure) -> float | None:
    if given.lever_section == "round" and given.lever_diameter_mm is not None:
        return structure.round_modulus_m3(given.lever_diameter_mm * MM)
    if given.lever_section == "tube" and given.lever_diameter_mm is not None and given.wall_mm is not None:
        return structure.tube_modulus_m3(given.lever_diameter_mm * MM, (given.lever_diameter_mm - 2.0 * given.wall_mm) * MM)
    if given.lever_section == "rectangular" and given.lever_width_mm is not None and given.lever_depth_mm is not None:
        return structure.rectangle_modulus_m3(given.lever_width_mm * MM, given.lever_depth_mm * MM)
    return None
