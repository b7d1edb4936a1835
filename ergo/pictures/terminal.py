"""Results drawn with characters, 80 columns wide: rating bars, the stroke chart, who is left out."""

import textwrap

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import RATING_NAMES, Results

WIDTH = 80
BAR = 20
CHART_WIDTH, CHART_HEIGHT = 66, 12
LABELS = {"let_go": "let-go"}
# Later marks are drawn over earlier ones; the demand comes last because it decides.
MARKS = (("men_p95", "o", "men P95"), ("women_p50", "+", "women P50"), ("women_p05", "x", "women P5"))
Array = NDArray[np.float64]


def bar(value: float, low: float, high: float, target: float) -> str:
    """Return a rating as a bar of BAR cells: filled to the value, whisker to the interval, tick at the target."""
    cells = []
    for n in range(BAR):
        at = (n + 0.5) * 100.0 / BAR
        cells.append("█" if at <= value else ("─" if low <= at <= high else "·"))
    if np.isfinite(target):
        cells[min(int(target * BAR / 100.0), BAR - 1)] = "│"
    return "".join(cells)


def ordered(results: Results) -> list[str]:
    """Return the rating names, the ones that fall short first, by how far."""
    def shortfall(name: str) -> tuple[bool, float]:
        r = results.ratings[name]
        return (r.met, r.value - (r.target if np.isfinite(r.target) else 0.0))

    return sorted((n for n in RATING_NAMES if n in results.ratings), key=shortfall)


def rating_lines(results: Results) -> list[tuple[str, bool]]:
    """Return the ratings block as (line, met) pairs."""
    lines: list[tuple[str, bool]] = []
    for name in ordered(results):
        r = results.ratings[name]
        mark = " " if r.met else "■"
        interval = f"{r.low:.0f}-{r.high:.0f}" if np.isfinite(r.low) else "-"
        target = f"target {r.target:.0f}" if np.isfinite(r.target) else "no target"
        head = f"{mark} {LABELS.get(name, name):<10}{bar(r.value, r.low, r.high, r.target)} {r.value:5.1f}"
        lines.append((f"{head}  ({interval}; {target})", r.met))
        lines += [(f"    {t}", r.met) for t in textwrap.wrap(r.reason, WIDTH - 4)]
    return lines


def stroke_chart(results: Results) -> list[str]:
    """Return the stroke chart: needed force against allowed force of weak, middling and strong operators."""
    s = results.stroke
    at = np.linspace(0.0, 1.0, CHART_WIDTH)
    curves = {name: np.interp(at, s.stroke, s.allowed_n[name]) for name in ("men_p95", "women_p50", "women_p05", "men_p50")}
    need = np.interp(at, s.stroke, np.where(np.isfinite(s.demand_n), s.demand_n, np.nan))
    # One sex may not be drawn, and a wedged slide has no needed force at all: only numbers set the scale.
    middles = [float(np.median(curves[name])) for name in ("women_p50", "men_p50")]
    top = _round_up(float(np.nanmax([*(1.25 * need), *middles, 10.0])))
    rows = [[" "] * CHART_WIDTH for _ in range(CHART_HEIGHT)]
    for name, mark, _ in MARKS:
        _draw(rows, curves[name], top, mark)
    _draw(rows, need, top, "█")
    lines = [f"  hand force, N (over {top:.0f} is cut off)"]
    for n, row in enumerate(rows):
        value = top * (CHART_HEIGHT - n) / CHART_HEIGHT
        lines.append(f"{value:7.0f} ┤" + "".join(row) if n % 3 == 0 else "        │" + "".join(row))
    lines.append("        └" + "─" * CHART_WIDTH)
    lines.append("         0 %" + "stroke".center(CHART_WIDTH - 8) + "100 %")
    lines.append("         █ needed   x women P5   + women P50   o men P95")
    lines.append("         (the people's forces as repetition leaves them)")
    return lines


def direction_line(results: Results) -> str:
    """Return the stroke as a strip: `<` pulled toward the operator, `>` pushed away, `|` neither."""
    at = np.linspace(0.0, 1.0, CHART_WIDTH)
    pull = np.interp(at, results.stroke.stroke, results.stroke.pull)
    return "         " + "".join("<" if v > 0.35 else (">" if v < -0.35 else "|") for v in pull)


def left_out_lines(results: Results) -> list[str]:
    """Return who is lost to what, over the whole stroke, largest first."""
    crowd = results.crowd
    lost = ~crowd.served
    if not lost.any():
        return ["  nobody of the operators drawn is left out"]
    lines = []
    limits = sorted({limit for limit, out in zip(crowd.limit, lost, strict=True) if out})
    rows = []
    for limit in limits:
        mask = lost & np.array([name == limit for name in crowd.limit])
        women = float(np.mean(mask[crowd.women])) if crowd.women.any() else 0.0
        men = float(np.mean(mask[~crowd.women])) if (~crowd.women).any() else 0.0
        rows.append((float(np.mean(mask)), limit, women, men, float(np.median(crowd.worst_stroke[mask]))))
    for share, limit, women, men, where in sorted(rows, reverse=True):
        lines.append(
            f"  {100 * share:5.1f} %  {textwrap.shorten(limit, 33, placeholder='...'):<33}"
            f"  women {100 * women:3.0f} %  men {100 * men:3.0f} %  at {100 * where:3.0f} %"
        )
    return lines


def _draw(rows: list[list[str]], curve: Array, top: float, mark: str) -> None:
    for column, value in enumerate(curve):
        if np.isfinite(value) and 0.0 <= value <= top:
            level = min(int(value / top * CHART_HEIGHT), CHART_HEIGHT - 1)
            rows[CHART_HEIGHT - 1 - level][column] = mark


def _round_up(value: float) -> float:
    step = 10.0 ** np.floor(np.log10(value)) / 2.0
    return float(np.ceil(value / step) * step)


def wrapped(sentences: "tuple[str, ...] | list[str]") -> list[str]:
    """Return sentences as indented paragraphs."""
    return [line for s in sentences for line in textwrap.wrap(s, WIDTH - 2, initial_indent="  - ", subsequent_indent="    ")]


def let_go_lines(results: Results) -> list[str]:
    """Return what happens when the load lets go, at the position where it does."""
    return wrapped(results.details.get("let_go", {}).get("sentences", []))


def source_lines(results: Results) -> list[str]:
    """Return how many numbers of each status decided, then the recalled ones by table."""
    counts: dict[str, int] = {}
    for row in results.sources:
        counts[row["status"]] = counts.get(row["status"], 0) + 1
    lines = ["  " + ", ".join(f"{n} {status}" for status, n in sorted(counts.items()))]
    memory = sorted({row["table"] for row in results.sources if row["status"] == "memory"})
    if memory:
        lines += textwrap.wrap("recalled, not checked against the print, in: " + ", ".join(memory), WIDTH - 2,
                               initial_indent="  ", subsequent_indent="  ")  # fmt: skip
    lines.append("  every number with its source: pullward methods, or --json")
    return lines
