"""Slide travel against lever angle as points: a smooth, monotone curve through them and its slope."""

from dataclasses import dataclass
from functools import cached_property
from typing import Any, ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide, angles_within

_ROUNDING_RAD = 1e-9  # what turning degrees into radians may add at the ends; no allowance


@dataclass(frozen=True)
class TravelCurve:
    """Points of slide travel against lever angle, read by a monotone cubic (PCHIP) through every point.

    Parameters
    ----------
    lever_rad : (K,) lever angles [rad], rising or falling throughout, K at least 2
    slide_m : (K,) slide coordinate [m]

    Valid range: between the first and the last angle; nothing is read outside. The curve adds no bump
    between two points, and its slope is continuous, so the force ratio has no steps.
    """

    lever_rad: tuple[float, ...]
    slide_m: tuple[float, ...]

    @cached_property
    def _curve(self) -> Any:
        from scipy.interpolate import PchipInterpolator  # kept out of a start that has no measured curve

        order = np.argsort(self.lever_rad)
        return PchipInterpolator(
            np.array(self.lever_rad)[order], np.array(self.slide_m)[order], extrapolate=False
        )

    def _inside(self, lever_rad: ArrayLike) -> Array:
        a = np.asarray(lever_rad, dtype=float)
        near = np.clip(a, min(self.lever_rad), max(self.lever_rad))
        if np.any(np.abs(near - a) > _ROUNDING_RAD):
            msg = "a lever angle lies outside the measured points, and nothing is read there"
            raise ValueError(msg)
        return near

    def value(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m]; ValueError outside the points."""
        return np.asarray(self._curve(self._inside(lever_rad)))

    def slope(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]; ValueError outside the points."""
        return np.asarray(self._curve(self._inside(lever_rad), 1))

    def turning_points_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the angles between start and end at which the slide turns back: PCHIP has them at points."""
        order = np.argsort(self.lever_rad)
        step = np.sign(np.diff(np.array(self.slide_m)[order]))
        inner = np.array(self.lever_rad)[order][1:-1]
        return angles_within(inner[step[1:] * step[:-1] < 0.0], start_rad, end_rad)

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what makes the points unusable for a stroke; empty when nothing does."""
        a, x = np.asarray(self.lever_rad, dtype=float), np.asarray(self.slide_m, dtype=float)
        if len(a) < 2 or a.shape != x.shape:
            return (
                Problem("linkage.file", "needs at least two rows of lever_deg, slide_mm", f"{len(a)} rows"),
            )
        if not (np.isfinite(a).all() and np.isfinite(x).all()):
            return (Problem("linkage.file", "has a value that is not a finite number"),)
        if abs(np.sign(np.diff(a)).sum()) != len(a) - 1:
            return (Problem("linkage.file", "lever_deg must rise, or fall, from row to row throughout"),)
        low, high = a.min() - _ROUNDING_RAD, a.max() + _ROUNDING_RAD
        inside = [low <= angle <= high for angle in (start_rad, end_rad)]
        if all(inside):
            return ()
        got, allowed = np.rad2deg([start_rad, end_rad]), np.rad2deg([a.min(), a.max()])
        return (
            Problem(
                "linkage.file",
                "does not cover the stroke, and nothing is read beyond its rows",
                f"a stroke from {got[0]:g} to {got[1]:g} deg",
                f"{allowed[0]:g} to {allowed[1]:g} deg",
            ),
        )


@dataclass(frozen=True)
class MeasuredRatio:
    """A linkage known only by its measured travel; what is inside it is not asked.

    Side force and pin forces are unknown, so they are reported as zero with a note, and friction inside the
    linkage is not added.
    """

    curve: TravelCurve
    kind: ClassVar[str] = "table"
    mobility: ClassVar[Mobility] = Mobility(bodies=3, lower_pairs=2, higher_pairs=1)
    notes: ClassVar[tuple[str, ...]] = (
        "measured ratio: the side force, the link's share of the pin force and the friction inside the "
        "linkage are not known and count as zero",
    )

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the measured slide coordinate (P,) [m]."""
        return self.curve.value(lever_rad)

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]."""
        return self.curve.slope(lever_rad)

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the lever angles in the stroke at which the slide turns back."""
        return self.curve.turning_points_rad(start_rad, end_rad)

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke."""
        return self.curve.problems(start_rad, end_rad)

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): the slope as a couple on the lever."""
        none = np.zeros_like(lever_rad)
        torque = -push * self.slide_per_rad_m(lever_rad)
        return Contact(push, none, torque, np.zeros((len(lever_rad), 2)), none, direction_known=False)
