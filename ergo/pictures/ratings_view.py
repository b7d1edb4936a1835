"""The seven ratings as bars with target, interval and one sentence; the row that decides comes first."""

import textwrap

import numpy as np

from ergo.evaluation.results import RATING_NAMES, Results
from ergo.pictures import theme
from ergo.pictures.sheet import Drawing, Sheet, figure
from ergo.pictures.theme import Ink

LABELS = {"let_go": "let-go"}
LINE = 13.0
CHARACTERS_A_UNIT = 0.205


def label(name: str) -> str:
    """Return a rating's name as print has it."""
    return LABELS.get(name, name)


def ordered(results: Results) -> list[str]:
    """Return the rating names, the ones that fall short first, furthest below their target first."""

    def shortfall(name: str) -> tuple[bool, float]:
        r = results.ratings[name]
        return r.met, r.value - (r.target if np.isfinite(r.target) else 0.0)

    return sorted((n for n in RATING_NAMES if n in results.ratings), key=shortfall)


def ratings_drawing(results: Results, ink: Ink = theme.LIGHT, *, width: float = 680.0) -> Drawing:
    """Return the ratings strip: name, bar 0 to 100, number, target tick, interval whisker, sentence."""
    bar = (112.0, 352.0)
    words_at = 404.0
    wide = int((width - words_at) * CHARACTERS_A_UNIT)
    blocks = [(name, textwrap.wrap(results.ratings[name].reason, wide) or [""]) for name in ordered(results)]
    height = sum(_height(lines) for _, lines in blocks) + 26.0
    sheet = Sheet(width, height, ink, name="ratings")
    for value in (0, 25, 50, 75, 100):
        x = bar[0] + (bar[1] - bar[0]) * value / 100.0
        sheet.line([[x, 18.0], [x, height - 8.0]], stroke=ink.pale, weight=0.4)
        sheet.words([x, 13.0], str(value), anchor="middle", size=theme.SMALL, fill=ink.grey)
    y = 22.0
    for name, lines in blocks:
        _row(sheet, results, name, lines, y, bar, words_at)
        y += _height(lines)
    return sheet.drawing(
        "Ratings", _alt(results), ("rating", "value", "interval", "target", "met", "reason"), rows(results)
    )


def _height(lines: list[str]) -> float:
    return max(26.0, LINE * len(lines) + 10.0)


def _row(sheet: Sheet, results: Results, name: str, lines: list[str], y: float, bar: tuple[float, float],
         words_at: float) -> None:  # fmt: skip
    """One rating: a row that meets its target is quiet, one that falls short is bold with a solid square."""
    r = results.ratings[name]
    bold = 400 if r.met else 600
    ink = sheet.ink
    middle = y + 11.0
    scale = (bar[1] - bar[0]) / 100.0
    sheet.open("rating", name=name)
    if not r.met:
        sheet.line([[12, middle - 4], [20, middle - 4], [20, middle + 4], [12, middle + 4]], fill=ink.ink, closed=True)
    sheet.words([28.0, middle + 4.0], label(name), weight=bold, size=12.0)
    if np.isfinite(r.value):
        end = bar[0] + scale * float(np.clip(r.value, 0.0, 100.0))
        fill = ink.ink if not r.met else ink.band[2]
        sheet.line([[bar[0], middle - 5], [end, middle - 5], [end, middle + 5], [bar[0], middle + 5]], stroke=ink.grey,
                   weight=0.5, fill=fill, closed=True)  # fmt: skip
    if np.isfinite(r.low) and np.isfinite(r.high):
        ends = [bar[0] + scale * float(np.clip(v, 0.0, 100.0)) for v in (r.low, r.high)]
        sheet.line([[ends[0], middle + 9.0], [ends[1], middle + 9.0]], stroke=ink.ink, weight=1.0)
        for x in ends:
            sheet.line([[x, middle + 6.5], [x, middle + 11.5]], stroke=ink.ink, weight=1.0)
    if np.isfinite(r.target):
        x = bar[0] + scale * r.target
        sheet.line([[x, middle - 9.0], [x, middle + 7.0]], stroke=ink.ink, weight=theme.MACHINE)
    sheet.words([words_at - 14.0, middle + 4.0], figure(r.value, 1) if np.isfinite(r.value) else "-", anchor="end",
                weight=bold, size=12.0)  # fmt: skip
    for n, text in enumerate(lines):
        sheet.words([words_at, middle + 3.5 + LINE * n], text, size=theme.SMALL, weight=bold)
    sheet.close()


def _alt(results: Results) -> str:
    short = [label(n) for n in ordered(results) if not results.ratings[n].met]
    return f"Below target: {', '.join(short)}." if short else "Every rated target is met."


def interval(low: float, high: float) -> str:
    """Return an interval in words."""
    return f"{figure(low, 1)} to {figure(high, 1)}" if np.isfinite(low) and np.isfinite(high) else "no interval"


def rows(results: Results) -> list[tuple[str, ...]]:
    """Return the text twin of the ratings."""
    found = []
    for name in ordered(results):
        r = results.ratings[name]
        target = figure(r.target, 1) if np.isfinite(r.target) else "no target"
        value = figure(r.value, 1) if np.isfinite(r.value) else "not rated"
        found.append((label(name), value, interval(r.low, r.high), target, "yes" if r.met else "no", r.reason))
    return found
