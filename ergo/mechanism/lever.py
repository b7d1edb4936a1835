"""The hand lever and its grip: where they are, what the lever weighs, how hard it is to start."""

from dataclasses import dataclass
from typing import Literal

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import GRAVITY_M_S2, Z_UP, Array, lever_direction, pivot_axis, zero_direction

GripKind = Literal["ball", "bar", "crossbar"]
GRIP_KINDS: tuple[GripKind, ...] = ("ball", "bar", "crossbar")


@dataclass(frozen=True)
class Lever:
    """A straight rigid lever that turns about a fixed pivot axis.

    Parameters
    ----------
    pivot_m : (3,) pivot point in the lever's plane [m], station frame
    axis : pivot axis, a name of `frames.NAMED_AXES` or a vector (3,)
    length_m : pivot to the lever's end where the grip sits [m]
    start_rad, end_rad : lever angles at stroke 0 and 1 [rad], convention of `frames.lever_direction`
    mass_kg : lever with its grip [kg]
    balance_m : pivot to the centre of mass, along the lever [m], below zero behind the pivot; None = half the
        length
    return_spring_nm_per_rad : spring that turns the lever back to the start, slack there [N m/rad]
    """

    pivot_m: tuple[float, float, float]
    axis: str | tuple[float, float, float]
    length_m: float
    start_rad: float
    end_rad: float
    mass_kg: float = 0.0
    balance_m: float | None = None
    return_spring_nm_per_rad: float = 0.0

    @property
    def unit_axis(self) -> Array:
        """Pivot axis as a unit vector (3,)."""
        return pivot_axis(self.axis)

    @property
    def way(self) -> float:
        """Sense of the stroke: +1 where the lever angle grows from start to end, -1 where it falls."""
        return 1.0 if self.end_rad >= self.start_rad else -1.0

    @property
    def balance_point_m(self) -> float:
        """Distance of the centre of mass from the pivot along the lever [m]."""
        return 0.5 * self.length_m if self.balance_m is None else self.balance_m

    @property
    def plane(self) -> Array:
        """The lever's plane (2, 3): the directions at lever angle 0 and at +90 degrees."""
        return np.stack([zero_direction(self.unit_axis), lever_direction(self.unit_axis, 0.5 * np.pi)])

    def angles_rad(self, stroke: ArrayLike) -> Array:
        """Return the lever angles (P,) [rad] at the stroke positions (P,), 0 at the start, 1 at the end."""
        return self.start_rad + (self.end_rad - self.start_rad) * np.asarray(stroke, dtype=float)

    def direction(self, lever_rad: ArrayLike) -> Array:
        """Return the unit direction (P, 3) from the pivot along the lever at `lever_rad` (P,)."""
        return lever_direction(self.unit_axis, lever_rad)

    def weight_in_plane_n(self) -> Array:
        """Return the part (2,) of the lever's weight that lies in its plane [N], in the axes of `plane`.

        The part along the pivot axis (an upright axis carries all of it) is taken by the pivot's collar,
        whose friction is not modelled.
        """
        return -self.mass_kg * GRAVITY_M_S2 * (self.plane @ Z_UP)

    def weight_torque_nm(self, lever_rad: ArrayLike) -> Array:
        """Return the torque (P,) of the lever's weight about the pivot axis [N m], for any axis.

        Equation: n . (b u x m g), with u the lever's direction and b the balance distance.
        """
        a = np.asarray(lever_rad, dtype=float)
        w = self.weight_in_plane_n()
        return self.balance_point_m * (np.cos(a) * w[1] - np.sin(a) * w[0])

    def spring_torque_nm(self, lever_rad: ArrayLike) -> Array:
        """Return the torque (P,) of the return spring about the pivot axis [N m], against the stroke."""
        return -self.return_spring_nm_per_rad * (np.asarray(lever_rad, dtype=float) - self.start_rad)

    def inertia_kg_m2(self) -> float:
        """Return the lever's moment of inertia about the pivot axis [kg m2].

        A slender uniform rod of the lever's length whose middle sits at the balance point:
        m b^2 + m L^2 / 12, which is m L^2 / 3 where the balance point is not given.
        """
        return self.mass_kg * (self.balance_point_m**2 + self.length_m**2 / 12.0)

    def hand_mass_kg(self) -> float:
        """Return the mass [kg] at the hand that resists speeding up as the lever does: I / L^2."""
        return self.inertia_kg_m2() / self.length_m**2

    def problems(self) -> tuple[Problem, ...]:
        """Return what makes this lever unusable, in the keys of the study file; empty when nothing does."""
        found = []
        if not self.length_m > 0.0:
            found.append(Problem("lever.length_mm", "must be above zero", f"{self.length_m * 1e3:g}"))
        if self.start_rad == self.end_rad:
            found.append(
                Problem(
                    "lever.end_deg",
                    "the stroke is zero: start and end are the same angle",
                    f"{np.rad2deg(self.end_rad):g}",
                )
            )
        return tuple(found)


@dataclass(frozen=True)
class Grip:
    """What the hand holds at the lever's end.

    Parameters
    ----------
    kind : `ball` (no axis), `bar` (along the lever) or `crossbar` (along the pivot axis)
    tilt_rad : [rad] a bar is turned by it about the pivot axis (in the lever's plane of motion, positive as
        lever angles are); a crossbar is turned by it from the pivot axis toward the lever's direction
    offset_m : distance of the grip's centre from the lever's plane, along the pivot axis [m]
    """

    kind: GripKind = "ball"
    tilt_rad: float = 0.0
    offset_m: float = 0.0

    def axis_along(self, lever: Lever, lever_rad: ArrayLike) -> Array:
        """Return the grip's unit axis (P, 3) at the lever angles (P,); for a ball it has no meaning."""
        if self.kind == "bar":
            return lever.direction(np.asarray(lever_rad, dtype=float) + self.tilt_rad)
        n, u = lever.unit_axis, lever.direction(lever_rad)
        tilt = 0.0 if self.kind == "ball" else self.tilt_rad
        return np.cos(tilt) * n + np.sin(tilt) * u
