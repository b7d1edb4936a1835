"""A straight slot in the lever's arm drives a pin on a straight slide."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide, angles_within, turned


@dataclass(frozen=True)
class SlottedArm:
    """A slot along the arm, through the pivot's middle when drawn on, moves a pin fixed to the slide.

    Parameters
    ----------
    slide_offset_m : the slide line's distance h from the pivot, across: at d + 90 degrees [m], not zero
    slide_direction_rad : direction d of the slide [rad], in the convention of lever angles
    arm_offset_rad : angle from lever to arm [rad], so that the arm stands at p = lever angle + offset

    Valid range: the arm must not come parallel to the slide within the stroke.
    Equation: x = h tan(d + 90 deg - p). Source: norton_design_of_machinery, inverted slider-crank.
    The pin slides along the slot, with the pins' coefficient of friction.
    """

    slide_offset_m: float
    slide_direction_rad: float = 0.0
    arm_offset_rad: float = 0.0
    kind: ClassVar[str] = "slotted arm"
    mobility: ClassVar[Mobility] = Mobility(bodies=3, lower_pairs=2, higher_pairs=1)
    notes: ClassVar[tuple[str, ...]] = ()

    def _q(self, lever_rad: ArrayLike) -> Array:
        return np.asarray(lever_rad, dtype=float) + self.arm_offset_rad - self.slide_direction_rad

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m] along d, from the foot of the square through the pivot."""
        return self.slide_offset_m * np.tan(0.5 * np.pi - self._q(lever_rad))

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]: -h / sin^2(p - d)."""
        return -self.slide_offset_m / np.sin(self._q(lever_rad)) ** 2

    def pin_on_arm_m(self, lever_rad: ArrayLike) -> Array:
        """Return the pin's place along the arm (P,) [m]: h / sin(p - d), below zero behind the pivot."""
        return self.slide_offset_m / np.sin(self._q(lever_rad))

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the dead centres in the stroke: a slotted arm has none."""
        return ()

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: no offset, or an arm parallel to the slide."""
        if self.slide_offset_m == 0.0:
            what = "must not be zero: a slide line through the pivot is not moved by a slotted arm"
            return (Problem("linkage.slide_offset_mm", what, "0"),)
        parallel = self.slide_direction_rad - self.arm_offset_rad + np.array([0.0, np.pi])
        met = sorted(angles_within(parallel, start_rad, end_rad), key=lambda angle: abs(angle - start_rad))
        if not met:
            return ()
        what = f"the slotted arm comes parallel to the slide at lever angle {np.rad2deg(met[0]):.1f} deg"
        got = f"{np.rad2deg(self.slide_direction_rad):g}"
        return (Problem("linkage.slide_direction_deg", what, got, "a stroke that stays clear of that angle"),)

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): one newton square to the slot.

        The pin's sliding along the slot adds the friction coefficient times that newton, against the sliding.
        """
        q = self._q(lever_rad)
        sliding = np.sign(-self.slide_offset_m * np.cos(q) * way)
        drag = -friction.pin_friction * sliding
        along = -push * np.sin(q) + drag * np.cos(q)
        across = push * np.cos(q) + drag * np.sin(q)
        torque = self.slide_offset_m * along - self.slide_m(lever_rad) * across
        pin = np.full_like(q, np.hypot(1.0, friction.pin_friction))
        return Contact(along, across, torque, -turned(along, across, self.slide_direction_rad), pin)
