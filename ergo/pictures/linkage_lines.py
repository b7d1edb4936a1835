"""The linkage between lever and tool: arm, link, pins, slide with its travel, rack, slot."""

import itertools
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.frames import lever_direction, pivot_axis
from ergo.pictures import theme
from ergo.pictures.projection import Frame
from ergo.pictures.sheet import Sheet

Array = NDArray[np.float64]
PIN = 4.2


def linkage_points(results: Results) -> dict[str, Array]:
    """Return the linkage's moving points [mm]: arm pin and slide pin (P, 3), slide direction (3,), as they apply.

    The slide coordinate counted from the start comes from the results; the start itself follows from the
    geometry of the study (arm, link, offset), the same relations that define these keys.
    """
    lever, made = results.study.get("lever"), results.study["linkage"]
    if not lever or made["kind"] in ("handle", "shaft", "table"):
        return {}
    axis, pivot = pivot_axis(lever["axis"]), np.array(lever["pivot_mm"], dtype=float)
    angle = np.deg2rad(np.asarray(results.stroke.lever_deg, dtype=float))
    turned = angle + np.deg2rad(made.get("arm_offset_deg", 0.0))
    if made["kind"] == "rack":
        return {"pivot": pivot, "rim": pivot + made["pinion_radius_mm"] * lever_direction(axis, turned)}
    d = np.deg2rad(made["slide_direction_deg"])
    along, across = lever_direction(axis, [d])[0], lever_direction(axis, [d + np.pi / 2.0])[0]
    offset = made.get("slide_offset_mm", 0.0)
    found = {"pivot": pivot, "along": along, "across": across}
    if "arm_mm" in made:
        found["arm_pin"] = pivot + made["arm_mm"] * lever_direction(axis, turned)
    x = _slide_coordinate(made, turned, d, results)
    if x is not None:
        found["slide_pin"] = pivot + x[:, None] * along + offset * across
    return found


def _slide_coordinate(made: Any, turned: Array, d: float, results: Results) -> Array | None:
    """Distance of the slide pin from the pivot along the slide line [mm] (P,)."""
    h = made.get("slide_offset_mm", 0.0)
    if made["kind"] == "connecting link":
        r, link = made["arm_mm"], made["link_mm"]
        rest = np.sqrt(np.maximum(link**2 - (r * np.sin(turned - d) - h) ** 2, 0.0))
        return r * np.cos(turned - d) + (rest if made["branch"] == "open" else -rest)
    if made["kind"] == "slotted arm":
        return h * np.tan(d + np.pi / 2.0 - turned)
    slot = results.details.get("slot_start_mm")
    return None if slot is None else float(slot) + np.asarray(results.stroke.slide_mm, dtype=float)


def draw_linkage(sheet: Sheet, frame: Frame, results: Results, position: int, *, faint: bool = False) -> None:
    """Draw the linkage at one stroke position; the guide and its travel are drawn once, by `draw_guide`."""
    points = linkage_points(results)
    if not points:
        return
    ink = sheet.ink.grey if faint else sheet.ink.ink
    weight = theme.THIN if faint else theme.PATH
    pivot = frame.at(points["pivot"])
    sheet.open("linkage", stroke=f"{results.stroke.stroke[position]:.3f}")
    if "rim" in points and _true(frame, results):
        radius = results.study["linkage"]["pinion_radius_mm"] * frame.units_per_mm
        sheet.circle(pivot, radius, stroke=ink, dash=theme.CENTRE_DASH)
        sheet.line([pivot, frame.at(points["rim"][position])], stroke=ink, weight=theme.THIN)
    chain = [pivot]
    chain += [frame.at(points[name][position]) for name in ("arm_pin", "slide_pin") if name in points]
    for a, b in itertools.pairwise(chain):
        _link(sheet, a, b, ink, weight)
    for pin in chain[1:]:
        sheet.circle(pin, PIN, stroke=ink, weight=weight, fill=sheet.ink.paper)
        if not faint:
            sheet.circle(pin, 1.0, stroke=ink, fill=ink)
    if "slide_pin" in points:
        _block(sheet, frame, points, position, ink, weight)
    sheet.close()


def _true(frame: Frame, results: Results) -> bool:
    return abs(float(pivot_axis(results.study["lever"]["axis"]) @ frame.view.toward_reader)) > 0.5


def _link(sheet: Sheet, a: Array, b: Array, ink: str, weight: float) -> None:
    """A link as two parallel edges between its pins."""
    along = b - a
    length = float(np.linalg.norm(along))
    if length < 1e-6:
        return
    across = 3.0 * np.array([-along[1], along[0]]) / length
    sheet.line(
        [a + across, b + across, b - across, a - across], stroke=ink, weight=weight, fill=sheet.ink.paper, closed=True
    )


def _block(sheet: Sheet, frame: Frame, points: dict[str, Array], position: int, ink: str, weight: float) -> None:
    """The slide's block, long side along the slide."""
    at = frame.at(points["slide_pin"][position])
    along = frame.view.flat(points["along"]) * np.array([1.0, -1.0])
    length = float(np.linalg.norm(along))
    if length < 0.3:
        return
    along = along / length
    across = np.array([-along[1], along[0]])
    corners = [at + a * 13.0 * along + b * 8.0 * across for a, b in ((-1, -1), (1, -1), (1, 1), (-1, 1))]
    sheet.line(corners, stroke=ink, weight=weight, closed=True)


def draw_guide(sheet: Sheet, frame: Frame, results: Results) -> None:
    """Draw the slide's line as a chain line, with its travel dimensioned beside it."""
    points = linkage_points(results)
    if "slide_pin" not in points:
        return
    ends = frame.at(points["slide_pin"][[0, -1]])
    way = ends[1] - ends[0]
    length = float(np.linalg.norm(way))
    if length < 2.0:
        return
    way = way / length
    sheet.open("slide")
    sheet.line([ends[0] - 30.0 * way, ends[1] + 30.0 * way], stroke=sheet.ink.grey, dash=theme.CENTRE_DASH)
    sheet.close()
