"""The machine as a machinist draws it: bench edge, lever at three positions, linkage with pins, slide, zones."""

from collections.abc import Mapping
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.frames import lever_direction, pivot_axis
from ergo.pictures import theme
from ergo.pictures.projection import PLAN, PLAN_FRONT, SIDE, Extent, Frame
from ergo.pictures.sheet import Sheet

Array = NDArray[np.float64]
ROUND = np.linspace(0.0, 2.0 * np.pi, 49)[:-1]


def key_positions(results: Results) -> tuple[int, int, int]:
    """Return the stroke positions drawn in outline: start, middle, end."""
    last = results.stroke.stroke.size - 1
    return 0, last // 2, last


def draw_bench(sheet: Sheet, frame: Frame, study: Mapping[str, Any], extent: Extent) -> None:
    """Draw the bench as far as `extent` of the view goes, down to the floor where it is in sight."""
    bench = study["bench"]
    (left_mm, low_mm), (right_mm, _) = extent.low, extent.high
    top, thick, toe = bench["surface_height_mm"], bench["edge_thickness_mm"], bench["toe_space_mm"]
    sheet.open("bench")
    if frame.view in (PLAN, PLAN_FRONT):
        _bench_from_above(sheet, frame, toe, extent)
    elif frame.view is SIDE:
        far = max(right_mm, 60.0)
        slab = np.array([[far, top], [0.0, top], [0.0, top - thick], [far, top - thick]])
        sheet.line(frame.flat_at(slab), weight=theme.MACHINE)
        sheet.hatch(frame.flat_at(np.array([[0.0, top], [0.0, top - thick], [far, top - thick], [far, top]])), step=5.0,
                    stroke=sheet.ink.pale)  # fmt: skip
        foot = max(low_mm, 0.0)
        if top - thick > foot and far > toe:
            sheet.line(frame.flat_at([[toe, top - thick], [toe, foot]]), weight=theme.PATH)
        if low_mm <= 0.0:
            _floor(sheet, frame, left_mm, far)
    else:
        sheet.line(frame.flat_at([[left_mm, top], [right_mm, top]]), weight=theme.MACHINE)
        sheet.line(frame.flat_at([[left_mm, top - thick], [right_mm, top - thick]]), weight=theme.PATH)
        if low_mm <= 0.0:
            _floor(sheet, frame, left_mm, right_mm)
    sheet.close()


def _floor(sheet: Sheet, frame: Frame, left_mm: float, right_mm: float) -> None:
    ends = frame.flat_at([[left_mm, 0.0], [right_mm, 0.0]])
    sheet.line(ends, weight=theme.PATH)
    for x in np.arange(ends[0, 0] + 4.0, ends[1, 0], 9.0):
        sheet.line([[x, ends[0, 1]], [x - 5.0, ends[0, 1] + 5.0]], stroke=sheet.ink.grey, weight=0.5)


def _bench_from_above(sheet: Sheet, frame: Frame, toe: float, extent: Extent) -> None:
    """The bench edge as a line right across the view, the toe space behind it hidden."""
    for y, weight, dash in ((0.0, theme.MACHINE, ""), (toe, theme.THIN, theme.HIDDEN_DASH)):
        if frame.view is PLAN:
            line = [[y, extent.low[1]], [y, extent.high[1]]]
        else:
            line = [[extent.low[0], y], [extent.high[0], y]]
        sheet.line(frame.flat_at(line), weight=weight, dash=dash, stroke=sheet.ink.grey if dash else "")


def lever_points(results: Results) -> dict[str, Array]:
    """Return pivot (3,), lever end (P, 3) and grip (P, 3) [mm]; without a lever only the grip."""
    grip = np.asarray(results.stroke.handle_mm, dtype=float)
    lever = results.study.get("lever")
    if not lever:
        return {"grip": grip}
    pivot = np.array(lever["pivot_mm"], dtype=float)
    along = lever_direction(pivot_axis(lever["axis"]), np.deg2rad(results.stroke.lever_deg))
    return {"pivot": pivot, "end": pivot + lever["length_mm"] * along, "grip": grip, "along": along}


def draw_lever(sheet: Sheet, frame: Frame, results: Results, position: int, *, faint: bool = False) -> None:
    """Draw the lever and its grip at one stroke position."""
    made = lever_points(results)
    grip = results.study["grip"]
    ink = sheet.ink.grey if faint else sheet.ink.ink
    weight = theme.THIN if faint else theme.MACHINE
    sheet.open("lever", stroke=f"{results.stroke.stroke[position]:.3f}")
    at = frame.at(made["grip"][position])
    radius = grip["diameter_mm"] / 2.0 * frame.units_per_mm
    if "pivot" in made:
        pivot, end = frame.at(made["pivot"]), frame.at(made["end"][position])
        hub = max(9.0, 1.1 * radius * 0.7)
        sheet.line(_bar(pivot, end, hub * 0.62, max(3.0, 0.45 * radius)), stroke=ink, weight=weight,
                   fill=sheet.ink.paper, closed=True)  # fmt: skip
        if np.linalg.norm(end - at) > 1.0:
            sheet.line([end, at], stroke=ink, weight=weight)
    fill = sheet.ink.paper
    if grip["kind"] == "ball":
        sheet.circle(at, radius, stroke=ink, weight=weight, fill=fill)
    else:
        half = _grip_axis(results, position) * grip["length_mm"] / 2.0
        ends = frame.at(np.stack([made["grip"][position] - half, made["grip"][position] + half]))
        if np.linalg.norm(ends[1] - ends[0]) < 2.0 * radius:
            sheet.circle(at, radius, stroke=ink, weight=weight, fill=fill)
        else:
            sheet.line(_bar(ends[0], ends[1], radius, radius), stroke=ink, weight=weight, fill=fill, closed=True)
    sheet.close()


def _grip_axis(results: Results, position: int) -> Array:
    """The grip's direction: a bar lies along the lever, a crossbar along the pivot axis, either tilted."""
    lever, grip = results.study.get("lever"), results.study["grip"]
    if not lever:
        return np.array([1.0, 0.0, 0.0])
    axis = pivot_axis(lever["axis"])
    angle, tilt = np.deg2rad(results.stroke.lever_deg[position]), np.deg2rad(grip["tilt_deg"])
    along = lever_direction(axis, [angle])[0]
    if grip["kind"] == "bar":
        return lever_direction(axis, [angle + tilt])[0]
    return np.cos(tilt) * axis + np.sin(tilt) * along


def _bar(start: Array, end: Array, wide: float, narrow: float) -> Array:
    """Outline of a tapered bar between two points of the sheet."""
    along = end - start
    length = float(np.linalg.norm(along))
    if length < 1e-6:
        return start + wide * np.stack([np.cos(ROUND), np.sin(ROUND)], axis=1)
    across = np.array([-along[1], along[0]]) / length
    return np.array([start + wide * across, end + narrow * across, end - narrow * across, start - wide * across])


def draw_pivot(sheet: Sheet, frame: Frame, results: Results) -> None:
    """Draw the pivot with its hub and centre lines, or its shaft where the view sees it from the side."""
    made = lever_points(results)
    if "pivot" not in made:
        return
    at = frame.at(made["pivot"])
    axis = pivot_axis(results.study["lever"]["axis"])
    sheet.open("pivot", key="lever.pivot_mm")
    if abs(axis @ frame.view.toward_reader) > 0.5:
        sheet.circle(at, 9.0, weight=theme.MACHINE, fill=sheet.ink.paper)
        sheet.circle(at, 3.2, weight=theme.PATH, fill=sheet.ink.paper)
        for way in ((17.0, 0.0), (0.0, 17.0)):
            sheet.line([at - way, at + way], stroke=sheet.ink.grey, dash=theme.CENTRE_DASH)
    else:
        along = frame.view.flat(axis) * np.array([1.0, -1.0])
        sheet.line(
            _bar(at - 16.0 * along, at + 16.0 * along, 5.0, 5.0),
            weight=theme.MACHINE,
            fill=sheet.ink.paper,
            closed=True,
        )
        sheet.line([at - 26.0 * along, at + 26.0 * along], stroke=sheet.ink.grey, dash=theme.CENTRE_DASH)
    sheet.close()


def zone_outline(frame: Frame, zone: Mapping[str, Any]) -> Array:
    """Return a zone's outline on the sheet (k, 2): the hull of its projection."""
    if zone["shape"] == "box":
        half = np.array(zone["size_mm"], dtype=float) / 2.0
        corners = np.array([[x, y, z] for x in (-1, 1) for y in (-1, 1) for z in (-1, 1)]) * half
        return _hull(frame.at(np.array(zone["centre_mm"], dtype=float) + corners))
    if zone["shape"] == "ball":
        centre = frame.at(np.array(zone["centre_mm"], dtype=float))
        return centre + zone["radius_mm"] * frame.units_per_mm * np.stack([np.cos(ROUND), np.sin(ROUND)], axis=1)
    ends = np.array([zone["from_mm"], zone["to_mm"]], dtype=float)
    along = ends[1] - ends[0]
    length = float(np.linalg.norm(along))
    axis = along / length if length > 0.0 else np.array([0.0, 0.0, 1.0])
    other = np.cross(axis, [1.0, 0.0, 0.0] if abs(axis[0]) < 0.9 else [0.0, 1.0, 0.0])
    other /= np.linalg.norm(other)
    third = np.cross(axis, other)
    ring = zone["radius_mm"] * (np.cos(ROUND)[:, None] * other + np.sin(ROUND)[:, None] * third)
    return _hull(frame.at(np.concatenate([ends[0] + ring, ends[1] + ring])))


def draw_zones(sheet: Sheet, frame: Frame, study: Mapping[str, Any]) -> None:
    """Draw hazard zones hatched at 45 degrees and obstacles cross-hatched; names come later, on top."""
    for zone in study.get("zones", ()):
        outline = zone_outline(frame, zone)
        if len(outline) < 3:
            continue
        sheet.open("zone", name=zone["name"], role=zone["role"])
        sheet.hatch(outline, crossed=zone["role"] == "obstacle", step=5.0)
        sheet.line(outline, stroke=sheet.ink.grey, weight=theme.PATH, closed=True)
        sheet.close()


def _hull(xy: Array) -> Array:
    """Convex hull (monotone chain), so that a projected solid has one outline."""
    order = xy[np.lexsort((xy[:, 1], xy[:, 0]))]

    def half(rows: Array) -> list[Array]:
        chain: list[Array] = []
        for p in rows:
            while len(chain) >= 2 and _turn(chain[-2], chain[-1], p) <= 1e-9:
                chain.pop()
            chain.append(p)
        return chain[:-1]

    return np.array(half(order) + half(order[::-1]))


def _turn(a: Array, b: Array, c: Array) -> float:
    return float((b[0] - a[0]) * (c[1] - a[1]) - (b[1] - a[1]) * (c[0] - a[0]))
