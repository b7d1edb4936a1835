"""What can be wrong between the keys of a study whose single keys are sound."""

from collections.abc import Callable, Iterator

import numpy as np

from ergo.datasets import library, table_keys
from ergo.errors import Problem
from ergo.frames import pivot_axis
from ergo.letgo import structure
from ergo.load import drilling, press_fit
from ergo.mechanism import friction as rubbing
from ergo.mechanism.drive import slide_travel_m
from ergo.mechanism.linkage import FixedPin
from ergo.study.machine import CurvedLinkage
from ergo.study.model import Study
from ergo.study.sections import POPULATIONS
from ergo.study.trade import friction_of, lever_of, linkage_of, load_of, path_of, zones_of

Check = Callable[[Study], Iterator[Problem]]
# A person cannot stand with the trunk nearer to the path than this; nobody works behind their own back.
BODY_DEPTH_MM = 150.0


def cross_checks(study: Study, *, partial: bool = False) -> list[Problem]:
    """Return every problem between keys; with `partial` those of missing sections are left to others."""
    checks: list[Check] = [_bench, _people, _grip, _zones, _touch_points, _targets, _structure]
    if study.path is None and study.lever is None:
        if not partial:
            return [p for check in checks for p in check(study)] + [
                Problem("lever", "is missing", "", "a [lever] section, or a [path] section with a measured path")
            ]
        return [p for check in (_bench, _people, _grip, _zones, _targets) for p in check(study)]
    checks += [_path] if study.path is not None else [_lever, _load, _mechanism]
    return [p for check in (*checks, _handle_place) for p in check(study)]


def _bench(study: Study) -> Iterator[Problem]:
    bench = study.bench
    if bench.edge_thickness_mm > bench.surface_height_mm > 0.0:
        yield Problem("bench.edge_thickness_mm", "is more than the bench's height", f"{bench.edge_thickness_mm:g}",
                      f"up to {bench.surface_height_mm:g} mm")  # fmt: skip


def _people(study: Study) -> Iterator[Problem]:
    asked = study.operators
    for name in ("age_years", "stand_x_mm", "stand_off_mm"):
        low, high = getattr(asked, name)
        if low > high:
            yield Problem(f"operators.{name}", "the first number must not exceed the second", f"{low:g}, {high:g}")
    if asked.posture == "standing" and asked.stand_off_mm[1] < -study.bench.toe_space_mm:
        yield Problem("operators.stand_off_mm", "lets nobody stand: the toe space ends before it",
                      f"{asked.stand_off_mm[1]:g}", f"above {-study.bench.toe_space_mm:g} mm")  # fmt: skip
    if asked.brace == "seat back" and asked.posture == "standing":
        yield Problem("operators.brace", "a seat back needs a seated operator", "seat back", "none, bench edge")
    if asked.brace == "bench edge" and asked.posture == "seated":
        yield Problem("operators.brace", "a bench edge braces only a standing operator", "bench edge", "none, seat back")
    name = asked.population
    if not name.endswith(".csv") and name not in (*POPULATIONS, *table_keys()):
        import difflib

        near = difflib.get_close_matches(name, POPULATIONS, 1)
        allowed = ", ".join(POPULATIONS) + ", or a CSV file"
        yield Problem("operators.population", "is no population", name, allowed, f"did you mean {near[0]}?" if near else "")


def _grip(study: Study) -> Iterator[Problem]:
    if study.grip.turns and study.grip.twist_torque_nm <= 0.0:
        yield Problem("grip.twist_torque_nm", "is needed where the grip turns", f"{study.grip.twist_torque_nm:g}",
                      "above zero")  # fmt: skip


def _zones(study: Study) -> Iterator[Problem]:
    names: set[str] = set()
    for n, (made, zone) in enumerate(zip(study.zones, zones_of(study), strict=True)):
        found = zone.problems(f"zones[{n}]")
        yield from found
        if not found and (zone.distance_m(_body_at_rest(study)) < 0.0).any():
            yield Problem(f"zones[{n}]", "overlaps the operator at rest", made.name,
                          "a zone clear of where people stand or sit")  # fmt: skip
        if made.name in names:
            yield Problem(f"zones[{n}].name", "is used twice", made.name, "a name of its own")
        names.add(made.name)


def _body_at_rest(study: Study) -> np.ndarray:
    """Return points (M, 3) [m] up the middle of the body, where people stand farthest back, or sit."""
    asked = study.operators
    seated = asked.posture == "seated"
    y = asked.seat_y_mm if seated else -max(asked.stand_off_mm[1], 0.0) - BODY_DEPTH_MM
    heights = np.linspace(asked.seat_height_mm if seated else 200.0, 1300.0, 12)
    x = 0.5 * (asked.stand_x_mm[0] + asked.stand_x_mm[1])
    return np.array([(x, y, z) for z in heights]) * 1e-3


def _touch_points(study: Study) -> Iterator[Problem]:
    behind = -study.operators.stand_off_mm[1] - 400.0
    for n, point in enumerate(study.touch_points):
        if point.at_mm[1] < behind:
            yield Problem(f"touch_points[{n}].at_mm", "lies behind the operator", f"y = {point.at_mm[1]:g}",
                          f"y above {behind:g} mm")  # fmt: skip


def _targets(study: Study) -> Iterator[Problem]:
    from ergo.study.model import schema

    known = {r["path"] for r in schema()}
    for path, (low, high) in study.targets.free.items():
        if path.split("[")[0] not in known:
            yield Problem(f"targets.free.{path}", "is not a key of a study")
        elif low > high:
            yield Problem(f"targets.free.{path}", "the first bound must not exceed the second", f"{low:g}, {high:g}")


def _structure(study: Study) -> Iterator[Problem]:
    made = study.structure
    if made is None:
        return
    known, threads = structure.materials(library()), structure.threads(library())
    for name in ("lever_material", "pin_material"):
        if getattr(made, name) not in known:
            yield Problem(f"structure.{name}", "is not a known material", getattr(made, name), ", ".join(known))
    if made.pin_thread is not None and made.pin_thread not in threads:
        yield Problem("structure.pin_thread", "is no coarse metric thread", made.pin_thread, ", ".join(threads))
    if made.wall_mm is not None and made.lever_diameter_mm is not None and 2.0 * made.wall_mm >= made.lever_diameter_mm:
        yield Problem("structure.wall_mm", "leaves no bore in the tube", f"{made.wall_mm:g}",
                      f"below {0.5 * made.lever_diameter_mm:g} mm")  # fmt: skip


def _lever(study: Study) -> Iterator[Problem]:
    made = study.lever
    if made is None:
        return
    if not isinstance(made.axis, str):
        if np.linalg.norm(made.axis) < 1e-9:
            yield Problem("lever.axis", "has no length", str(list(made.axis)), "a name or a vector")
            return
        pivot_axis(made.axis)
    yield from lever_of(study).problems()
    if abs(made.end_deg - made.start_deg) > 360.0:
        yield Problem("lever.end_deg", "is more than one turn from the start", f"{made.end_deg:g}", "within 360 degrees")


def _load(study: Study) -> Iterator[Problem]:
    load, shaft, lib = study.load, study.linkage.kind == "shaft", library()
    if load.kind == "constant":
        wanted, other = ("torque_nm", "force_n") if shaft else ("force_n", "torque_nm")
        if getattr(load, wanted) is None:
            yield Problem(f"load.{wanted}", f"is missing: a {study.linkage.kind} linkage needs it")
        if getattr(load, other) is not None:
            yield Problem(f"load.{other}", f"does not belong to a {study.linkage.kind} linkage", "", wanted)
        return
    if shaft:
        yield Problem("load.kind", "a shaft takes a torque", load.kind, "constant, with torque_nm")
        return
    try:
        yield from load_of(study, lib).problems()
    except ValueError as error:
        known = drilling.materials(lib) if load.kind == "drilling" else press_fit.materials(lib)
        yield Problem("load.material", str(error), "", ", ".join(known))


def _mechanism(study: Study) -> Iterator[Problem]:
    """Yield what keeps the linkage from its stroke, or the load from covering it."""
    made = study.linkage
    if isinstance(made, CurvedLinkage) and (made.file is None) == (made.constant_ratio_mm_per_deg is None):
        yield Problem("linkage", "a curved slot needs either file or constant_ratio_mm_per_deg")
        return
    if any(True for _ in _lever(study)) or any(True for _ in _load(study)):
        return
    lib, lever = library(), lever_of(study)
    linkage = linkage_of(study, lever, lib)
    yield from rubbing.problems(friction_of(study), lever)
    if isinstance(linkage, FixedPin):
        return
    found = linkage.problems(lever.start_rad, lever.end_rad)
    yield from found
    if found:
        return
    slide = slide_travel_m(lever, linkage, lever.angles_rad(np.linspace(0.0, 1.0, study.study.positions)))
    if np.ptp(slide) < 1e-7:
        yield Problem("linkage", "moves nothing over this stroke", f"{np.ptp(slide) * 1e3:g} mm of slide travel")
        return
    at = study.load.lets_go_at
    reached = slide if at is None else slide[: max(int(np.ceil(at * (len(slide) - 1))) + 1, 1)]
    yield from load_of(study, lib).reach_problems(reached)


def _path(study: Study) -> Iterator[Problem]:
    if study.lever is not None:
        yield Problem("path", "stands in place of lever, linkage and load", "both [path] and [lever]", "one of them")
    if study.path is not None and len(study.path.rows) < 2:
        yield Problem("path.file", "needs at least two rows")


def _handle_place(study: Study) -> Iterator[Problem]:
    """Yield where the handle path runs through the floor, or through any place the operator could be in."""
    where = "path.file" if study.path is not None else "lever.pivot_mm"
    if study.path is None and any(True for _ in _lever(study)):
        return
    if study.path is not None and len(study.path.rows) < 2:
        return
    grip = path_of(study).grip_m * 1e3
    if grip[:, 2].min() < 0.0:
        yield Problem(where, "the handle path goes below the floor", f"z = {grip[:, 2].min():.0f} mm", "above zero")
    asked = study.operators
    seated = asked.posture == "seated"
    back = asked.seat_y_mm if seated else -asked.stand_off_mm[1] - BODY_DEPTH_MM
    if grip[:, 1].min() < back:
        yield Problem(where, "the handle path goes through the operator", f"y = {grip[:, 1].min():.0f} mm",
                      f"y above {back:.0f} mm, or another place to stand")  # fmt: skip
    side = max(abs(v) for v in asked.stand_x_mm) + 1500.0
    if np.abs(grip[:, 0]).max() > side:
        yield Problem(where, "the handle path is out of anybody's reach sideways",
                      f"x = {grip[np.abs(grip[:, 0]).argmax(), 0]:.0f} mm", f"within {side:.0f} mm")  # fmt: skip
