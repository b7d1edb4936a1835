"""The main picture: bench, lever, linkage and handle path in dimensioned views, and the operators at it."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.frames import pivot_axis, zero_direction
from ergo.pictures import theme
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
from ergo.pictures.projection import (
    FRONT,
    PLAN,
    PLAN_FRONT,
    SIDE,
    Extent,
    Frame,
    laid,
    lever_views,
    scale_for,
    scale_name,
)
from ergo.pictures.ribbon import draw_force_scale, draw_ribbon, let_go_stroke, overrun_at, overrun_path
from ergo.pictures.sheet import Drawing, Sheet, figure, plain, quantity
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
WIDTH = 680.0
# Room over the first view, between the two (the first one's dimensions lie there), and under the second.
ABOVE, BETWEEN, BELOW = 54.0, 92.0, 44.0
# The bench's middle line is drawn when it lies no further than this beside what the plan shows.
BESIDE_MM = 30.0


@dataclass(frozen=True)
class Layers:
    """What a bench picture shows beside bench, lever, linkage and zones."""

    ribbon: bool = True
    dimensions: bool = True


def _machine_points(results: Results, layers: Layers) -> list[Array]:
    """Everything of the machine that has to be on the paper (k, 3) [mm]."""
    found = [np.asarray(results.stroke.handle_mm, dtype=float)]
    made = lever_points(results)
    radius = results.study["grip"]["diameter_mm"]
    found += [found[0] + radius * np.array(sign) for sign in ((1, 1, 1), (-1, -1, -1))]
    if "pivot" in made:
        found += [made["pivot"][None], made["end"]]
    found += [
        np.atleast_2d(v) for name, v in linkage_points(results).items() if name in ("arm_pin", "slide_pin", "rim")
    ]
    at = let_go_stroke(results)
    if at is not None and layers.ribbon:
        overrun = overrun_at(results, at)
        if overrun is not None:
            found.append(overrun_path(results, at, float(overrun[2])))
    for zone in results.study.get("zones", ()):
        found.append(zone_corners(zone, found[0]))
    found += [np.array([point["at_mm"]], dtype=float) for point in results.study.get("touch_points", ())]
    height = results.study["bench"]["surface_height_mm"]
    thick = results.study["bench"]["edge_thickness_mm"]
    near = np.median(found[0], axis=0)
    found.append(np.array([[near[0], 0.0, height], [near[0], 0.0, height - thick]]))
    return found


def zone_corners(zone: dict, path: Array) -> Array:
    """A zone's corners, but no further from the handle path than its reach, so that a wall does not shrink the lever."""
    if zone["shape"] == "box":
        half = np.array(zone["size_mm"], dtype=float) / 2.0
        corners = np.array(zone["centre_mm"], dtype=float) + np.array([[1.0], [-1.0]]) * half
    elif zone["shape"] == "ball":
        corners = np.array(zone["centre_mm"], dtype=float) + np.array([[1.0], [-1.0]]) * zone["radius_mm"]
    else:
        ends = np.array([zone["from_mm"], zone["to_mm"]], dtype=float)
        corners = np.concatenate([ends + zone["radius_mm"], ends - zone["radius_mm"]])
    reach = max(float(np.ptp(path, axis=0).max()), 200.0)
    return np.clip(corners, path.min(axis=0) - reach, path.max(axis=0) + reach)


def machine_drawing(results: Results, ink: Ink = theme.LIGHT, *, layers: Layers | None = None, width: float = WIDTH,
                    height: float = 860.0) -> Drawing:  # fmt: skip
    """Return the dimensioned views of bench, lever, linkage, zones and handle path, one above the other.

    Parameters
    ----------
    results : Results
    ink : Ink
        Paper and inks.
    layers : Layers
        Whether ribbon and dimensions are shown.
    width, height : float
        Room on the sheet, in units of a quarter millimetre on paper; the height shrinks to what is needed.

    Returns
    -------
    Drawing
    """
    layers = Layers() if layers is None else layers
    lever = results.study.get("lever")
    views = lever_views(lever["axis"]) if lever else (SIDE, PLAN)
    points = _machine_points(results, layers)
    extents = [Extent.of(view, *points) for view in views]
    wide = max(e.size[0] for e in extents)
    tall = sum(e.size[1] for e in extents)
    side = 132.0 if layers.dimensions else 60.0
    footer = 52.0 if layers.ribbon else 0.0
    around = ABOVE + BETWEEN + BELOW + footer
    room = (width - 2.0 * side, height - around)
    one_to = scale_for((max(wide, 1.0), max(tall, 1.0)), room)
    per_mm = theme.UNITS_PER_PAPER_MM / one_to
    used = tall * per_mm + around
    sheet = Sheet(width, used, ink, name="machine")
    low = min(e.low[0] for e in extents)
    high = max(e.high[0] for e in extents)
    left = (width - (high - low) * per_mm) / 2.0
    top = ABOVE
    for n, (view, extent) in enumerate(zip(views, extents, strict=True)):
        same = Extent((low, extent.low[1]), (high, extent.high[1]))
        frame = laid(view, same, one_to, left, top)
        _one_view(sheet, frame, results, same, layers, first=n == 0)
        top += extent.size[1] * per_mm + BETWEEN
    if layers.ribbon:
        draw_force_scale(sheet, results, (22.0, used - 8.0))
    title = f"Bench, lever and handle path, {scale_name(one_to)}"
    alt = _alt(results)
    return sheet.drawing(title, alt, ("quantity", "value", "study key"), dimension_rows(results))


def _one_view(sheet: Sheet, frame: Frame, results: Results, extent: Extent, layers: Layers, *, first: bool) -> None:
    study = results.study
    more = 70.0 / frame.units_per_mm
    wide = extent.grown(more, more * 0.5, more, more * 0.5)
    top = frame.flat_at([[extent.low[0], extent.high[1]]])[0, 1]
    sheet.words([22.0, top - 34.0], frame.view.name.capitalize() + (f", {scale_name(frame.one_to)}" if first else ""),
                size=theme.TEXT, weight=600)  # fmt: skip
    draw_bench(sheet, frame, study, wide)
    draw_zones(sheet, frame, study)
    draw_guide(sheet, frame, results)
    start, middle, end = key_positions(results)
    for position in (middle, end):
        draw_linkage(sheet, frame, results, position, faint=True)
        draw_lever(sheet, frame, results, position, faint=True)
    draw_linkage(sheet, frame, results, start)
    draw_lever(sheet, frame, results, start)
    draw_pivot(sheet, frame, results)
    if layers.ribbon:
        draw_ribbon(sheet, frame, results)
    if layers.dimensions and study.get("lever"):
        (_true_dimensions if first else _other_dimensions)(sheet, frame, results, extent)
    _names(sheet, frame, results, ends=first)


def _names(sheet: Sheet, frame: Frame, results: Results, *, ends: bool) -> None:
    """Write names on zones and, where there is room, on the ends of the stroke, over everything else."""
    for zone in results.study.get("zones", ()):
        outline = zone_outline(frame, zone)
        low = np.clip(outline.min(axis=0), [4.0, 4.0], [sheet.width, sheet.height])
        high = np.clip(outline.max(axis=0), [0.0, 0.0], [sheet.width - 4.0, sheet.height])
        centre = (low + high) / 2.0
        sheet.words(centre + [0.0, 3.5], zone["name"], size=theme.SMALL, anchor="middle", halo=True, longest=32)
    for point in results.study.get("touch_points", ()):
        at = frame.at(np.array(point["at_mm"], dtype=float))
        for way in ((5.0, 0.0), (0.0, 5.0)):
            sheet.line([at - way, at + way], weight=theme.PATH)
        sheet.words(at + [7.0, -4.0], point["name"], size=theme.SMALL, halo=True, longest=32)
    if ends:
        _end_names(sheet, frame, results)


def _end_names(sheet: Sheet, frame: Frame, results: Results) -> None:
    """Name both ends of the stroke, with the lever angle that the study sets there."""
    ends = frame.at(results.stroke.handle_mm[[0, -1]])
    middle = frame.at(np.mean(results.stroke.handle_mm, axis=0))
    radius = results.study["grip"]["diameter_mm"] / 2.0 * frame.units_per_mm
    lever = results.study.get("lever")
    for at, name in zip(ends, ("start", "end"), strict=True):
        way = at - middle
        way = way / np.linalg.norm(way) if np.linalg.norm(way) > 1.0 else np.array([0.0, -1.0])
        place = at + (radius + 14.0) * way
        anchor = "start" if way[0] > 0.3 else ("end" if way[0] < -0.3 else "middle")
        text = f"{name} {figure(lever[f'{name}_deg'])}°" if lever else name
        sheet.open("dimension", key=f"lever.{name}_deg")
        sheet.words(place + [0.0, 3.5], text, anchor=anchor, halo=True)
        sheet.close()


def _sheet_angle(frame: Frame, direction: Array) -> float:
    flat = frame.view.flat(direction)
    return float(np.arctan2(flat[1], flat[0]))


def _true_dimensions(sheet: Sheet, frame: Frame, results: Results, extent: Extent) -> None:
    """Lever length, lever angles, pivot and bench in the view where the lever turns in true length."""
    lever, made = results.study["lever"], lever_points(results)
    pivot = frame.at(made["pivot"])
    end = frame.at(made["end"][0])
    centroid = frame.at(made["end"]).mean(axis=0)
    lever_way, path_way = end - pivot, centroid - pivot
    side = float(np.sign(lever_way[0] * path_way[1] - lever_way[1] * path_way[0])) or 1.0
    length_dimension(sheet, pivot, end, f"length {figure(lever['length_mm'])}", away=side * 34.0, key="lever.length_mm")
    axis = pivot_axis(lever["axis"])
    zero = _sheet_angle(frame, zero_direction(axis))
    turn = 1.0 if axis @ frame.view.toward_reader > 0.0 else -1.0
    reach = float(np.linalg.norm(end - pivot))
    zero_way = np.array([np.cos(zero), -np.sin(zero)])
    sheet.line([pivot, pivot + 0.58 * reach * zero_way], stroke=sheet.ink.grey, dash=theme.CENTRE_DASH)
    # The angles stand in words at the ends of the stroke, where there is room; the arcs show what they count from.
    for share, name in ((0.36, "start"), (0.52, "end")):
        angle = np.radians(lever[f"{name}_deg"])
        if abs(angle) > 0.01:
            angle_dimension(sheet, pivot, zero, zero + turn * angle, share * reach, "", key=f"lever.{name}_deg")
    _pivot_dimensions(sheet, frame, results, pivot, extent)
    _linkage_dimensions(sheet, frame, results)


def _pivot_dimensions(sheet: Sheet, frame: Frame, results: Results, pivot: Array, extent: Extent) -> None:
    """Pivot from the bench edge and over the bench or the floor, each from where the study counts it."""
    x, y, z = results.study["lever"]["pivot_mm"]
    height = results.study["bench"]["surface_height_mm"]
    if frame.view in (SIDE, FRONT):
        across = y if frame.view is SIDE else x
        foot = frame.flat_at([0.0, height])
        level = frame.flat_at([across, height])
        name = "from edge" if frame.view is SIDE else "from middle"
        slab = results.study["bench"]["edge_thickness_mm"] * frame.units_per_mm
        below = 24.0 + max(slab, float(pivot[1] - level[1]))
        if abs(across) > 0.5:
            way = 1.0 if across > 0 else -1.0
            length_dimension(sheet, foot, level, f"{figure(across)} {name}", away=-way * below, key="lever.pivot_mm")
        if abs(z - height) > 0.5:
            far = max(float(frame.flat_at([extent.high[0], 0.0])[0]), float(pivot[0]) + 110.0)
            length_dimension(sheet, [far, level[1]], [far, pivot[1]], f"{figure(z - height)} over bench", away=-34.0,
                             key="lever.pivot_mm")  # fmt: skip
    else:
        edge = frame.flat_at([0.0 if frame.view is PLAN else x, -x if frame.view is PLAN else 0.0])
        length_dimension(sheet, edge, pivot, f"{figure(y)} from edge", away=-30.0, key="lever.pivot_mm")


def _linkage_dimensions(sheet: Sheet, frame: Frame, results: Results) -> None:
    made, points = results.study["linkage"], linkage_points(results)
    if "rim" in points:
        rim = frame.at(points["rim"][0])
        leader(sheet, rim, rim + [70.0, 34.0], f"pinion radius {figure(made['pinion_radius_mm'], 1)}",
               key="linkage.pinion_radius_mm")  # fmt: skip
    if "arm_pin" in points:
        pivot, pin = frame.at(points["pivot"]), frame.at(points["arm_pin"][0])
        leader(sheet, (pivot + pin) / 2.0, (pivot + pin) / 2.0 + [-74.0, 30.0], f"arm {figure(made['arm_mm'], 1)}",
               key="linkage.arm_mm")  # fmt: skip
        if "slide_pin" in points:
            slide = frame.at(points["slide_pin"][0])
            leader(sheet, (slide + pin) / 2.0, (slide + pin) / 2.0 + [70.0, 26.0], f"link {figure(made['link_mm'], 1)}",
                   key="linkage.link_mm")  # fmt: skip
    if "slide_pin" in points:
        ends = frame.at(points["slide_pin"][[0, -1]])
        travel = abs(float(results.stroke.slide_mm[-1] - results.stroke.slide_mm[0]))
        if np.linalg.norm(ends[1] - ends[0]) > 2.0:
            length_dimension(sheet, ends[0], ends[1], f"travel {figure(travel, 1)}", away=-26.0)


def _other_dimensions(sheet: Sheet, frame: Frame, results: Results, extent: Extent) -> None:
    """What the first view cannot show: the pivot's place across, and the grip beside the lever."""
    x, y, z = results.study["lever"]["pivot_mm"]
    pivot = frame.at(np.array([x, y, z]))
    if frame.view is PLAN and extent.low[1] - BESIDE_MM <= 0.0 <= extent.high[1] + BESIDE_MM:
        middle = frame.at(np.array([0.0, y, z]))
        ends = frame.at(np.array([[0.0, -60.0, 0.0], [0.0, y + 160.0, 0.0]]))
        sheet.line(ends, stroke=sheet.ink.grey, dash=theme.CENTRE_DASH)
        sheet.words(ends[1] + [4.0, 3.5], "bench middle", size=theme.SMALL, fill=sheet.ink.grey, halo=True)
        if abs(x) > 0.5:
            length_dimension(sheet, middle, pivot, f"{figure(x)}", away=40.0, key="lever.pivot_mm")
    elif frame.view is PLAN:
        side = "right" if x > 0.0 else "left"
        text = f"{figure(abs(x))} {side} of the bench middle"
        leader(sheet, pivot, pivot + [70.0, 40.0], text, key="lever.pivot_mm")
    elif frame.view is PLAN_FRONT:
        edge = frame.at(np.array([x, 0.0, z]))
        if abs(y) > 0.5:
            length_dimension(sheet, edge, pivot, f"{figure(y)} from edge", away=-34.0, key="lever.pivot_mm")
    else:
        height = results.study["bench"]["surface_height_mm"]
        level = frame.at(np.array([x, y, height]))
        if abs(z - height) > 0.5:
            length_dimension(sheet, level, pivot, f"{figure(z - height)} over bench", away=34.0, key="lever.pivot_mm")


def _alt(results: Results) -> str:
    s = results.stroke
    x0, y0, z0 = s.handle_mm[0]
    x1, y1, z1 = s.handle_mm[-1]
    most = float(np.nanmax(s.demand_n))
    where = float(s.stroke[int(np.nanargmax(s.demand_n))])
    return (
        f"The handle goes from {x0:.0f}, {y0:.0f}, {z0:.0f} mm to {x1:.0f}, {y1:.0f}, {z1:.0f} mm "
        f"(right, away from the operator, up). The largest needed hand force is {most:.0f} N at {100 * where:.0f} % of "
        f"the stroke."
    )


def dimension_rows(results: Results) -> list[tuple[str, str, str]]:
    """Return every dimension of the machine drawing with the study key that sets it."""
    study, rows = results.study, []
    bench, lever, grip, linkage = study["bench"], study.get("lever"), study["grip"], study["linkage"]
    rows.append(("bench surface over floor", quantity(bench["surface_height_mm"], "mm"), "bench.surface_height_mm"))
    rows.append(("bench edge thickness", quantity(bench["edge_thickness_mm"], "mm"), "bench.edge_thickness_mm"))
    rows.append(("toe space", quantity(bench["toe_space_mm"], "mm"), "bench.toe_space_mm"))
    if lever:
        place = ", ".join(figure(v) for v in lever["pivot_mm"])
        axis = lever["axis"] if isinstance(lever["axis"], str) else ", ".join(figure(v, 3) for v in lever["axis"])
        rows.append(("pivot (right, away, up)", f"{place}\u202fmm", "lever.pivot_mm"))
        rows.append(("pivot axis", plain(axis), "lever.axis"))
        rows.append(("lever length", quantity(lever["length_mm"], "mm"), "lever.length_mm"))
        rows.append(("start angle", quantity(lever["start_deg"], "°", 1), "lever.start_deg"))
        rows.append(("end angle", quantity(lever["end_deg"], "°", 1), "lever.end_deg"))
    rows.append((f"grip ({grip['kind']}) diameter", quantity(grip["diameter_mm"], "mm"), "grip.diameter_mm"))
    for key, name in (("pinion_radius_mm", "pinion radius"), ("arm_mm", "arm"), ("link_mm", "link"),
                      ("slide_offset_mm", "slide line beside the pivot"), ("play_mm", "play")):  # fmt: skip
        if linkage.get(key) is not None:
            rows.append((name, quantity(linkage[key], "mm", 1), f"linkage.{key}"))
    travel = abs(float(results.stroke.slide_mm[-1] - results.stroke.slide_mm[0]))
    unit = "°" if linkage["kind"] == "shaft" else "mm"
    rows.append(("travel of the driven part", quantity(travel, unit, 1), "result"))
    return rows
