"""Operators at the lever: up to three outlines at one stroke position, and the furthest each can reach."""

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.bench_view import WIDTH, zone_corners
from ergo.pictures.dimensions import length_dimension
from ergo.pictures.machine_lines import draw_bench, draw_lever, draw_pivot, draw_zones
from ergo.pictures.people_lines import draw_person, people_rows
from ergo.pictures.projection import SIDE, Extent, Frame, View, laid, scale_for, scale_name
from ergo.pictures.sheet import Drawing, Sheet, figure, quantity
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]


def operators_drawing(results: Results, position: int | None = None, ink: Ink = theme.LIGHT, *, inked: int = 0,
                      view: View | None = None, width: float = WIDTH, height: float = 900.0) -> Drawing:  # fmt: skip
    """Return up to three operators at the lever at one stroke position, with reach limits, floor and bench.

    Parameters
    ----------
    position : int or None
        Index of the stroke position; the one with the smallest served share if None.
    inked : int
        Index of the operator drawn in ink, the others are fainter; -1 inks all of them.
    """
    if position is None:
        position = int(np.argmin(results.stroke.served_share))
    view = SIDE if view is None else view
    extent = _people_extent(results, view, position)
    one_to = scale_for(extent.size, (width - 250.0, height - 90.0))
    per_mm = theme.UNITS_PER_PAPER_MM / one_to
    used = extent.size[1] * per_mm + 90.0
    sheet = Sheet(width, used, ink, name="operators")
    left = (width - 110.0 - extent.size[0] * per_mm) / 2.0
    frame = laid(view, extent, one_to, left, 50.0)
    sheet.words([22.0, 20.0], f"{view.name.capitalize()}, {scale_name(one_to)}", weight=600)
    draw_bench(sheet, frame, results.study, extent)
    draw_zones(sheet, frame, results.study)
    heads = []
    for n, person in enumerate(results.persons[:3]):
        heads.append(draw_person(sheet, frame, person, position, inked=n == inked))
    for where in {0, results.stroke.stroke.size - 1}:
        draw_lever(sheet, frame, results, where, faint=True)
    draw_lever(sheet, frame, results, position)
    draw_pivot(sheet, frame, results)
    sheet.line(frame.at(results.stroke.handle_mm), weight=theme.PATH, stroke=sheet.ink.ink)
    _reach_lines(sheet, frame, results, extent)
    _head_names(sheet, frame, results, heads)
    if view is SIDE:
        _height_dimensions(sheet, frame, results, extent)
    stroke = results.stroke.stroke[position]
    title = f"Operators at {100 * stroke:.0f} % of the stroke, {scale_name(one_to)}"
    columns = ("operator", "stature", "mass", "served", "trunk forward", "elbow", "capability")
    return sheet.drawing(title, f"{title}; the numbers are in the table.", columns, people_rows(results, position))


def _people_extent(results: Results, view: View, position: int) -> Extent:
    rows = [np.asarray(results.stroke.handle_mm)]
    tallest = max([p.stature_mm for p in results.persons], default=1800.0) + 60.0
    for person in results.persons[:3]:
        rows += [np.asarray(p)[position][None] for p in person.points_mm.values()]
        feet = np.asarray(person.points_mm["foot"])[position]
        rows.append(np.array([[feet[0], feet[1], person.stature_mm + 60.0], [feet[0], feet[1] - 200.0, 0.0]]))
    rows.append(np.array([[0.0, 0.0, 0.0], [0.0, 160.0, results.study["bench"]["surface_height_mm"]]]))
    for zone in results.study.get("zones", ()):
        rows.append(zone_corners(zone, rows[0]))
    for line in (results.details.get("reach_lines_mm") or {}).values():
        curve = np.asarray(line, dtype=float).reshape(-1, 3)
        rows.append(curve[_over_bench(curve, results) & (curve[:, 2] <= tallest)])
    known = [r[np.isfinite(r).all(axis=1)] for r in rows]
    return Extent.of(view, *[r for r in known if len(r)]).grown(60.0, 30.0, 60.0, 30.0)


def _over_bench(curve: Array, results: Results) -> Flags:
    """Which points of a reach line a hand can get to: not those below the bench surface, behind its edge."""
    return (curve[:, 2] >= results.study["bench"]["surface_height_mm"]) | (curve[:, 1] <= 0.0)


def _reach_lines(sheet: Sheet, frame: Frame, results: Results, extent: Extent) -> None:
    """The line each intended end of the population can still reach, cut at the paper's edge."""
    lines = results.details.get("reach_lines_mm") or {}
    for name, rows in lines.items():
        curve = np.asarray(rows, dtype=float).reshape(-1, 3)
        flat = frame.view.flat(curve)
        inside = _over_bench(curve, results) & (flat >= extent.low).all(axis=1) & (flat <= extent.high).all(axis=1)
        if inside.sum() < 2:
            continue
        sheet.open("reach", name=name)
        women = "wom" in name
        xy = frame.flat_at(flat)
        for part in np.split(np.arange(len(xy)), np.flatnonzero(np.diff(inside.astype(int))) + 1):
            if inside[part[0]]:
                sheet.line(xy[part], stroke=sheet.ink.grey, dash=theme.WOMEN_DASH if women else "")
        seen = xy[inside]
        tip = seen[int(np.argmax(seen[:, 0] - 0.25 * seen[:, 1]))]
        sheet.words(tip + [6.0, 0.0], f"reach, {name}", size=theme.SMALL, halo=True, fill=sheet.ink.grey, longest=36)
        sheet.close()


def _head_names(sheet: Sheet, frame: Frame, results: Results, heads: list[Array | None]) -> None:
    """Name every operator in a column at the right, with a thin line to the head."""
    drawn = [(p, h) for p, h in zip(results.persons[:3], heads, strict=True) if h is not None]
    right = sheet.width - 196.0
    for row, (person, head) in enumerate(sorted(drawn, key=lambda pair: pair[1][1])):
        at = np.array([right, 46.0 + 34.0 * row])
        sheet.line([head, at + [-4.0, -4.0]], stroke=sheet.ink.pale, weight=0.5)
        look = "dashed" if person.women else "solid"
        sheet.words(at, f"{person.name} ({look})", size=theme.TEXT, weight=600, halo=True, longest=40)
        fate = "served" if person.served else "left out"
        sheet.words(at + [0.0, 13.0], f"{quantity(person.stature_mm, 'mm')}, {quantity(person.mass_kg, 'kg')}, {fate}",
                    size=theme.SMALL, halo=True)  # fmt: skip


def _height_dimensions(sheet: Sheet, frame: Frame, results: Results, extent: Extent) -> None:
    """Bench surface and pivot over the floor, toe space behind the bench edge."""
    bench, lever = results.study["bench"], results.study.get("lever")
    far = extent.high[0]
    floor, top = frame.flat_at([far, 0.0]), frame.flat_at([far, bench["surface_height_mm"]])
    length_dimension(
        sheet, floor, top, f"bench {figure(bench['surface_height_mm'])}", away=-20.0, key="bench.surface_height_mm"
    )
    if lever:
        pivot = frame.flat_at([far, lever["pivot_mm"][2]])
        length_dimension(sheet, floor, pivot, f"pivot {figure(lever['pivot_mm'][2])}", away=-46.0, key="lever.pivot_mm")
    if bench["toe_space_mm"] > 0.0:
        level = 0.5 * (bench["surface_height_mm"] - bench["edge_thickness_mm"])
        ends = frame.flat_at([[0.0, level], [bench["toe_space_mm"], level]])
        sheet.line(frame.flat_at([[0.0, bench["surface_height_mm"] - bench["edge_thickness_mm"]], [0.0, level - 40.0]]),
                   stroke=sheet.ink.grey)  # fmt: skip
        length_dimension(sheet, ends[0], ends[1], f"toe space {figure(bench['toe_space_mm'])}", away=0.01,
                         key="bench.toe_space_mm")  # fmt: skip
