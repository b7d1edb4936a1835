"""The handle path as a ribbon: width is the needed hand force, mark and hue say pull or push."""

from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.projection import Frame
from ergo.pictures.sheet import Sheet, quantity

Array = NDArray[np.float64]
WIDEST = 46.0
NARROWEST = 1.6


def let_go_stroke(results: Results) -> float | None:
    """Return where the load lets go, or None."""
    return results.study.get("load", {}).get("lets_go_at")


def force_scale(results: Results) -> tuple[float, float]:
    """Return sheet units for a newton, and the force of the scale bar [N]."""
    demand = np.asarray(results.stroke.demand_n, dtype=float)
    top = max(float(np.nanmax(np.where(np.isfinite(demand), demand, 0.0))), 1.0)
    step = 10.0 ** np.floor(np.log10(top))
    bar = max(s * step for s in (0.5, 1.0, 2.0, 5.0) if s * step <= top * 1.0001)
    return WIDEST / top, float(bar)


def _normals(xy: Array) -> tuple[Array, Array]:
    """Unit tangents and normals (P, 2) of a projected path; a path seen end on keeps the last direction."""
    way = np.gradient(xy, axis=0)
    length = np.linalg.norm(way, axis=1)
    way = np.where(length[:, None] > 1e-6, way / np.maximum(length, 1e-6)[:, None], [[1.0, 0.0]])
    return way, np.stack([-way[:, 1], way[:, 0]], axis=1)


def draw_ribbon(sheet: Sheet, frame: Frame, results: Results, *, tail: bool = True) -> None:
    """Draw the ribbon with its notches, chevrons, and the break where the load lets go."""
    s = results.stroke
    xy = frame.at(s.handle_mm)
    way, across = _normals(xy)
    per_newton, _ = force_scale(results)
    half = np.maximum(np.where(np.isfinite(s.demand_n), s.demand_n, 0.0) * per_newton, NARROWEST) / 2.0
    kinds = [theme.way(float(v)) for v in s.pull]
    sheet.open("ribbon")
    for first, last in _runs(kinds):
        stop = min(last + 1, len(kinds) - 1)
        part = slice(first, stop + 1)
        line, tint = theme.hues(sheet.ink, kinds[first])
        edge = np.concatenate(
            [xy[part] + half[part, None] * across[part], (xy[part] - half[part, None] * across[part])[::-1]]
        )
        sheet.line(edge, stroke=line, weight=theme.THIN, fill=tint, closed=True)
    sheet.line(xy, stroke=sheet.ink.ink, weight=theme.PATH)
    at = let_go_stroke(results)
    last = 1.0 if at is None else at
    _notches(sheet, s.stroke, xy, across, half, last)
    _marks(sheet, s.stroke, xy, way, across, kinds, last)
    sheet.close()
    if at is not None:
        _break(sheet, s.stroke, xy, way, across, half, at)
        if tail:
            draw_overrun(sheet, frame, results, at)


def _runs(kinds: list[str]) -> list[tuple[int, int]]:
    """Return first and last index of each run of one kind."""
    starts = [0] + [i for i in range(1, len(kinds)) if kinds[i] != kinds[i - 1]]
    return list(zip(starts, [*(i - 1 for i in starts[1:]), len(kinds) - 1], strict=True))


def _at(stroke: Array, values: Array, where: float) -> Array:
    return np.array([np.interp(where, stroke, values[:, k]) for k in range(values.shape[1])])


def _notches(sheet: Sheet, stroke: Array, xy: Array, across: Array, half: Array, last: float) -> None:
    for tenth in range(11):
        where = tenth / 10.0
        if where > last:
            break
        middle, side = _at(stroke, xy, where), _at(stroke, across, where)
        reach = max(float(np.interp(where, stroke, half)), 3.0) + (3.5 if tenth % 5 == 0 else 1.5)
        sheet.line([middle - reach * side, middle + reach * side], stroke=sheet.ink.ink, weight=theme.THIN)


def _marks(sheet: Sheet, stroke: Array, xy: Array, way: Array, across: Array, kinds: list[str],
           last: float) -> None:  # fmt: skip
    """A mark between notches along the hand's motion: open chevron pull, filled chevron push, tick neither."""
    length = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(xy, axis=0), axis=1))])[-1]
    every = 1 if length > 130.0 else (2 if length > 60.0 else 5)
    for tenth in range(0, 10, every):
        where = (tenth + every / 2.0) / 10.0
        if where > last - 0.02:
            break
        at, along, side = _at(stroke, xy, where), _at(stroke, way, where), _at(stroke, across, where)
        kind = kinds[int(np.argmin(np.abs(stroke - where)))]
        direction_mark(sheet, at, along, side, kind)


def direction_mark(sheet: Sheet, at: ArrayLike, along: Array, side: Array, kind: str, size: float = 6.0) -> None:
    """Draw the mark of pull, push or neither at a point, pointing `along`."""
    at = np.asarray(at, dtype=float)
    line, _ = theme.hues(sheet.ink, kind)
    if kind == "neither":
        for shift in (-1.6, 1.6):
            sheet.line([at + shift * along - 0.8 * size * side, at + shift * along + 0.8 * size * side], stroke=line,
                       weight=theme.PATH)  # fmt: skip
        return
    wings = [at - 0.6 * size * along + size * side, at + 0.7 * size * along, at - 0.6 * size * along - size * side]
    if kind == "pull":
        sheet.line(wings, stroke=line, weight=theme.MACHINE)
    else:
        sheet.line(wings, stroke=line, weight=theme.THIN, fill=line, closed=True)


def _break(sheet: Sheet, stroke: Array, xy: Array, way: Array, across: Array, half: Array, where: float) -> None:
    """Two short strokes across the ribbon with paper between: the load lets go here."""
    at, along, side = _at(stroke, xy, where), _at(stroke, way, where), _at(stroke, across, where)
    reach = max(float(np.interp(where, stroke, half)), 6.0) + 5.0
    sheet.open("let-go")
    slant = 2.5 * along
    gap = [at + s * 3.0 * along + r * (reach * side + slant) for s, r in ((-1, -1), (-1, 1), (1, 1), (1, -1))]
    sheet.line(gap, stroke=sheet.ink.paper, weight=0.5, fill=sheet.ink.paper, closed=True)
    sheet.line(gap[:2], stroke=sheet.ink.ink, weight=theme.PATH)
    sheet.line(gap[2:], stroke=sheet.ink.ink, weight=theme.PATH)
    sheet.close()


def let_go_position(results: Results, where: float) -> int:
    """Return the last stroke position that is not past `where`: the load is still there."""
    return int(np.flatnonzero(np.asarray(results.stroke.stroke) <= where + 1e-9)[-1])


def overrun_at(results: Results, where: float) -> Array | None:
    """Return P5, P50, P95 of the overrun [mm] when the load lets go at `where`, None where there is none."""
    row = np.asarray(results.stroke.overrun_mm, dtype=float)[let_go_position(results, where)]
    return row if np.isfinite(row).all() else None


def overrun_path(results: Results, where: float, travel_mm: float, count: int = 25) -> Array:
    """Return the handle's way (count, 3) [mm] over `travel_mm` past `where`, straight on past the end of the stroke."""
    path = np.asarray(results.stroke.handle_mm, dtype=float)
    along = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(path, axis=0), axis=1))])
    start = float(np.interp(where, results.stroke.stroke, along))
    wanted = start + np.linspace(0.0, travel_mm, count)
    inside = np.stack([np.interp(wanted, along, path[:, k]) for k in range(3)], axis=1)
    last = (path[-1] - path[-2]) / np.linalg.norm(path[-1] - path[-2])
    return inside + np.maximum(wanted - along[-1], 0.0)[:, None] * last


def draw_overrun(sheet: Sheet, frame: Frame, results: Results, where: float) -> None:
    """Draw the overrun as a dotted tail to its middle value, and its range as a fan."""
    overrun = overrun_at(results, where)
    if overrun is None or overrun[2] <= 0.0:
        return
    sheet.open("overrun")
    far = frame.at(overrun_path(results, where, float(overrun[2])))
    _, across = _normals(far)
    open_by = np.linspace(0.0, 0.22, len(far)) * max(float(np.linalg.norm(far[-1] - far[0])), 30.0) + 3.0
    for side in (-1.0, 1.0):
        sheet.line(far + side * open_by[:, None] * across, stroke=sheet.ink.ink, weight=theme.THIN)
    sheet.line([far[-1] - open_by[-1] * across[-1], far[-1] + open_by[-1] * across[-1]], stroke=sheet.ink.ink)
    sheet.line(frame.at(overrun_path(results, where, float(max(overrun[1], 0.1)))), stroke=sheet.ink.ink,
               weight=theme.MACHINE, dash=theme.DOTTED)  # fmt: skip
    for value in overrun[:2]:
        tip = frame.at(overrun_path(results, where, float(max(value, 0.1))))
        _, normal = _normals(tip)
        sheet.line([tip[-1] - 7.0 * normal[-1], tip[-1] + 7.0 * normal[-1]], stroke=sheet.ink.ink, weight=theme.PATH)
    sheet.close()


def draw_force_scale(sheet: Sheet, results: Results, at: ArrayLike) -> None:
    """Draw the scale bar of the ribbon's width and the key of its marks, from `at` to the right."""
    per_newton, bar = force_scale(results)
    x, y = np.asarray(at, dtype=float)
    width = bar * per_newton
    sheet.open("force-scale")
    for shift in (0.0, width):
        sheet.line([[x - 4.0, y - shift], [x + 4.0, y - shift]], weight=theme.THIN)
    sheet.line([[x, y], [x, y - width]], weight=theme.PATH)
    sheet.words([x + 8.0, y - width / 2.0 + 3.5], f"ribbon width {quantity(bar, 'N')}", size=theme.SMALL)
    right, up = np.array([1.0, 0.0]), np.array([0.0, -1.0])
    for n, (kind, text) in enumerate((("pull", "pull"), ("push", "push"), ("neither", "neither"))):
        place = np.array([x + 128.0 + 74.0 * n, y - width / 2.0])
        direction_mark(sheet, place, right, up, kind, size=5.0)
        sheet.words(place + [10.0, 3.5], text, size=theme.SMALL)
    sheet.close()


def ribbon_rows(results: Results) -> list[tuple[Any, ...]]:
    """Return the text twin: every tenth of the stroke with place, direction and needed force."""
    s = results.stroke
    rows = []
    for tenth in range(11):
        p = int(np.argmin(np.abs(s.stroke - tenth / 10.0)))
        x, y, z = (f"{v:.0f}" for v in s.handle_mm[p])
        rows.append((f"{100 * s.stroke[p]:.0f} %", x, y, z, theme.way(float(s.pull[p])), quantity(s.demand_n[p], "N")))
    return rows
