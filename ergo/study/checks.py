"""What can be wrong between the keys of a study whose single keys are sound."""

import difflib
from collections.abc import Callable, Iterator, Set

import numpy as np

from ergo.datasets import library
from ergo.errors import Problem
from ergo.frames import pivot_axis
from ergo.mechanism import friction as rubbing
from ergo.mechanism.drive import slide_travel_m
from ergo.mechanism.linkage import FixedPin
from ergo.study.loads import ConstantLoadSection
from ergo.study.machine import CurvedLinkage, HandleLinkage
from ergo.study.model import Study, schema
from ergo.study.paths import steps
from ergo.study.sections import POPULATIONS
from ergo.study.trade import friction_of, lever_of, linkage_of, load_of, path_of, zones_of

Check = Callable[[Study], Iterator[Problem]]
# A person cannot stand with the trunk nearer to the path than this; nobody works behind their own back.
BODY_DEPTH_MM = 150.0
FULL_TURN_RAD, SMALL_STROKE_DEG = 6.3, 2.0


def cross_checks(study: Study, sick: Set[str] = frozenset()) -> list[Problem]:
    """Return every problem between keys, leaving out the checks that lean on a section known to be sick."""
    return [p for check, needs in _CHECKS if not needs & sick for p in check(study)]


def _there(study: Study) -> Iterator[Problem]:
    """Yield what is neither given nor can be left out."""
    if study.path is None and study.lever is None:
        yield Problem("lever", "is missing", "", "a [lever] section, or a [path] section with a measured path")
    elif study.path is None and "load" not in study.model_fields_set:
        yield Problem("load", "is missing", "", 'a [load] section, such as kind = "constant", force_n = 60')


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
    if not name.endswith(".csv") and name not in POPULATIONS:
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
    asked = study.operators
    behind = (asked.seat_y_mm if asked.posture == "seated" else -asked.stand_off_mm[1]) - 400.0
    for n, point in enumerate(study.touch_points):
        if point.at_mm[1] < behind:
            yield Problem(f"touch_points[{n}].at_mm", "lies behind the operator", f"y = {point.at_mm[1]:g}",
                          f"y above {behind:g} mm")  # fmt: skip


def _targets(study: Study) -> Iterator[Problem]:
    for path, bounds in study.targets.free.items():
        yield from _free(study, path, bounds)


def _free(study: Study, path: str, bounds: tuple[float, float]) -> Iterator[Problem]:
    """Yield why a key may not be left free, or not between these bounds."""
    where, (low, high), way = f"targets.free.{path}", bounds, steps(path)
    names = ".".join(step for step in way or () if isinstance(step, str))
    rows = [r for r in schema() if r["path"] == names]
    if not rows:
        near = difflib.get_close_matches(names, sorted({r["path"] for r in schema()}), 1)
        yield Problem(where, "is not a key of a study", "", "", f"did you mean {near[0]}?" if near else "")
        return
    kinds = {"linkage": study.linkage.kind, "load": study.load.kind}
    row = next((r for r in rows if r["of_kind"] in ("", kinds.get(r["section"], r["of_kind"]))), None)
    if row is None:
        yield Problem(where, f"does not belong to a {kinds[rows[0]['section']]}", "", f"a {rows[0]['of_kind']}")
    elif row["kind"] not in ("number", "whole", "point", "pair"):
        yield Problem(where, "is no number", row["kind"], "keys with a number")
    elif row["kind"] in ("point", "pair") and not path.endswith("]"):
        yield Problem(where, "is more than one number", "", f"one of them, such as {path}[0]")
    elif low > high:
        yield Problem(where, "the first bound must not exceed the second", f"{low:g}, {high:g}")
    elif row["low"] is not None and (low < row["low"] or high > row["high"]):
        allowed = f"{row['low']:g} to {row['high']:g} {row['unit']}".strip()
        yield Problem(where, "reaches outside the key's range", f"{low:g} to {high:g}", allowed)


def _structure(study: Study) -> Iterator[Problem]:
    made = study.structure
    if made is None:
        return
    pairs = {"rectangular": ("lever_width_mm", "lever_depth_mm"), "tube": ("lever_diameter_mm", "wall_mm")}
    given = [name for name in pairs.get(made.lever_section, ()) if getattr(made, name) is not None]
    if len(given) == 1:
        other = next(name for name in pairs[made.lever_section] if name not in given)
        yield Problem(f"structure.{other}", f"is missing: a {made.lever_section} section needs it beside {given[0]}")
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
    turned = abs(made.end_deg - made.start_deg)
    if 0.0 < turned < SMALL_STROKE_DEG and max(abs(made.start_deg), abs(made.end_deg)) <= FULL_TURN_RAD:
        meant = " and ".join(f"{np.rad2deg(v):.0f}" for v in (made.start_deg, made.end_deg))
        yield Problem("lever.end_deg", "makes a stroke that is too small for a hand", f"{turned:g} degrees",
                      f"{SMALL_STROKE_DEG:g} degrees and over", f"did you mean {meant} degrees? (it looks like rad)")  # fmt: skip
    if turned > 360.0:
        yield Problem("lever.end_deg", "is more than one turn from the start", f"{made.end_deg:g}", "within 360 degrees")


def _load(study: Study) -> Iterator[Problem]:
    load, shaft = study.load, study.linkage.kind == "shaft"
    if study.path is not None or "load" not in study.model_fields_set:
        return
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
    yield from load_of(study, library()).problems()


def _mechanism(study: Study) -> Iterator[Problem]:
    """Yield what keeps the linkage from its stroke, or the load from covering it."""
    made = study.linkage
    if study.path is not None or study.lever is None:
        return
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
    if study.path is None:
        return
    left_out = {"lever": None, "linkage": HandleLinkage(), "load": ConstantLoadSection(kind="constant", force_n=0.0)}
    for name, nothing in left_out.items():
        if getattr(study, name) != nothing:
            yield Problem("path", "stands in place of lever, linkage and load", f"both [path] and [{name}]", "one of them")
    if len(study.path.rows) < 2:
        yield Problem("path.file", "needs at least two rows")


def _handle_place(study: Study) -> Iterator[Problem]:
    """Yield where the handle path runs through the floor, or through any place the operator could be in."""
    where = "path.file" if study.path is not None else "lever.pivot_mm"
    if study.path is None and (study.lever is None or any(True for _ in _lever(study))):
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


# Each check with the sections that it leans on.
_CHECKS: tuple[tuple[Check, frozenset[str]], ...] = tuple(
    (check, frozenset(needs.split()))
    for check, needs in (
        (_there, "lever load path"),
        (_bench, "bench"),
        (_people, "operators bench"),
        (_grip, "grip"),
        (_zones, "zones operators"),
        (_touch_points, "touch_points operators"),
        (_targets, "targets linkage load"),
        (_structure, "structure"),
        (_path, "path lever linkage load"),
        (_lever, "lever"),
        (_load, "load linkage path"),
        (_mechanism, "study lever linkage load path"),
        (_handle_place, "study lever grip path operators"),
    )
)
