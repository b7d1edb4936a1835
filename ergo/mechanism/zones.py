"""Zones of the station: solid bodies that a hand must not meet, and exact distances to them."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Z_UP, Array, unit
from ergo.mechanism import zone_kernels as kernels

Role = Literal["hazard", "obstacle"]


@dataclass(frozen=True)
class Box:
    """A box with its edges along the station's axes: middle (3,) and full sizes (3,) [m]."""

    centre_m: tuple[float, float, float]
    size_m: tuple[float, float, float]

    def row(self) -> Array:
        """Return the body as the kernels' row (10,)."""
        half = 0.5 * np.asarray(self.size_m, dtype=float)
        return np.array([kernels.BOX, *self.centre_m, *half, 0.0, 0.0, 0.0])

    def problems(self, where: str) -> tuple[Problem, ...]:
        """Return what makes the box no solid body."""
        sizes = [s * 1e3 for s in self.size_m]
        if min(sizes) > 0.0:
            return ()
        return (
            Problem(f"{where}.size_mm", "must be above zero three times", ", ".join(f"{s:g}" for s in sizes)),
        )


@dataclass(frozen=True)
class Cylinder:
    """A solid cylinder with flat ends: its two end middles (3,) and radius [m]."""

    from_m: tuple[float, float, float]
    to_m: tuple[float, float, float]
    radius_m: float

    def row(self) -> Array:
        """Return the body as the kernels' row (10,)."""
        a, b = np.asarray(self.from_m, dtype=float), np.asarray(self.to_m, dtype=float)
        half = 0.5 * float(np.linalg.norm(b - a))
        return np.array([kernels.CYLINDER, *(0.5 * (a + b)), *unit(b - a), half, self.radius_m, 0.0])

    def problems(self, where: str) -> tuple[Problem, ...]:
        """Return what makes the cylinder no solid body."""
        found = []
        if not self.radius_m > 0.0:
            found.append(Problem(f"{where}.radius_mm", "must be above zero", f"{self.radius_m * 1e3:g}"))
        if np.linalg.norm(np.subtract(self.to_m, self.from_m)) < 1e-9:
            found.append(Problem(f"{where}.to_mm", "the cylinder has no length: its ends are the same place"))
        return tuple(found)


@dataclass(frozen=True)
class Ball:
    """A ball: middle (3,) and radius [m]."""

    centre_m: tuple[float, float, float]
    radius_m: float

    def row(self) -> Array:
        """Return the body as the kernels' row (10,)."""
        return np.array([kernels.BALL, *self.centre_m, self.radius_m, 0.0, 0.0, 0.0, 0.0, 0.0])

    def problems(self, where: str) -> tuple[Problem, ...]:
        """Return what makes the ball no solid body."""
        if self.radius_m > 0.0:
            return ()
        return (Problem(f"{where}.radius_mm", "must be above zero", f"{self.radius_m * 1e3:g}"),)


@dataclass(frozen=True)
class Zone:
    """A named solid body of the station.

    Parameters
    ----------
    name : what it is called in sentences
    role : `hazard` (hurts) or `obstacle` (is in the way)
    shape : box, cylinder or ball, in the station frame
    """

    name: str
    role: Role
    shape: Box | Cylinder | Ball

    def problems(self, where: str) -> tuple[Problem, ...]:
        """Return what makes the zone no solid body; `where` is its dotted path, such as `zones[0]`."""
        return self.shape.problems(where)

    def _measure(self, points_m: ArrayLike) -> tuple[Array, Array, Array]:
        p = np.ascontiguousarray(points_m, dtype=float)
        flat = p.reshape(-1, 3)
        distance, gradient = np.empty(len(flat)), np.empty((len(flat), 3))
        kernels.point_distances(self.shape.row(), flat, distance, gradient)
        # in a ball's middle, or on a cylinder's axis, all ways out are equally long: up, or square to it
        lost = np.linalg.norm(gradient, axis=1) < 0.5
        gradient[lost] = self._any_way_out()
        return p, distance.reshape(p.shape[:-1]), gradient.reshape(p.shape)

    def _any_way_out(self) -> Array:
        if not isinstance(self.shape, Cylinder):
            return Z_UP
        axis = self.shape.row()[4:7]
        return unit(np.cross(axis, np.eye(3)[np.argmin(np.abs(axis))]))

    def distance_m(self, points_m: ArrayLike) -> Array:
        """Return the signed distance (...) [m] from points (..., 3) to the surface, below zero inside."""
        return self._measure(points_m)[1]

    def nearest_m(self, points_m: ArrayLike) -> Array:
        """Return the nearest place (..., 3) [m] on the zone's surface to points (..., 3)."""
        p, distance, out = self._measure(points_m)
        return p - distance[..., None] * out

    def toward(self, points_m: ArrayLike) -> Array:
        """Return the unit direction (..., 3) from points (..., 3) that closes in on the zone fastest.

        From inside it is the way deeper in.
        """
        return -self._measure(points_m)[2]

    def gap_m(self, from_m: ArrayLike, to_m: ArrayLike, radius_m: ArrayLike) -> Array:
        """Return the gap (...) [m] between capsules and the zone, below zero where they overlap.

        Parameters
        ----------
        from_m, to_m : (..., 3) ends of each capsule's middle line [m]; they broadcast against each other
        radius_m : (...) radius of each capsule [m]

        Returns
        -------
        Lowest signed distance over the middle line, exact to 1e-12 m, less the radius. Where a middle line
        runs through the zone, the depth of its deepest point counts.
        """
        a, b = np.broadcast_arrays(np.asarray(from_m, dtype=float), np.asarray(to_m, dtype=float))
        start, end = (np.ascontiguousarray(x).reshape(-1, 3) for x in (a, b))
        distance = np.empty(len(start))
        kernels.segment_distances(self.shape.row(), start, end, distance)
        return distance.reshape(a.shape[:-1]) - np.asarray(radius_m, dtype=float)


def smallest_gap_m(
    zones: tuple[Zone, ...], from_m: ArrayLike, to_m: ArrayLike, radius_m: ArrayLike
) -> tuple[Array, np.ndarray]:
    """Return the smallest gap (...) [m] of each capsule to any zone, and the number (...) of that zone.

    Raises
    ------
    ValueError
        If there is no zone: a gap to nothing has no value.
    """
    if not zones:
        msg = "there is no zone to measure a gap to"
        raise ValueError(msg)
    gaps = np.stack([zone.gap_m(from_m, to_m, radius_m) for zone in zones])
    return gaps.min(axis=0), gaps.argmin(axis=0)
