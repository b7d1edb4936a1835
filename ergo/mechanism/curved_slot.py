"""A curved slot in the lever's plate drives a pin on a straight slide: a cam that works both ways."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide, in_plane, turned
from ergo.mechanism.measured_ratio import TravelCurve


@dataclass(frozen=True)
class ConstantRatio:
    """Slide travel in proportion to the lever angle: x = start + k (a - a_start).

    Parameters
    ----------
    per_rad_m : k, slide travel per lever angle [m/rad], negative where the slide comes toward the pivot
    at_rad, start_m : a lever angle [rad] and the slide coordinate there [m]
    """

    per_rad_m: float
    at_rad: float
    start_m: float

    def value(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m]."""
        return self.start_m + self.per_rad_m * (np.asarray(lever_rad, dtype=float) - self.at_rad)

    def slope(self, lever_rad: ArrayLike) -> Array:
        """Return k at every angle (P,) [m/rad]."""
        return np.full(np.shape(lever_rad), self.per_rad_m)


@dataclass(frozen=True)
class CurvedSlot:
    """A slot of any shape, turning with the lever, moves a pin fixed to the slide.

    Parameters
    ----------
    travel : slide coordinate against lever angle, as points or as a constant ratio; it counts along d
        from the foot of the square through the pivot
    slide_direction_rad : direction d of the slide [rad], in the convention of lever angles
    slide_offset_m : the slide line's distance h from the pivot, across: at d + 90 degrees [m]

    Equation: the slot's shape is the pin's path seen from the turning lever; the pressure angle phi between
    the slot's normal and the slide has tan(phi) = (dx/da + h) / x.
    Source: norton_design_of_machinery, translating follower with offset. The pin slides in the slot with the
    pins' coefficient of friction.
    """

    travel: TravelCurve | ConstantRatio
    slide_direction_rad: float = 0.0
    slide_offset_m: float = 0.0
    kind: ClassVar[str] = "curved slot"
    mobility: ClassVar[Mobility] = Mobility(bodies=3, lower_pairs=2, higher_pairs=1)
    notes: ClassVar[tuple[str, ...]] = ()

    @classmethod
    def solved(
        cls,
        *,
        per_rad_m: float,
        start_rad: float,
        end_rad: float,
        pressure_limit_rad: float,
        slide_direction_rad: float = 0.0,
        slide_offset_m: float = 0.0,
    ) -> "CurvedSlot":
        """Return the smallest slot with a constant ratio whose pressure angle stays at or below a limit.

        The slide coordinate nearest to the pivot becomes abs(k + h) / tan(limit): the pressure angle
        falls as the pin goes out.
        """
        nearest = abs(per_rad_m + slide_offset_m) / np.tan(pressure_limit_rad)
        nearest = max(nearest, 1e-6)
        start_m = nearest - min(0.0, per_rad_m * (end_rad - start_rad))
        travel = ConstantRatio(per_rad_m, start_rad, float(start_m))
        return cls(travel, slide_direction_rad, slide_offset_m)

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m]."""
        return self.travel.value(lever_rad)

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]."""
        return self.travel.slope(lever_rad)

    def slot_shape_m(self, lever_rad: ArrayLike) -> Array:
        """Return the slot's middle line (P, 2) [m] from the pivot: along the lever, and at +90 degrees."""
        a, x = np.asarray(lever_rad, dtype=float), self.slide_m(lever_rad)
        seen = in_plane(self.slide_direction_rad - a)
        square = np.stack([-seen[..., 1], seen[..., 0]], axis=-1)
        return x[..., None] * seen + self.slide_offset_m * square

    def pressure_angle_rad(self, lever_rad: ArrayLike) -> Array:
        """Return the pressure angle (P,) [rad], 0 to 90 degrees; a drive of 90 degrees moves nothing."""
        rise = self.slide_per_rad_m(lever_rad) + self.slide_offset_m
        return np.arctan2(np.abs(rise), np.abs(self.slide_m(lever_rad)))

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the lever angles in the stroke at which the slide turns back."""
        if isinstance(self.travel, ConstantRatio):
            return ()
        return self.travel.turning_points_rad(start_rad, end_rad)

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: bad points, or a slot abreast of the pivot."""
        if isinstance(self.travel, TravelCurve):
            if found := self.travel.problems(start_rad, end_rad):
                return found
            inner = [
                a for a in self.travel.lever_rad if min(start_rad, end_rad) < a < max(start_rad, end_rad)
            ]
        else:
            if self.travel.per_rad_m == 0.0:
                return (Problem("linkage.constant_ratio_mm_per_deg", "must not be zero", "0"),)
            inner = []
        x = self.slide_m(np.array([start_rad, *inner, end_rad]))
        if x.min() > 0.0 or x.max() < 0.0:
            return ()
        return (
            Problem(
                "linkage.file",
                "the slot passes abreast of the pivot, where it cannot push the slide",
                f"{x.min() * 1e3:g} to {x.max() * 1e3:g}",
                "all above zero, or all below",
                "slide_mm counts along the slide from the point abreast of the pivot, not from the start",
            ),
        )

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): one newton square to the slot.

        The pin slides along the slot in the sense of `way` times the slot's tangent (dx/da + h, -x).
        """
        x, h = self.slide_m(lever_rad), self.slide_offset_m
        rise = self.slide_per_rad_m(lever_rad) + h
        length = np.hypot(x, rise)
        drag = -friction.pin_friction * way
        along = (push * x + drag * rise) / length
        across = (push * rise - drag * x) / length
        torque = h * along - x * across
        pin = np.full_like(x, np.hypot(1.0, friction.pin_friction))
        return Contact(along, across, torque, -turned(along, across, self.slide_direction_rad), pin)
