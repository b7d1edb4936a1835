"""How far the handle would run on, position by position, beside the gap that is left: where one exceeds the other."""

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.sheet import Drawing, Sheet, figure, quantity
from ergo.pictures.stroke_view import nice_step
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
LEFT, RIGHT, TOP, BOTTOM = 52.0, 108.0, 26.0, 46.0
ROWS = ("P5", "P50", "P95")


def overrun_drawing(results: Results, ink: Ink, *, width: float, height: float = 260.0) -> Drawing:
    """Return overrun (band P5 to P95, middle line) and smallest gap over the stroke."""
    s = results.stroke
    sheet = Sheet(width, height, ink, name="overrun")
    known = [v[np.isfinite(v)] for v in (s.overrun_mm.ravel(), np.minimum(s.gap_mm, 3.0 * np.nanmax(s.overrun_mm)))]
    top = 5.0 * nice_step(max(float(np.concatenate(known).max()), 10.0) * 1.05)
    box = (LEFT, TOP, width - RIGHT, height - BOTTOM)
    _axes(sheet, box, top)
    low, middle, high = (_at(box, top, s.stroke, s.overrun_mm[:, n]) for n in range(3))
    both = np.isfinite(low).all(axis=1) & np.isfinite(high).all(axis=1)
    sheet.line(np.concatenate([low[both], high[both][::-1]]), stroke=ink.grey, weight=0.5, fill=ink.band[1], closed=True)
    sheet.line(middle, weight=theme.MACHINE)
    gap = _at(box, top, s.stroke, s.gap_mm)
    sheet.line(gap[gap[:, 1] >= box[1]], weight=theme.PATH, dash=theme.HIDDEN_DASH)
    _names(sheet, box, {"handle runs on": middle, "smallest gap": gap[gap[:, 1] >= box[1]]})
    where = results.study.get("load", {}).get("lets_go_at")
    if where is not None:
        x = box[0] + (box[2] - box[0]) * float(where)
        sheet.line([[x, box[1] - 8.0], [x, box[3]]], dash=theme.DOTTED, weight=theme.PATH)
        sheet.words([x, box[1] - 12.0], "the load lets go", size=theme.SMALL, anchor="middle")
    return sheet.drawing("How far the handle runs on, and the smallest gap", _alt(results), ("stroke", *ROWS, "smallest gap"),
                         [_row(results, p) for p in range(s.stroke.size)])  # fmt: skip


def _at(box: tuple[float, ...], top: float, stroke: Array, mm: Array) -> Array:
    x = box[0] + (box[2] - box[0]) * np.asarray(stroke, dtype=float)
    return np.stack([x, box[3] - (box[3] - box[1]) * np.asarray(mm, dtype=float) / top], axis=-1)


def _axes(sheet: Sheet, box: tuple[float, ...], top: float) -> None:
    for share in np.linspace(0.0, 1.0, 6):
        y = box[3] - (box[3] - box[1]) * share
        sheet.line([[box[0], y], [box[2], y]], stroke=sheet.ink.pale, weight=0.4)
        sheet.words([box[0] - 6.0, y + 3.5], figure(top * share), anchor="end", size=theme.SMALL)
        x = box[0] + (box[2] - box[0]) * share
        sheet.words([x, box[3] + 14.0], figure(100.0 * share), anchor="middle", size=theme.SMALL)
    sheet.line([[box[0], box[1]], [box[0], box[3]], [box[2], box[3]]])
    sheet.words([box[0] - 34.0, 14.0], "mm", size=theme.SMALL)
    sheet.words([(box[0] + box[2]) / 2.0, box[3] + 30.0], "let go at, % of the stroke", anchor="middle", size=theme.SMALL)


def _names(sheet: Sheet, box: tuple[float, ...], curves: dict[str, Array]) -> None:
    """Name each curve at its right end, names kept apart."""
    ends = {name: curve[np.isfinite(curve).all(axis=1)] for name, curve in curves.items()}
    lowest = np.inf
    for name, curve in sorted(ends.items(), key=lambda pair: -float(pair[1][-1, 1]) if len(pair[1]) else 0.0):
        if len(curve):
            y = min(float(curve[-1, 1]) + 3.5, lowest - 12.0)
            sheet.words([box[2] + 6.0, y], name, size=theme.SMALL, halo=True)
            lowest = y


def _row(results: Results, p: int) -> tuple[str, ...]:
    s = results.stroke
    cells = [quantity(float(v), "mm") for v in (*s.overrun_mm[p], s.gap_mm[p])]
    return f"{100 * s.stroke[p]:.0f} %", *cells


def _alt(results: Results) -> str:
    s = results.stroke
    p = int(np.nanargmax(s.overrun_mm[:, 2]))
    longest = quantity(float(s.overrun_mm[p, 2]), "mm")
    return f"The longest run is {longest} (P95), let go at {100 * s.stroke[p]:.0f} % of the stroke."
