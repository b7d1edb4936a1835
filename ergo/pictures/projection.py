"""Station coordinates onto paper: side elevation, front elevation and plan, each to a drawing scale."""

from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.frames import pivot_axis
from ergo.pictures import theme

Array = NDArray[np.float64]

# Reductions of ISO 5455 with the steps between them that workshops use.
SCALES = (1.0, 2.0, 2.5, 4.0, 5.0, 7.5, 10.0, 12.5, 15.0, 20.0, 25.0, 40.0, 50.0)


@dataclass(frozen=True)
class View:
    """One direction to look from: what points right and what points up on the paper."""

    name: str
    right: tuple[float, float, float]
    up: tuple[float, float, float]

    def flat(self, points_mm: ArrayLike) -> Array:
        """Return points (..., 3) as paper millimetres at full size (..., 2), up positive."""
        p = np.asarray(points_mm, dtype=float)
        return np.stack([p @ np.array(self.right), p @ np.array(self.up)], axis=-1)

    @property
    def toward_reader(self) -> Array:
        """The station direction that points out of the paper."""
        return np.cross(np.array(self.right), np.array(self.up))


SIDE = View("side elevation, seen from the operator's right", (0.0, 1.0, 0.0), (0.0, 0.0, 1.0))
PLAN = View("plan", (0.0, 1.0, 0.0), (-1.0, 0.0, 0.0))
FRONT = View("front elevation, seen from the operator", (1.0, 0.0, 0.0), (0.0, 0.0, 1.0))
PLAN_FRONT = View("plan, operator below", (1.0, 0.0, 0.0), (0.0, 1.0, 0.0))


def lever_views(axis: Any) -> tuple[View, View]:
    """Return the view in which the lever turns in true length, and the other one to draw with it."""
    square = np.abs(pivot_axis(axis))
    if int(np.argmax(square)) == 1:
        return FRONT, PLAN_FRONT
    return (PLAN, SIDE) if int(np.argmax(square)) == 2 else (SIDE, PLAN)


@dataclass(frozen=True)
class Frame:
    """A view laid on the sheet: `one_to` is the reduction, `origin` where (0, 0) of the view falls."""

    view: View
    one_to: float
    origin: tuple[float, float]

    @property
    def units_per_mm(self) -> float:
        """Sheet units for a millimetre of the machine."""
        return theme.UNITS_PER_PAPER_MM / self.one_to

    def at(self, points_mm: ArrayLike) -> Array:
        """Return station points (..., 3) [mm] on the sheet (..., 2)."""
        return self.flat_at(self.view.flat(points_mm))

    def flat_at(self, flat_mm: ArrayLike) -> Array:
        """Return points of the view (..., 2) [mm] on the sheet."""
        flat = np.asarray(flat_mm, dtype=float)
        return np.array(self.origin) + flat * self.units_per_mm * np.array([1.0, -1.0])

    def back(self, xy: ArrayLike) -> Array:
        """Return sheet points (..., 2) as points of the view [mm]."""
        return (np.asarray(xy, dtype=float) - np.array(self.origin)) / self.units_per_mm * np.array([1.0, -1.0])


@dataclass(frozen=True)
class Extent:
    """What a view has to hold [mm at full size]."""

    low: tuple[float, float]
    high: tuple[float, float]

    @classmethod
    def of(cls, view: View, *points_mm: ArrayLike) -> "Extent":
        """Return the extent of station points (..., 3); what is not a number does not count."""
        flat = np.concatenate([view.flat(p).reshape(-1, 2) for p in points_mm])
        flat = flat[np.isfinite(flat).all(axis=1)]
        low, high = flat.min(axis=0), flat.max(axis=0)
        return cls((float(low[0]), float(low[1])), (float(high[0]), float(high[1])))

    @property
    def size(self) -> tuple[float, float]:
        """Width and height."""
        return self.high[0] - self.low[0], self.high[1] - self.low[1]

    def grown(self, left: float, below: float, right: float, above: float) -> "Extent":
        """Return the extent with room on each side."""
        return Extent((self.low[0] - left, self.low[1] - below), (self.high[0] + right, self.high[1] + above))


def scale_for(size_mm: tuple[float, float], room: tuple[float, float]) -> float:
    """Return the largest drawing scale at which `size_mm` fits `room` (sheet units)."""
    need = max(size_mm[0] / room[0], size_mm[1] / room[1]) * theme.UNITS_PER_PAPER_MM
    return next((s for s in SCALES if s >= need), float(np.ceil(need / 10.0) * 10.0))


def laid(view: View, extent: Extent, one_to: float, left: float, top: float) -> Frame:
    """Return the frame whose extent begins at `left`, `top` of the sheet."""
    per_mm = theme.UNITS_PER_PAPER_MM / one_to
    return Frame(view, one_to, (left - extent.low[0] * per_mm, top + extent.high[1] * per_mm))


def scale_name(one_to: float) -> str:
    """Return the scale in words."""
    return f"scale 1 : {one_to:g} on A4"
