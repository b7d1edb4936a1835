"""How a linkage passes force between lever and slide, in the lever's plane, per newton of contact force."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike

from ergo.frames import Array


@dataclass(frozen=True)
class Mobility:
    """The mobility count of a planar linkage: bodies (with the ground), pairs of one and of two freedoms.

    Equation: 3 (bodies - 1) - 2 lower pairs - higher pairs. Source: norton_design_of_machinery, mobility of
    planar mechanisms (Gruebler's and Kutzbach's criterion).
    """

    bodies: int
    lower_pairs: int
    higher_pairs: int = 0

    @property
    def count(self) -> int:
        """Freedoms of the linkage; 1 is one drive, 0 or less is a frame that cannot move."""
        return 3 * (self.bodies - 1) - 2 * self.lower_pairs - self.higher_pairs


@dataclass(frozen=True)
class PinAndGuide:
    """Friction of pins and of the slide's guide; the default has none.

    Parameters
    ----------
    pin_radius_m : radius of the lever's pivot pin and of the link pins [m]
    pin_friction : coefficient of friction in the pins, and of a pin sliding in a slot
    slide_friction : coefficient of friction between slide and guide
    slide_bearing_m : length of the guide that bears [m]
    slide_overhang_m : distance, square to the slide, from the guide's middle line to the line of the
        driving force [m]; the load is taken on the middle line
    """

    pin_radius_m: float = 0.0
    pin_friction: float = 0.0
    slide_friction: float = 0.0
    slide_bearing_m: float = 0.0
    slide_overhang_m: float = 0.0

    @property
    def friction_radius_m(self) -> float:
        """Arm of the friction torque in a pin: radius times coefficient [m]."""
        return self.pin_radius_m * self.pin_friction

    @property
    def tilt_share(self) -> float:
        """Pressure of both ends of the guide over the driving force, from overhang alone: 2 a / L."""
        return 2.0 * self.slide_overhang_m / self.slide_bearing_m if self.slide_overhang_m else 0.0

    @property
    def is_none(self) -> bool:
        """True where nothing rubs."""
        return self.friction_radius_m == 0.0 and self.pin_friction == 0.0 and self.slide_friction == 0.0


NO_FRICTION = PinAndGuide()


@dataclass(frozen=True)
class Contact:
    """One newton of contact force between lever side and slide, at each lever angle: arrays (P,).

    along, across : its parts ON THE SLIDE, along the slide direction and square to it (at +90 degrees)
    lever_torque_m : torque ON THE LEVER about the pivot [N m per N], friction in the link pins included
    on_lever : (P, 2) force on the lever in its plane; its direction is unknown where `direction_known` is
        False, and then only its length counts
    link_pin : force in each link pin, 0 where there is none
    has_guide : False where no guided slide takes part, so that no guide rubs
    """

    along: Array
    across: Array
    lever_torque_m: Array
    on_lever: Array
    link_pin: Array
    direction_known: bool = True
    has_guide: bool = True


def in_plane(angle_rad: ArrayLike) -> Array:
    """Return the unit vector (..., 2) at an angle, in the lever's plane (axes of `Lever.plane`)."""
    a = np.asarray(angle_rad, dtype=float)
    return np.stack([np.cos(a), np.sin(a)], axis=-1)


def turned(along: Array, across: Array, direction_rad: float) -> Array:
    """Return parts along a direction and square to it as a vector (P, 2) in the lever's plane."""
    u, v = in_plane(direction_rad), in_plane(direction_rad + 0.5 * np.pi)
    return along[..., None] * u + across[..., None] * v


def angles_within(angles_rad: ArrayLike, start_rad: float, end_rad: float) -> tuple[float, ...]:
    """Return those of some angles, taken modulo a full turn, that lie between start and end, sorted.

    An angle that differs from an end by rounding alone (1e-9 rad) counts as inside.
    """
    low, high = min(start_rad, end_rad) - 1e-9, max(start_rad, end_rad) + 1e-9
    found: set[float] = set()
    for angle in np.atleast_1d(np.asarray(angles_rad, dtype=float)):
        first = np.ceil((low - angle) / (2.0 * np.pi))
        last = np.floor((high - angle) / (2.0 * np.pi))
        found |= {round(float(angle + 2.0 * np.pi * k), 12) for k in np.arange(first, last + 1.0)}
    return tuple(sorted(found))
