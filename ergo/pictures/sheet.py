"""A sheet of paper to draw on: SVG text with fixed decimals, the same bytes for the same drawing."""

import unicodedata
from collections.abc import Iterable, Sequence
from dataclasses import dataclass
from xml.sax.saxutils import escape, quoteattr

import numpy as np
from numpy.typing import ArrayLike

from ergo.pictures import theme
from ergo.pictures.theme import Ink

# What XML 1.0 cannot hold, and marks that turn the reading direction of the text after them.
_FORBIDDEN = {"Cc", "Cs", "Co", "Cn"}
_TURNS = set("\u202a\u202b\u202c\u202d\u202e\u2066\u2067\u2068\u2069\u200e\u200f\ufeff")


@dataclass(frozen=True)
class Drawing:
    """A drawing and its text twin: the same content as rows of a table."""

    name: str
    title: str
    alt: str
    svg: str
    width: float
    height: float
    columns: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]


def plain(text: object, longest: int = 0) -> str:
    """Return text with control characters and direction marks taken out, cut to `longest` with an ellipsis."""
    kept = "".join(
        " " if c in "\t\r\n\u2028\u2029" else c
        for c in str(text)
        if c in "\t\r\n" or (c not in _TURNS and unicodedata.category(c) not in _FORBIDDEN)
    )
    kept = " ".join(kept.split(" "))
    return kept if not longest or len(kept) <= longest else kept[: longest - 1].rstrip() + "…"


def figure(value: float, decimals: int = 0) -> str:
    """Return a number as print has it: fixed decimals, a true minus sign, words where there is none."""
    if value is None or not np.isfinite(value):
        return "not covered"
    text = f"{value:.{decimals}f}"
    if float(text) == 0.0:
        text = text.lstrip("-")
    return text.replace("-", "−")


def quantity(value: float, unit: str, decimals: int = 0) -> str:
    """Return a number with its unit, a thin space between."""
    text = figure(value, decimals)
    return text if text == "not covered" else f"{text}\u202f{unit}"


def coordinate(value: float) -> str:
    """Return a coordinate with fixed decimals."""
    text = f"{float(value):.{theme.DECIMALS}f}"
    return "0.00" if text == "-0.00" else text


def points(xy: ArrayLike) -> str:
    """Return points (k, 2) as SVG has them."""
    return " ".join(f"{coordinate(x)},{coordinate(y)}" for x, y in np.asarray(xy, dtype=float).reshape(-1, 2))


class Sheet:
    """Collects lines, outlines and words; `drawing` closes it."""

    def __init__(self, width: float, height: float, ink: Ink, *, name: str = "drawing") -> None:
        self.width, self.height, self.ink, self.name = float(width), float(height), ink, name
        self._body: list[str] = []

    def open(self, kind: str, **data: str) -> None:
        """Open a group, named so that a screen can find it."""
        extra = "".join(f" data-{key.replace('_', '-')}={quoteattr(plain(v))}" for key, v in data.items())
        self._body.append(f'<g class="{kind}"{extra}>')

    def close(self) -> None:
        """Close the group."""
        self._body.append("</g>")

    def line(self, xy: ArrayLike, *, stroke: str = "", weight: float = theme.THIN, dash: str = "", fill: str = "none",
             closed: bool = False, opacity: float = 1.0) -> None:  # fmt: skip
        """Draw a line through points (k, 2), or an outline when `closed`."""
        xy = np.asarray(xy, dtype=float).reshape(-1, 2)
        xy = xy[np.isfinite(xy).all(axis=1)]
        if len(xy) < 2:
            return
        shape = "polygon" if closed else "polyline"
        look = self._look(stroke or self.ink.ink, weight, dash, fill, opacity)
        self._body.append(f'<{shape} points="{points(xy)}"{look}/>')

    def circle(self, centre: ArrayLike, radius: float, *, stroke: str = "", weight: float = theme.THIN, fill: str = "none",
               dash: str = "") -> None:  # fmt: skip
        """Draw a circle."""
        x, y = np.asarray(centre, dtype=float)
        look = self._look(stroke or self.ink.ink, weight, dash, fill, 1.0)
        self._body.append(f'<circle cx="{coordinate(x)}" cy="{coordinate(y)}" r="{coordinate(radius)}"{look}/>')

    def words(self, at: ArrayLike, text: object, *, size: float = theme.TEXT, anchor: str = "start", fill: str = "",
              weight: int = 400, turn: float = 0.0, halo: bool = False, longest: int = 0) -> None:  # fmt: skip
        """Write words at a point; `halo` lays paper behind them so that lines do not cross them."""
        x, y = np.asarray(at, dtype=float)
        place = f'x="{coordinate(x)}" y="{coordinate(y)}"'
        turned = f' transform="rotate({coordinate(turn)} {coordinate(x)} {coordinate(y)})"' if turn else ""
        bold = f' font-weight="{weight}"' if weight != 400 else ""
        head = f'<text {place} font-size="{size:g}" text-anchor="{anchor}"{bold}{turned}'
        body = escape(plain(text, longest))
        behind = ""
        if halo:
            behind = f' paint-order="stroke" stroke="{self.ink.paper}" stroke-width="3.5" stroke-linejoin="round"'
        self._body.append(f'{head}{behind} fill="{fill or self.ink.ink}">{body}</text>')

    def hatch(self, outline: ArrayLike, *, crossed: bool = False, step: float = 6.0, stroke: str = "") -> None:
        """Hatch an outline (k, 2) at 45 degrees, both ways when `crossed`; lines are cut at its edge."""
        outline = np.asarray(outline, dtype=float)
        for slope in (1.0, -1.0) if crossed else (1.0,):
            for cut in _hatch_cuts(outline, slope, step):
                self.line(cut, stroke=stroke or self.ink.grey, weight=0.5)

    def _look(self, stroke: str, weight: float, dash: str, fill: str, opacity: float) -> str:
        look = f' fill="{fill}" stroke="{stroke}" stroke-width="{weight:g}"'
        if dash:
            look += f' stroke-dasharray="{dash}"'
        if dash == theme.DOTTED:
            look += ' stroke-linecap="round"'
        return look + (f' opacity="{opacity:g}"' if opacity < 1.0 else "")

    def drawing(self, title: str, alt: str, columns: Sequence[str], rows: Iterable[Sequence[object]]) -> Drawing:
        """Return the finished drawing with its text twin."""
        size = f"{coordinate(self.width)} {coordinate(self.height)}"
        head = (
            f'<svg xmlns="http://www.w3.org/2000/svg" viewBox="0 0 {size}" width="{coordinate(self.width)}" '
            f'height="{coordinate(self.height)}" role="img" aria-label={quoteattr(plain(title))} '
            f'font-family="{theme.FAMILY}" stroke-linejoin="round">'
        )
        words = f"<title>{escape(plain(title))}</title><desc>{escape(plain(alt))}</desc>"
        ground = f'<rect width="{coordinate(self.width)}" height="{coordinate(self.height)}" fill="{self.ink.paper}"/>'
        svg = "\n".join((head, words, ground, *self._body, "</svg>")) + "\n"
        table = tuple(tuple(plain(cell) for cell in row) for row in rows)
        return Drawing(self.name, plain(title), plain(alt), svg, self.width, self.height, tuple(columns), table)


def _hatch_cuts(outline: np.ndarray, slope: float, step: float) -> list[np.ndarray]:
    """Return the pieces of 45 degree lines inside a polygon (k, 2): even-odd crossings in pairs."""
    level = outline[:, 1] - slope * outline[:, 0]
    following = np.roll(outline, -1, axis=0)
    level_next = np.roll(level, -1)
    cuts = []
    first = np.ceil(level.min() / (step * np.sqrt(2.0)))
    last = np.floor(level.max() / (step * np.sqrt(2.0)))
    for number in np.arange(first, last + 1.0):
        c = number * step * np.sqrt(2.0)
        met = (level <= c) != (level_next <= c)
        t = (c - level[met]) / (level_next[met] - level[met])
        crossings = outline[met] + t[:, None] * (following[met] - outline[met])
        crossings = crossings[np.argsort(crossings[:, 0])]
        cuts += [crossings[k : k + 2] for k in range(0, len(crossings) - 1, 2)]
    return cuts
