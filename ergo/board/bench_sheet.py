"""The bench drawing as the board lays it out: the true view large, the other beside it, operators in a corner.

Every dimension line carries the study key it sets, so that a hand can drag it.
"""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.frames import pivot_axis, zero_direction
from ergo.pictures import theme
from ergo.pictures.bench_view import zone_corners
from ergo.pictures.dimensions import angle_dimension, leader, length_dimension
from ergo.pictures.linkage_lines import draw_guide, draw_linkage, linkage_points
from ergo.pictures.machine_lines import (
    draw_bench,
    draw_lever,
    draw_pivot,
    draw_zones,
    key_positions,
    lever_points,
    zone_outline,
)
from ergo.pictures.people_lines import draw_person
from ergo.pictures.projection import FRONT, PLAN, PLAN_FRONT, SIDE, Extent, Frame, View, lever_views
from ergo.pictures.ribbon import draw_force_scale, draw_ribbon, let_go_stroke, overrun_at, overrun_path
from ergo.pictures.sheet import Sheet, figure, quantity
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
WIDTH, HEIGHT = 656.0, 424.0
# Cells of the sheet: left, top, width, height; the corner right below belongs to the operators.
TRUE_CELL = (8.0, 24.0, 392.0, 372.0)
OTHER_CELL = (412.0, 24.0, 236.0, 128.0)
TRUE_ROOM = (66.0, 46.0, 66.0, 20.0)
OTHER_ROOM = (30.0, 14.0, 56.0, 14.0)
SHORTEST_MM = 1.0


@dataclass(frozen=True)
class BenchSheet:
    """The drawing, where the grip lies on it in each view (views, P, 2), its millimetres a unit, and its two halves."""

    svg: str
    marks: tuple[tuple[tuple[float, float], ...], ...]
    mm_per_unit: float
    words: str
    cells: tuple[tuple[float, ...], ...] = ((0.0, 0.0, 408.0, HEIGHT), (404.0, 6.0, 252.0, 150.0))


def bench_sheet(results: Results, ink: Ink) -> BenchSheet:
    """Return the bench drawing for the screen."""
    sheet = Sheet(WIDTH, HEIGHT, ink, name="bench")
    lever = results.study.get("lever")
    views = lever_views(lever["axis"]) if lever else (SIDE, PLAN)
    frames = []
    for view, cell, room in zip(views, (TRUE_CELL, OTHER_CELL), (TRUE_ROOM, OTHER_ROOM), strict=True):
        extent = Extent.of(view, *_machine_points(results))
        frame = _fitted(view, extent, cell, room)
        frames.append(frame)
        first = view is views[0]
        _view(sheet, frame, results, extent, true=first)
        sheet.words([cell[0] + 4.0, cell[1] - 8.0], view.name.capitalize(), size=theme.SMALL, fill=ink.grey)
    draw_force_scale(sheet, results, (12.0, HEIGHT - 6.0))
    words = _words(results)
    drawing = sheet.drawing("Bench, lever and handle path", words, (), ())
    marks = tuple(
        tuple((round(float(x), 1), round(float(y), 1)) for x, y in f.at(results.stroke.handle_mm)) for f in frames
    )
    return BenchSheet(drawing.svg, marks, 1.0 / frames[0].units_per_mm, words)


def operators_corner(results: Results, position: int, ink: Ink) -> str:
    """Return three operators at the lever at one stroke position, without words, for the corner of the sheet."""
    points = [np.asarray(results.stroke.handle_mm), np.array([[0.0, 0.0, 0.0], [0.0, 120.0, 0.0]])]
    for person in results.persons[:3]:
        points += [np.asarray(p)[position][None] for p in person.points_mm.values()]
        hip = np.asarray(person.points_mm["hip"])[position]
        points.append(np.array([[hip[0], hip[1] - 120.0, person.stature_mm + 70.0]]))
    extent = Extent.of(SIDE, *points).grown(40.0, 30.0, 60.0, 10.0)
    scale = min(232.0 / extent.size[0], 252.0 / extent.size[1])
    sheet = Sheet(extent.size[0] * scale, extent.size[1] * scale, ink, name="corner")
    frame = Frame(SIDE, theme.UNITS_PER_PAPER_MM / scale, (-extent.low[0] * scale, extent.high[1] * scale))
    draw_bench(sheet, frame, results.study, extent)
    for n, person in enumerate(results.persons[:3]):
        draw_person(sheet, frame, person, position, inked=n == 0)
    sheet.line(frame.at(results.stroke.handle_mm), weight=theme.PATH)
    draw_lever(sheet, frame, results, position)
    stroke = 100.0 * float(results.stroke.stroke[position])
    return sheet.drawing(f"Operators at {stroke:.0f} % of the stroke", "", (), ()).svg


def _fitted(view: View, extent: Extent, cell: tuple[float, ...], room: tuple[float, ...]) -> Frame:
    """Return the frame that lays an extent as large as it fits into a cell, `room` left for dimensions."""
    left, top, wide, tall = cell
    inner = (wide - room[0] - room[2], tall - room[1] - room[3])
    scale = min(inner[0] / max(extent.size[0], 1.0), inner[1] / max(extent.size[1], 1.0))
    at_x = left + room[0] + (inner[0] - extent.size[0] * scale) / 2.0
    at_y = top + room[3] + (inner[1] - extent.size[1] * scale) / 2.0
    origin = (at_x - extent.low[0] * scale, at_y + extent.high[1] * scale)
    return Frame(view, theme.UNITS_PER_PAPER_MM / scale, origin)


def _machine_points(results: Results) -> list[Array]:
    """Return what has to be in sight (k, 3) [mm]: path, lever, pins, overrun, near zones, the bench edge."""
    path = np.asarray(results.stroke.handle_mm, dtype=float)
    made, found = lever_points(results), [path]
    if "pivot" in made:
        found += [made["pivot"][None], made["end"]]
    found += [np.atleast_2d(v) for name, v in linkage_points(results).items() if name in ("arm_pin", "slide_pin")]
    where = let_go_stroke(results)
    over = None if where is None else overrun_at(results, where)
    if where is not None and over is not None:
        found.append(overrun_path(results, where, float(over[2])))
    for zone in results.study.get("zones", ()):
        found.append(zone_corners(zone, path))
    near, bench = np.median(path, axis=0), results.study["bench"]
    top = bench["surface_height_mm"]
    found.append(np.array([[near[0], 0.0, top], [near[0], 0.0, top - bench["edge_thickness_mm"]]]))
    return found


def _view(sheet: Sheet, frame: Frame, results: Results, extent: Extent, *, true: bool) -> None:
    more = 40.0 / frame.units_per_mm
    wide = extent.grown(more, 0.4 * more, more, 0.0)
    draw_bench(sheet, frame, results.study, wide)
    draw_zones(sheet, frame, results.study)
    draw_guide(sheet, frame, results)
    start, middle, end = key_positions(results)
    for position in (middle, end):
        draw_linkage(sheet, frame, results, position, faint=True)
        draw_lever(sheet, frame, results, position, faint=True)
    draw_linkage(sheet, frame, results, start)
    draw_lever(sheet, frame, results, start)
    draw_pivot(sheet, frame, results)
    draw_ribbon(sheet, frame, results)
    if true and frame.view is SIDE:
        _reach_lines(sheet, frame, results, extent.grown(0.6 * more, 0.0, 0.8 * more, 0.0))
    if results.study.get("lever"):
        (_true_dimensions if true else _other_dimensions)(sheet, frame, results)
    _names(sheet, frame, results, ends=true)


def _reach_lines(sheet: Sheet, frame: Frame, results: Results, extent: Extent) -> None:
    """How far the smallest and the largest operator can still reach, as far as it is on the sheet."""
    top = results.study["bench"]["surface_height_mm"]
    for n, (name, rows) in enumerate((results.details.get("reach_lines_mm") or {}).items()):
        curve = np.asarray(rows, dtype=float).reshape(-1, 3)
        flat = frame.view.flat(curve)
        seen = (flat >= extent.low).all(axis=1) & (flat <= extent.high).all(axis=1) & (curve[:, 2] >= top)
        if seen.sum() < 3:
            continue
        dash = theme.WOMEN_DASH if "wom" in name else theme.MEN_DASH
        runs = np.split(np.arange(len(curve)), np.flatnonzero(np.diff(seen.astype(int))) + 1)
        for run in runs:
            if seen[run[0]]:
                sheet.line(frame.flat_at(flat[run]), stroke=sheet.ink.grey, dash=dash)
        tip = frame.flat_at(flat[seen])[int(np.argmax(curve[seen, 2]))]
        short = name.partition("(")[2].rstrip(")") or name
        sheet.words(tip + [4.0, 11.0 + 12.0 * n], f"reach {short}", size=theme.SMALL, halo=True, fill=sheet.ink.grey)


def _names(sheet: Sheet, frame: Frame, results: Results, *, ends: bool) -> None:
    for zone in results.study.get("zones", ()):
        outline = zone_outline(frame, zone)
        centre = (np.clip(outline.min(axis=0), 4.0, None) + np.clip(outline.max(axis=0), None, sheet.width - 4.0)) / 2.0
        sheet.words(centre + [0.0, 3.5], zone["name"], size=theme.SMALL, anchor="middle", halo=True, longest=26)
    for point in results.study.get("touch_points", ()):
        at = frame.at(np.array(point["at_mm"], dtype=float))
        for way in ((5.0, 0.0), (0.0, 5.0)):
            sheet.line([at - way, at + way], weight=theme.PATH)
        sheet.words(at + [7.0, -4.0], point["name"], size=theme.SMALL, halo=True, longest=26)
    if ends:
        tips = frame.at(results.stroke.handle_mm[[0, -1]])
        middle = frame.at(np.mean(results.stroke.handle_mm, axis=0))
        for at, text in zip(tips, ("start", "end"), strict=True):
            way = (at - middle) / max(float(np.linalg.norm(at - middle)), 1.0)
            place = at + (16.0 + 0.5 * results.study["grip"]["diameter_mm"] * frame.units_per_mm) * way
            anchor = "start" if way[0] > 0.3 else ("end" if way[0] < -0.3 else "middle")
            sheet.words(place + [0.0, 3.5], text, size=theme.SMALL, anchor=anchor, halo=True)


def _true_dimensions(sheet: Sheet, frame: Frame, results: Results) -> None:
    """Lever length, lever angles, the pivot's place and the linkage, in the view of true length."""
    lever, made = results.study["lever"], lever_points(results)
    pivot, tip = frame.at(made["pivot"]), frame.at(made["end"][0])
    along, across = tip - pivot, frame.at(made["end"]).mean(axis=0) - pivot
    side = float(np.sign(along[0] * across[1] - along[1] * across[0])) or 1.0
    length_dimension(sheet, pivot, tip, f"length {figure(lever['length_mm'])}", away=side * 30.0, key="lever.length_mm")
    axis = pivot_axis(lever["axis"])
    flat = frame.view.flat(zero_direction(axis))
    zero, turn = float(np.arctan2(flat[1], flat[0])), 1.0 if axis @ frame.view.toward_reader > 0.0 else -1.0
    reach = float(np.linalg.norm(tip - pivot))
    sheet.line([pivot, pivot + 0.62 * reach * np.array([np.cos(zero), -np.sin(zero)])], stroke=sheet.ink.grey,
               dash=theme.CENTRE_DASH)  # fmt: skip
    for share, name in ((0.38, "start"), (0.56, "end")):
        angle = lever[f"{name}_deg"]
        shown = angle if abs(angle) > 0.5 else 0.5
        angle_dimension(sheet, pivot, zero, zero + turn * np.radians(shown), share * reach, f"{name} {figure(angle)}°",
                        key=f"lever.{name}_deg")  # fmt: skip
    _pivot_dimensions(sheet, frame, results, pivot)
    _linkage_dimensions(sheet, frame, results)


def _pivot_dimensions(sheet: Sheet, frame: Frame, results: Results, pivot: Array) -> None:
    """The pivot from the bench edge (or middle) and over the bench; outside the outline of what is drawn."""
    x, y, z = results.study["lever"]["pivot_mm"]
    height = results.study["bench"]["surface_height_mm"]
    if frame.view in (SIDE, FRONT):
        across, axis, name = (y, 1, "from edge") if frame.view is SIDE else (x, 0, "from middle")
        foot, level = frame.flat_at([0.0, height]), frame.flat_at([across, height])
        below = max(TRUE_CELL[1] + TRUE_CELL[3] - 12.0 - float(foot[1]), 12.0)
        way = 1.0 if across > 0 else -1.0
        if abs(across) >= SHORTEST_MM:
            length_dimension(sheet, foot, level, f"{figure(across)} {name}", away=-way * below, key=f"lever.pivot_mm[{axis}]")
        if abs(z - height) >= SHORTEST_MM:
            far = TRUE_CELL[0] + TRUE_CELL[2] - 58.0
            length_dimension(sheet, [far, float(level[1])], [far, float(pivot[1])], f"{figure(z - height)} over bench",
                             away=-0.01, key="lever.pivot_mm[2]")  # fmt: skip
    elif abs(y) >= SHORTEST_MM:
        edge = frame.flat_at([0.0, -x] if frame.view is PLAN else [x, 0.0])
        length_dimension(sheet, edge, pivot, f"{figure(y)} from edge", away=-26.0, key="lever.pivot_mm[1]")


def _linkage_dimensions(sheet: Sheet, frame: Frame, results: Results) -> None:
    made, points = results.study["linkage"], linkage_points(results)
    if "rim" in points:
        rim = frame.at(points["rim"][0])
        leader(sheet, rim, rim + [44.0, 26.0], f"pinion {figure(made['pinion_radius_mm'], 1)}", key="linkage.pinion_radius_mm")
    if "arm_pin" in points:
        pivot, pin = frame.at(points["pivot"]), frame.at(points["arm_pin"][0])
        middle = (pivot + pin) / 2.0
        leader(sheet, middle, middle + [-52.0, 22.0], f"arm {figure(made['arm_mm'], 1)}", key="linkage.arm_mm")
        if "slide_pin" in points and "link_mm" in made:
            middle = (frame.at(points["slide_pin"][0]) + pin) / 2.0
            leader(sheet, middle, middle + [52.0, 16.0], f"link {figure(made['link_mm'], 1)}", key="linkage.link_mm")


def _other_dimensions(sheet: Sheet, frame: Frame, results: Results) -> None:
    """What the true view cannot show: the pivot's place across."""
    x, y, z = results.study["lever"]["pivot_mm"]
    pivot = frame.at(np.array([x, y, z]))
    if frame.view is PLAN and abs(x) >= SHORTEST_MM:
        middle = frame.at(np.array([0.0, y, z]))
        away = OTHER_CELL[0] + OTHER_CELL[2] - 26.0 - float(pivot[0])
        word = "right" if x > 0 else "left"
        length_dimension(sheet, middle, pivot, f"{figure(abs(x))} {word}", away=away if x > 0 else -away, key="lever.pivot_mm[0]")
    elif frame.view is PLAN_FRONT and abs(y) >= SHORTEST_MM:
        edge = frame.at(np.array([x, 0.0, z]))
        length_dimension(sheet, edge, pivot, f"{figure(y)} from edge", away=-26.0, key="lever.pivot_mm[1]")
    elif frame.view is SIDE:
        height = results.study["bench"]["surface_height_mm"]
        if abs(z - height) >= SHORTEST_MM:
            level = frame.at(np.array([x, y, height]))
            length_dimension(sheet, level, pivot, f"{figure(z - height)} over bench", away=26.0, key="lever.pivot_mm[2]")


def _words(results: Results) -> str:
    s = results.stroke
    first, last = s.handle_mm[0], s.handle_mm[-1]
    most = int(np.nanargmax(s.demand_n)) if np.isfinite(s.demand_n).any() else 0
    return (
        f"The handle goes from {', '.join(figure(v) for v in first)} to {', '.join(figure(v) for v in last)} mm (right, "
        f"away, up). Most force is needed at {100 * s.stroke[most]:.0f} % of the stroke: "
        f"{quantity(float(s.demand_n[most]), 'N')}."
    )
