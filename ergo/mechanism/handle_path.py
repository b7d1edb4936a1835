"""The curve of the grip's centre over the stroke, from a lever or from measured points."""

import itertools
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem, StudyError
from ergo.frames import Y_AWAY, Z_UP, Array, unit
from ergo.mechanism.lever import Grip, GripKind, Lever

_FINE_STEPS = 64  # arc length of a measured path is summed over this many chords between two points


@dataclass(frozen=True)
class HandlePath:
    """The handle path: arrays over the stroke positions (P,), vectors (P, 3) in the station frame.

    `work_dir` is the unit direction in which the hand must move the handle; `lever_rad` is NaN on a
    measured path (`measured` is then True), which has no lever angle.
    """

    stroke: Array
    lever_rad: Array
    grip_m: Array
    work_dir: Array
    lever_dir: Array
    grip_axis: Array
    hand_travel_m: Array
    measured: bool = False


def handle_path(lever: Lever, grip: Grip, stroke: ArrayLike) -> HandlePath:
    """Return the handle path of a lever.

    Parameters
    ----------
    lever, grip : the lever and what the hand holds
    stroke : (P,) stroke positions, 0 at the start and 1 at the end; others are the path drawn on

    Returns
    -------
    HandlePath
        Grip centre = pivot + L u(a) + offset n; work_dir = sense of the stroke times n x u(a).

    Raises
    ------
    StudyError
        If the lever has no length or no stroke.
    """
    if found := lever.problems():
        raise StudyError(found)
    s = np.asarray(stroke, dtype=float)
    a = lever.angles_rad(s)
    n, u = lever.unit_axis, lever.direction(a)
    return HandlePath(
        stroke=s,
        lever_rad=a,
        grip_m=np.asarray(lever.pivot_m, dtype=float) + lever.length_m * u + grip.offset_m * n,
        work_dir=lever.way * np.cross(n, u),
        lever_dir=u,
        grip_axis=grip.axis_along(lever, a),
        hand_travel_m=lever.length_m * np.abs(a - lever.start_rad),
    )


@dataclass(frozen=True)
class MeasuredPath:
    """A handle path given as points and the hand force needed at each.

    Parameters
    ----------
    points_m : (K, 3) points of the grip centre in the order of the stroke [m], K at least 2
    force_n : (K,) hand force needed along the path [N]

    A cubic is laid through the points, its slope at each from the parabola through it and its two neighbours,
    so a bad point spoils its neighbourhood only; the force is read by straight lines over the arc length.
    """

    points_m: Array
    force_n: Array

    def problems(self) -> tuple[Problem, ...]:
        """Return what makes these points unusable as a path; empty when nothing does."""
        p, f = np.asarray(self.points_m, dtype=float), np.asarray(self.force_n, dtype=float)
        if p.ndim != 2 or p.shape[1] != 3 or len(p) < 2 or f.shape != (len(p),):
            return (
                Problem(
                    "path.file", "needs at least two rows of x_mm, y_mm, z_mm, force_n", f"{len(p)} rows"
                ),
            )
        if not (np.isfinite(p).all() and np.isfinite(f).all()):
            return (Problem("path.file", "has a value that is not a finite number"),)
        still = np.flatnonzero(np.linalg.norm(np.diff(p, axis=0), axis=1) < 1e-6)
        return tuple(Problem("path.file", f"points {k + 1} and {k + 2} are the same place") for k in still)

    def _fine(self) -> tuple[Array, Array, Array]:
        from scipy.interpolate import CubicHermiteSpline  # kept out of a start that has no measured path

        p = np.asarray(self.points_m, dtype=float)
        chord = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(p, axis=0), axis=1))])
        knots = [np.linspace(*pair, _FINE_STEPS, endpoint=False) for pair in itertools.pairwise(chord)]
        fine = np.append(np.concatenate(knots), chord[-1])
        slope = np.gradient(p, chord, axis=0, edge_order=2 if len(p) > 2 else 1)
        curve = CubicHermiteSpline(chord, p, slope, axis=0)
        place, tangent = curve(fine), curve(fine, nu=1)
        arc = np.concatenate([[0.0], np.cumsum(np.linalg.norm(np.diff(place, axis=0), axis=1))])
        return arc, place, tangent

    def force_along_n(self, stroke: ArrayLike) -> Array:
        """Return the hand force (P,) [N] at the stroke positions (P,), straight lines over the arc length."""
        arc, _, _ = self._fine()
        return np.interp(np.asarray(stroke, dtype=float) * arc[-1], arc[::_FINE_STEPS], self.force_n)

    def along(self, stroke: ArrayLike, kind: GripKind = "ball", tilt_rad: float = 0.0) -> HandlePath:
        """Return the handle path at the stroke positions (P,), equal steps of stroke being equal arc lengths.

        There is no lever, so its place as a reference for the grip is taken by "up made square to the path"
        (toward the operator, made square, where the path itself runs upright). A bar lies along that
        direction, turned by `tilt_rad` in the plane it spans with the path; a crossbar lies square to both,
        turned by `tilt_rad` toward that direction.

        Raises
        ------
        StudyError
            If the points make no path.
        """
        if found := self.problems():
            raise StudyError(found)
        s = np.asarray(stroke, dtype=float)
        arc, place, tangent = self._fine()
        travel = s * arc[-1]
        grip = np.stack([np.interp(travel, arc, place[:, k]) for k in range(3)], axis=1)
        work = unit(np.stack([np.interp(travel, arc, tangent[:, k]) for k in range(3)], axis=1))
        upright = np.abs(work @ Z_UP)[:, None] > 0.99
        reference = np.where(upright, -Y_AWAY, Z_UP)
        lever_dir = unit(reference - np.sum(reference * work, axis=1, keepdims=True) * work)
        across = np.cross(work, lever_dir)
        axis = np.cos(tilt_rad) * lever_dir + np.sin(tilt_rad) * work
        if kind != "bar":
            tilt = 0.0 if kind == "ball" else tilt_rad
            axis = np.cos(tilt) * across + np.sin(tilt) * lever_dir
        return HandlePath(s, np.full(len(s), np.nan), grip, work, lever_dir, axis, travel, measured=True)
