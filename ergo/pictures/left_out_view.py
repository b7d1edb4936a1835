"""Who is left out: a dot a person, stature across and strength up, and where along the stroke they are lost."""

from collections.abc import Mapping

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.sheet import Drawing, Sheet, figure, quantity
from ergo.pictures.stroke_view import nice_step, spread
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
Picks = NDArray[np.int64]
MOST_DOTS = 1500
MOST_NAMES = 7


def limits_met(results: Results) -> list[tuple[str, float]]:
    """Return the limits that lose anyone, with the share of all operators each loses, largest first."""
    crowd = results.crowd
    lost = ~np.asarray(crowd.served)
    names = np.array(crowd.limit)
    found = (
        [(str(name), float(np.mean(lost & (names == name)))) for name in np.unique(names[lost])] if lost.any() else []
    )
    return sorted(found, key=lambda pair: (-pair[1], pair[0]))


def limit_mark(sheet: Sheet, at: ArrayLike, shape: str, size: float = 4.0) -> None:
    """Draw the mark of a limit: shapes differ first, so that a copy without colour still tells them apart."""
    x, y = np.asarray(at, dtype=float)
    r = size
    outlines = {
        "triangle": [(0, -r), (r, 0.8 * r), (-r, 0.8 * r)],
        "square": [(-0.8 * r, -0.8 * r), (0.8 * r, -0.8 * r), (0.8 * r, 0.8 * r), (-0.8 * r, 0.8 * r)],
        "diamond": [(0, -r), (r, 0), (0, r), (-r, 0)],
        "bar": [(-r, -0.35 * r), (r, -0.35 * r), (r, 0.35 * r), (-r, 0.35 * r)],
        "wedge": [(-r, -0.8 * r), (r, -0.8 * r), (0, r)],
    }
    ink = sheet.ink.ink
    if shape in outlines:
        sheet.line(np.array(outlines[shape]) + [x, y], stroke=ink, weight=0.5, fill=ink, closed=True)
        return
    ways = {
        "cross": ((r, r), (r, -r)),
        "plus": ((r, 0), (0, r)),
        "star": ((r, 0), (0.5 * r, 0.9 * r), (0.5 * r, -0.9 * r)),
    }
    for dx, dy in ways[shape]:
        sheet.line([[x - dx, y - dy], [x + dx, y + dy]], stroke=ink, weight=theme.PATH)


def shapes_of(results: Results) -> dict[str, str]:
    """Return the mark of each limit that loses anyone; past the eighth they share the last one."""
    return {name: theme.SHAPES[min(n, len(theme.SHAPES) - 1)] for n, (name, _) in enumerate(limits_met(results))}


def people_drawing(results: Results, ink: Ink = theme.LIGHT, *, width: float = 680.0, height: float = 330.0) -> Drawing:
    """Return the dots: women and men apart, stature across, strength up, served hollow, lost ones by limit."""
    sheet = Sheet(width, height, ink, name="left_out")
    crowd = results.crowd
    strength, stature = np.asarray(crowd.strength_share, dtype=float), np.asarray(crowd.stature_mm, dtype=float)
    x_step = 100.0
    low, high = np.floor(stature.min() / x_step) * x_step, np.ceil(stature.max() / x_step) * x_step
    y_step = nice_step(max(float(strength.max()), 0.1))
    top = np.ceil(float(strength.max()) / y_step) * y_step
    legend = 196.0
    boxes = _boxes(width, height, legend)
    shapes = shapes_of(results)
    for box, women, name in ((boxes[0], True, "women"), (boxes[1], False, "men")):
        _frame(sheet, box, (low, high, x_step), (0.0, top, y_step), name)
        rows = np.flatnonzero(np.asarray(crowd.women) == women)
        for row in _thinned(rows, np.asarray(crowd.served)):
            at = (box[0] + (box[2] - box[0]) * (stature[row] - low) / (high - low),
                  box[3] - (box[3] - box[1]) * strength[row] / top)  # fmt: skip
            if crowd.served[row]:
                sheet.circle(at, 2.2, stroke=sheet.ink.pale, weight=0.6)
            else:
                limit_mark(sheet, at, shapes[crowd.limit[row]], 3.4)
    _legend(sheet, results, shapes, width - legend + 16.0)
    title = "Who is left out, by stature and strength"
    return sheet.drawing(
        title, _alt(results), ("limit", "all operators", "women", "men", "lost first at"), rows_of(results)
    )


def _boxes(width: float, height: float, legend: float) -> list[tuple[float, ...]]:
    room = (width - 46.0 - legend - 24.0) / 2.0
    return [(46.0 + n * (room + 24.0), 30.0, 46.0 + n * (room + 24.0) + room, height - 42.0) for n in range(2)]


def _thinned(rows: Picks, served: Flags) -> Picks:
    """Every lost person, and of the served at most MOST_DOTS in even steps: nobody lost is ever dropped."""
    lost, kept = rows[~served[rows]], rows[served[rows]]
    if len(kept) > MOST_DOTS:
        kept = kept[np.linspace(0, len(kept) - 1, MOST_DOTS).astype(int)]
    return np.concatenate([kept, lost])


def _frame(sheet: Sheet, box: tuple[float, ...], across: tuple, up: tuple, name: str) -> None:
    sheet.open("axes")
    sheet.line([[box[0], box[1]], [box[0], box[3]], [box[2], box[3]]])
    for value in np.arange(across[0], across[1] + 1.0, across[2]):
        x = box[0] + (box[2] - box[0]) * (value - across[0]) / (across[1] - across[0])
        sheet.line([[x, box[3]], [x, box[3] + 4.0]])
        # Beside each other the left frame's last figure would meet the right one's first.
        if (value / across[2]) % 2 == 0 and (name != "women" or value < across[1]):
            sheet.words([x, box[3] + 15.0], figure(value), anchor="middle", size=theme.SMALL)
    for value in np.arange(up[0], up[1] + 1e-9, up[2]):
        y = box[3] - (box[3] - box[1]) * (value - up[0]) / (up[1] - up[0])
        sheet.line([[box[0] - 4.0, y], [box[0], y]])
        if name == "women":
            sheet.words([box[0] - 7.0, y + 3.5], figure(100 * value), anchor="end", size=theme.SMALL)
    sheet.words([(box[0] + box[2]) / 2.0, box[3] + 31.0], "stature, mm", anchor="middle", size=theme.SMALL)
    sheet.words([box[2], box[1] - 8.0], name, anchor="end", weight=600)
    if name == "women":
        sheet.words([box[0] - 30.0, box[1] - 20.0], "strength, % of the middle operator", size=theme.SMALL)
    sheet.close()


def _legend(sheet: Sheet, results: Results, shapes: dict[str, str], x: float) -> None:
    """Name every mark beside the dots with the share it loses."""
    sheet.circle((x, 46.0), 2.4, stroke=sheet.ink.grey, weight=0.8)
    served = float(np.mean(results.crowd.served))
    sheet.words([x + 10.0, 49.5], f"served, {quantity(100 * served, '%', 1)}", size=theme.SMALL)
    for n, (name, share) in enumerate(limits_met(results)[:14]):
        y = 66.0 + 18.0 * n
        limit_mark(sheet, (x, y), shapes[name])
        sheet.words([x + 10.0, y + 3.5], f"{name}, {quantity(100 * share, '%', 1)}", size=theme.SMALL, longest=34)


def rows_of(results: Results) -> list[tuple[str, ...]]:
    """Return the text twin: each limit with the share it loses and the position where it loses most."""
    crowd = results.crowd
    women, names = np.asarray(crowd.women), np.array(crowd.limit)
    lost, found = ~np.asarray(crowd.served), []
    for name, share in limits_met(results):
        mask = lost & (names == name)
        by_sex = [
            quantity(100 * float(np.mean(mask[group])), "%", 1) if group.any() else "none drawn"
            for group in (women, ~women)
        ]
        where = quantity(100 * float(np.median(np.asarray(crowd.worst_stroke)[mask])), "%")
        found.append((name, quantity(100 * share, "%", 1), *by_sex, where))
    return found


def _alt(results: Results) -> str:
    met = limits_met(results)
    if not met:
        return "Nobody of the operators drawn is left out."
    return "Left out by " + ", ".join(f"{name} {100 * share:.1f} %" for name, share in met) + " of all operators."


def strip_drawing(results: Results, ink: Ink = theme.LIGHT, *, width: float = 680.0, height: float = 190.0) -> Drawing:
    """Return the stroke as a strip: its height is the share lost at that position, stacked by limit."""
    sheet = Sheet(width, height, ink, name="left_out_strip")
    stroke = np.asarray(results.stroke.stroke, dtype=float)
    names, heights = lost_by_limit(results)
    top = max(nice_step(max(float(heights.sum(axis=0).max()) if names else 0.0, 0.02), 2) * 2, 0.02)
    box = (52.0, 20.0, width - 190.0, height - 34.0)
    _strip_axes(sheet, box, top)
    base = np.zeros(stroke.size)
    labels = []
    for n, name in enumerate(names):
        upper = base + heights[n]
        outline = np.concatenate([_at(box, top, stroke, base), _at(box, top, stroke, upper)[::-1]])
        sheet.line(outline, stroke=sheet.ink.ink, weight=0.6, fill=sheet.ink.band[2 - n % 3], closed=True)
        peak = int(np.argmax(heights[n]))
        labels.append((float(_at(box, top, stroke, (base + upper) / 2.0)[peak, 1]), float(stroke[peak]), name))
        base = upper
    _strip_names(sheet, box, labels)
    step = max(1, (stroke.size - 1) // 10)
    rows = [_strip_row(float(s), row) for s, row in list(zip(stroke, results.stroke.lost, strict=True))[::step]]
    return sheet.drawing(
        "Share lost along the stroke, by limit", _alt(results), ("stroke", "lost", "to which limit"), rows
    )


def lost_by_limit(results: Results) -> tuple[list[str], Array]:
    """Return limits, the largest first, and the share (limits, P) that each loses; the smallest go together."""
    lost = results.stroke.lost
    most = {n: max(row.get(n, 0.0) for row in lost) for n in {n for row in lost for n in row}}
    names = sorted((n for n, v in most.items() if v > 0.0), key=lambda n: (-most[n], n))
    heights = [np.array([row.get(n, 0.0) for row in lost]) for n in names]
    if len(names) > MOST_NAMES:
        heights = [*heights[: MOST_NAMES - 1], np.sum(heights[MOST_NAMES - 1 :], axis=0)]
        names = [*names[: MOST_NAMES - 1], "other limits"]
    return names, np.array(heights).reshape(len(names), len(lost))


def _strip_row(stroke: float, row: Mapping[str, float]) -> tuple[str, str, str]:
    parts = [f"{k} {100 * v:.1f}\u202f%" for k, v in sorted(row.items(), key=lambda kv: (-kv[1], kv[0])) if v > 0.0]
    return quantity(100 * stroke, "%"), quantity(100 * float(sum(row.values())), "%", 1), ", ".join(parts) or "nobody"


def _at(box: tuple[float, ...], top: float, stroke: Array, share: Array) -> Array:
    return np.stack([box[0] + (box[2] - box[0]) * stroke, box[3] - (box[3] - box[1]) * share / top], axis=1)


def _strip_axes(sheet: Sheet, box: tuple[float, ...], top: float) -> None:
    sheet.line([[box[0], box[1]], [box[0], box[3]], [box[2], box[3]]])
    for share in (0.0, top / 2.0, top):
        y = box[3] - (box[3] - box[1]) * share / top
        sheet.line([[box[0] - 4.0, y], [box[0], y]])
        sheet.words(
            [box[0] - 7.0, y + 3.5], figure(100 * share, 0 if top >= 0.1 else 1), anchor="end", size=theme.SMALL
        )
    for fifth in range(6):
        x = box[0] + (box[2] - box[0]) * fifth / 5.0
        sheet.line([[x, box[3]], [x, box[3] + 4.0]])
        sheet.words([x, box[3] + 15.0], f"{20 * fifth}", anchor="middle", size=theme.SMALL)
    sheet.words([box[0] - 40.0, box[1] - 8.0], "lost, %", size=theme.SMALL)
    sheet.words([(box[0] + box[2]) / 2.0, box[3] + 28.0], "stroke, %", anchor="middle", size=theme.SMALL)


def _strip_names(sheet: Sheet, box: tuple[float, ...], labels: list[tuple[float, float, str]]) -> None:
    labels = sorted(labels)
    for (y, stroke, name), place in zip(labels, spread([y for y, _, _ in labels], box[1], box[3] - 2.0), strict=True):
        x = box[0] + (box[2] - box[0]) * stroke
        sheet.line([[x, y], [box[2] + 8.0, place]], stroke=sheet.ink.grey, weight=0.5)
        sheet.words([box[2] + 11.0, place + 3.5], name, size=theme.SMALL, longest=36)
