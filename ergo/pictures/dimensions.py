"""Dimension lines: what the study sets, drawn where a machinist looks for it."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.pictures import theme
from ergo.pictures.sheet import Sheet

Array = NDArray[np.float64]
ARROW = 6.5


def _arrow(sheet: Sheet, tip: Array, along: Array, ink: str) -> None:
    side = np.array([-along[1], along[0]])
    back = tip - ARROW * along
    sheet.line([tip, back + 1.9 * side, back - 1.9 * side], stroke=ink, weight=0.3, fill=ink, closed=True)


def length_dimension(sheet: Sheet, start: ArrayLike, end: ArrayLike, text: str, *, away: float, key: str = "") -> None:
    """Draw a length between two points of the sheet, its line `away` to the left of start-to-end."""
    a, b = np.asarray(start, dtype=float), np.asarray(end, dtype=float)
    length = float(np.linalg.norm(b - a))
    if length < 1e-6:
        return
    along = (b - a) / length
    side = np.array([along[1], -along[0]])
    p, q = a + away * side, b + away * side
    ink = sheet.ink.grey
    over = np.sign(away) * 4.0 * side
    sheet.open("dimension", key=key)
    for foot, head in ((a, p), (b, q)):
        sheet.line([foot + np.sign(away) * 3.0 * side, head + over], stroke=ink)
    _shaft(sheet, p, q, along, length, ink)
    _upright_words(sheet, (p + q) / 2.0, along, side * np.sign(away), text, length)
    sheet.close()


def _shaft(sheet: Sheet, p: Array, q: Array, along: Array, length: float, ink: str) -> None:
    """The dimension line with arrows inside, or from outside where there is no room."""
    if length > 3.2 * ARROW:
        sheet.line([p, q], stroke=ink)
        _arrow(sheet, p, -along, ink)
        _arrow(sheet, q, along, ink)
    else:
        sheet.line([p - 14.0 * along, q + 14.0 * along], stroke=ink)
        _arrow(sheet, p, along, ink)
        _arrow(sheet, q, -along, ink)


def _upright_words(sheet: Sheet, middle: Array, along: Array, side: Array, text: str, length: float) -> None:
    """Words along the line, readable from below or from the right."""
    turn = float(np.degrees(np.arctan2(along[1], along[0])))
    if turn >= 89.0 or turn < -91.0:
        turn += 180.0 if turn < -91.0 else -180.0
    wide = 5.6 * len(text)
    if length > wide + 4.0:
        angle = np.radians(turn)
        lift = 3.5 * np.array([np.sin(angle), -np.cos(angle)])
        sheet.words(middle + lift, text, size=theme.TEXT, anchor="middle", turn=turn, halo=True)
    else:
        anchor = "start" if side[0] > 0.3 else ("end" if side[0] < -0.3 else "middle")
        drop = 9.0 if side[1] > 0.3 else 3.5
        sheet.words(
            middle + 8.0 * side + [0.0, drop - 3.5 if anchor != "middle" else drop], text, anchor=anchor, halo=True
        )


def angle_dimension(sheet: Sheet, centre: ArrayLike, start_rad: float, end_rad: float, radius: float, text: str, *,
                    key: str = "") -> None:  # fmt: skip
    """Draw an angle about a point of the sheet; angles count from straight right, anti-clockwise as drawn."""
    c = np.asarray(centre, dtype=float)
    angles = np.linspace(start_rad, end_rad, 49)
    arc = c + radius * np.stack([np.cos(angles), -np.sin(angles)], axis=1)
    ink = sheet.ink.grey
    sheet.open("dimension", key=key)
    sheet.line(arc, stroke=ink)
    for tip, near in ((arc[-1], arc[-2]),) if abs(end_rad - start_rad) * radius > 2.0 * ARROW else ():
        _arrow(sheet, tip, (tip - near) / np.linalg.norm(tip - near), ink)
    if not text:
        sheet.close()
        return
    # A narrow angle has no room for words between its legs; they go beside its first leg.
    middle = (start_rad + end_rad) / 2.0
    if abs(end_rad - start_rad) < 0.35:
        middle = start_rad - np.sign(end_rad - start_rad) * 8.0 / radius
    place = c + (radius + 4.0) * np.array([np.cos(middle), -np.sin(middle)])
    anchor = "start" if np.cos(middle) > 0.25 else ("end" if np.cos(middle) < -0.25 else "middle")
    sheet.words(place + [0.0, 4.0 if abs(np.sin(middle)) < 0.7 else (0.0 if np.sin(middle) > 0 else 10.0)], text,
                anchor=anchor, halo=True)  # fmt: skip
    sheet.close()


def leader(sheet: Sheet, at: ArrayLike, to: ArrayLike, text: str, *, key: str = "", size: float = theme.TEXT) -> None:
    """Write words with a thin line to what they are about."""
    a, b = np.asarray(at, dtype=float), np.asarray(to, dtype=float)
    sheet.open("dimension" if key else "note", key=key)
    sheet.line([a, b], stroke=sheet.ink.grey)
    sheet.circle(a, 1.6, stroke=sheet.ink.grey, fill=sheet.ink.grey)
    right = b[0] >= a[0]
    sheet.words(b + [4.0 if right else -4.0, 3.5], text, anchor="start" if right else "end", halo=True, size=size)
    sheet.close()
