"""The stroke chart: needed force against what women and men are allowed, position by position."""

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.ribbon import direction_mark, let_go_stroke
from ergo.pictures.sheet import Drawing, Sheet, figure, quantity
from ergo.pictures.theme import Ink

Array = NDArray[np.float64]
LEFT, RIGHT, TOP, BOTTOM = 52.0, 118.0, 30.0, 62.0
TWIN = (
    ("women_p05", "allowed, women P5"),
    ("women_p50", "allowed, women P50"),
    ("men_p05", "allowed, men P5"),
    ("men_p50", "allowed, men P50"),
)
LIMITS = (("table_n", "handbook table", "3 3"), ("en_1005_3_n", "EN 1005-3", "9 3 2 3"))


def stroke_drawing(results: Results, ink: Ink = theme.LIGHT, *, width: float = 680.0, height: float = 330.0,
                   position: int | None = None) -> Drawing:  # fmt: skip
    """Return the stroke chart.

    Parameters
    ----------
    results : Results
    ink : Ink
        Paper and inks.
    width, height : float
        Size of the sheet.
    position : int or None
        Stroke position under the pointer, ruled in when given.

    Returns
    -------
    Drawing
    """
    sheet = Sheet(width, height, ink, name="stroke")
    top = force_top(results)
    box = (LEFT, TOP, width - RIGHT, height - BOTTOM)
    _axes(sheet, box, top)
    labels = []
    for sex in ("men", "women"):
        _tint(sheet, box, top, results, sex)
    for sex in ("men", "women"):
        labels += _band(sheet, box, top, results, sex)
    labels += _limits(sheet, box, top, results)
    labels += _demand(sheet, box, top, results)
    _let_go(sheet, box, top, results)
    _strip(sheet, box, results)
    _edge_labels(sheet, box, labels)
    if position is not None:
        x = box[0] + (box[2] - box[0]) * float(results.stroke.stroke[position])
        sheet.line([[x, box[1]], [x, box[3] + 22.0]], weight=theme.PATH)
    return sheet.drawing("Needed and allowed hand force over the stroke", _alt(results), columns(), rows(results))


def force_top(results: Results) -> float:
    """Return the top of the force axis [N]: what is needed and what the middle of the women may give are in sight."""
    s = results.stroke
    need = float(np.nanmax(np.maximum(np.where(np.isfinite(s.demand_n), s.demand_n, 0.0), 0.0)))
    usual = float(np.nanmax(s.allowed_n["women_p95"])) if "women_p95" in s.allowed_n else 0.0
    return nice_step(max(1.3 * need, min(usual, 3.0 * need + 20.0), 20.0)) * 5.0


def nice_step(top: float, count: int = 5) -> float:
    """Return a round step that reaches `top` in `count` steps."""
    raw = top / count
    power = 10.0 ** np.floor(np.log10(raw))
    return float(next(m * power for m in (1.0, 2.0, 2.5, 5.0, 10.0) if m * power >= raw - 1e-9))


def _place(box: tuple[float, ...], top: float, stroke: Array, force: Array) -> Array:
    x = box[0] + (box[2] - box[0]) * np.asarray(stroke, dtype=float)
    y = box[3] - (box[3] - box[1]) * np.clip(np.asarray(force, dtype=float) / top, 0.0, 1.0)
    return np.stack([x, y], axis=-1)


def _axes(sheet: Sheet, box: tuple[float, ...], top: float) -> None:
    sheet.open("axes")
    step = nice_step(top)
    for n in range(round(top / step) + 1):
        y = box[3] - (box[3] - box[1]) * n * step / top
        sheet.line([[box[0] - 4.0, y], [box[0], y]])
        if n:
            sheet.line([[box[0], y], [box[2], y]], stroke=sheet.ink.pale, weight=0.4)
        sheet.words([box[0] - 7.0, y + 3.5], figure(n * step), anchor="end", size=theme.SMALL)
    for tenth in range(11):
        x = box[0] + (box[2] - box[0]) * tenth / 10.0
        sheet.line([[x, box[3]], [x, box[3] + (5.0 if tenth % 5 == 0 else 3.0)]])
        if tenth % 2 == 0:
            sheet.words([x, box[3] + 38.0], f"{10 * tenth}", anchor="middle", size=theme.SMALL)
    sheet.line([[box[0], box[1]], [box[0], box[3]], [box[2], box[3]]], weight=theme.THIN)
    sheet.words([box[0] - 40.0, box[1] - 14.0], "hand force, N", size=theme.SMALL)
    sheet.words([(box[0] + box[2]) / 2.0, box[3] + 53.0], "stroke, %", anchor="middle", size=theme.SMALL)
    sheet.close()


def _curves(box: tuple[float, ...], top: float, results: Results, sex: str) -> tuple[Array, Array, Array] | None:
    """P5, P50 and P95 of what one sex is allowed, on the sheet."""
    allowed = results.stroke.allowed_n
    if f"{sex}_p05" not in allowed:
        return None
    high = allowed.get(f"{sex}_p95", allowed[f"{sex}_p50"])
    low, middle, high = (
        _place(box, top, results.stroke.stroke, v) for v in (allowed[f"{sex}_p05"], allowed[f"{sex}_p50"], high)
    )
    return low, middle, high


def _tint(sheet: Sheet, box: tuple[float, ...], top: float, results: Results, sex: str) -> None:
    curves = _curves(box, top, results, sex)
    if curves is not None:
        sheet.line(np.concatenate([curves[0], curves[2][::-1]]), stroke="none", closed=True, opacity=0.7,
                   fill=sheet.ink.band[1 if sex == "women" else 0])  # fmt: skip


def _band(sheet: Sheet, box: tuple[float, ...], top: float, results: Results, sex: str) -> list[tuple]:
    """The lines of a band: P5 heavy, P50 and P95 light; women dashed, men solid."""
    curves = _curves(box, top, results, sex)
    if curves is None:
        return []
    found = []
    sheet.open("band", name=sex)
    has_high = f"{sex}_p95" in results.stroke.allowed_n
    for curve, weight, name in zip(curves, (theme.MACHINE, theme.THIN, theme.THIN), ("P5", "P50", "P95"), strict=True):
        if name == "P95" and not has_high:
            continue
        _inside(sheet, box, curve, weight, theme.WOMEN_DASH if sex == "women" else "")
        if curve[-1, 1] > box[1] + 1.0:
            found.append((curve[-1], f"{sex} {name}"))
    sheet.close()
    return found


def _inside(sheet: Sheet, box: tuple[float, ...], curve: Array, weight: float, dash: str) -> None:
    """Draw a curve where it is below the top of the chart."""
    seen = curve[:, 1] > box[1] + 0.5
    for part in np.split(np.arange(len(curve)), np.flatnonzero(np.diff(seen.astype(int))) + 1):
        if seen[part[0]]:
            sheet.line(curve[part], stroke=sheet.ink.grey, weight=weight, dash=dash)


def _limits(sheet: Sheet, box: tuple[float, ...], top: float, results: Results) -> list[tuple]:
    """Second opinions as thin named lines that end where their method does."""
    found = []
    for name, text, dash in LIMITS:
        values = np.asarray(getattr(results.stroke, name), dtype=float)
        known = np.isfinite(values)
        if not known.any():
            continue
        sheet.open("limit", name=name)
        for part in np.split(np.arange(len(values)), np.flatnonzero(np.diff(known.astype(int))) + 1):
            if known[part[0]]:
                curve = _place(box, top, results.stroke.stroke[part], values[part])
                sheet.line(curve, stroke=sheet.ink.ink, weight=theme.THIN, dash=dash)
                if part[-1] < len(values) - 1:
                    sheet.circle(curve[-1], 2.0, fill=sheet.ink.paper)
        sheet.close()
        last = int(np.flatnonzero(known)[-1])
        at = _place(box, top, results.stroke.stroke[last : last + 1], values[last : last + 1])[0]
        if last == len(values) - 1:
            found.append((at, text))
        else:
            sheet.words(at + [5.0, -5.0], text, size=theme.SMALL, halo=True)
    return found


def _demand(sheet: Sheet, box: tuple[float, ...], top: float, results: Results) -> list[tuple]:
    s = results.stroke
    curve = _place(box, top, s.stroke, s.demand_n)
    known = np.isfinite(s.demand_n)
    sheet.open("demand")
    sheet.line(curve[known], weight=3.0)
    sheet.close()
    return [(curve[known][-1], "needed")]


def _let_go(sheet: Sheet, box: tuple[float, ...], top: float, results: Results) -> None:
    at = let_go_stroke(results)
    if at is None:
        return
    x = box[0] + (box[2] - box[0]) * at
    sheet.open("let-go")
    sheet.line([[x, box[1]], [x, box[3]]], stroke=sheet.ink.ink, dash="2 3")
    sheet.words([x, box[1] - 4.0], "the load lets go", anchor="middle", size=theme.SMALL, halo=True)
    sheet.close()


def _strip(sheet: Sheet, box: tuple[float, ...], results: Results) -> None:
    """The way of the hand below the chart, with the same marks as the ribbon."""
    s = results.stroke
    kinds = [theme.way(float(v)) for v in s.pull]
    y = box[3] + 17.0
    sheet.open("direction")
    edges = np.concatenate([[0.0], (s.stroke[1:] + s.stroke[:-1]) / 2.0, [1.0]])
    start = 0
    for p in range(1, len(kinds) + 1):
        if p == len(kinds) or kinds[p] != kinds[start]:
            x = box[0] + (box[2] - box[0]) * edges[[start, p]]
            line, tint = theme.hues(sheet.ink, kinds[start])
            corners = [[x[0], y - 7], [x[1], y - 7], [x[1], y + 7], [x[0], y + 7]]
            sheet.line(corners, stroke=line, fill=tint, closed=True, weight=0.5)
            start = p
    for twentieth in range(1, 20, 2):
        where = twentieth / 20.0
        kind = kinds[int(np.argmin(np.abs(s.stroke - where)))]
        at = np.array([box[0] + (box[2] - box[0]) * where, y])
        direction_mark(sheet, at, np.array([1.0, 0.0]), np.array([0.0, -1.0]), kind, size=4.5)
    names = [k for k in ("pull", "push", "neither") if k in kinds]
    sheet.words([box[2] + 7.0, y + 3.5], " / ".join(names), size=theme.SMALL)
    sheet.close()


def spread(places: list[float], low: float, high: float, gap: float = 12.0) -> list[float]:
    """Return sorted places moved apart to at least `gap`, kept between `low` and `high` as far as they fit."""
    found = list(places)
    for n in range(len(found)):
        found[n] = max(found[n], low if n == 0 else found[n - 1] + gap)
    if found and found[-1] > high:
        found[-1] = high
        for n in range(len(found) - 2, -1, -1):
            found[n] = min(found[n], found[n + 1] - gap)
    return found


def _edge_labels(sheet: Sheet, box: tuple[float, ...], labels: list[tuple]) -> None:
    """Write the names of curves at the right edge, pushed apart where they would overlap."""
    labels = sorted(labels, key=lambda pair: pair[0][1])
    places = spread([float(at[1]) for at, _ in labels], box[1], box[3] - 2.0)
    for (at, text), y in zip(labels, places, strict=True):
        sheet.line([[at[0] + 1.0, at[1]], [box[2] + 12.0, y]], stroke=sheet.ink.grey, weight=0.5)
        bold = 600 if text == "needed" else 400
        sheet.words([box[2] + 15.0, y + 3.5], text, size=theme.SMALL, weight=bold)


def _alt(results: Results) -> str:
    s = results.stroke
    worst = int(np.nanargmax(s.demand_n))
    weak = s.allowed_n["women_p05"][worst]
    return (
        f"The needed hand force is largest at {100 * s.stroke[worst]:.0f} % of the stroke, {s.demand_n[worst]:.0f} N; "
        f"there the weakest twentieth of the women are allowed {weak:.0f} N. The numbers are in the table."
    )


def columns() -> tuple[str, ...]:
    """Return the column names of the text twin."""
    return ("stroke", "needed", *(text for _, text in TWIN), "handbook table", "EN 1005-3", "served")


def rows(results: Results) -> list[tuple[str, ...]]:
    """Return the text twin: every tenth of the stroke."""
    s, found = results.stroke, []
    for tenth in range(11):
        p = int(np.argmin(np.abs(s.stroke - tenth / 10.0)))
        found.append((
            quantity(100 * s.stroke[p], "%"),
            quantity(s.demand_n[p], "N"),
            *(quantity(s.allowed_n[name][p], "N") if name in s.allowed_n else "not covered" for name, _ in TWIN),
            quantity(s.table_n[p], "N"),
            quantity(s.en_1005_3_n[p], "N"),
            quantity(100 * s.served_share[p], "%", 1),
        ))  # fmt: skip
    return found
