"""Arm, connecting link and slide line at an offset: the slider-crank, on either branch."""

from dataclasses import dataclass
from typing import ClassVar, Literal

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide, angles_within, in_plane, turned

Branch = Literal["open", "crossed"]
_SQUARE = 1e-9  # a link closer than this share of its length to square across the slide counts as square


@dataclass(frozen=True)
class ConnectingLink:
    """An arm on the lever moves a slide through a link with a pin at each end.

    Parameters
    ----------
    arm_m, link_m : pivot to link pin, and pin to pin [m]
    arm_offset_rad : angle from lever to arm [rad], so that the arm stands at p = lever angle + offset
    slide_direction_rad : direction d of the slide [rad], in the convention of lever angles
    slide_offset_m : the slide line's distance from the pivot, across: at d + 90 degrees [m]
    branch : `open` (slide ahead of the link pin along d) or `crossed` (behind it)

    Valid range: the link must reach the slide line at every angle of the stroke (`problems` names the first
    angle where it does not). Equation: x = r cos(p-d) + or - sqrt(l^2 - (r sin(p-d) - h)^2).
    Source: norton_design_of_machinery, offset slider-crank.
    """

    arm_m: float
    link_m: float
    slide_direction_rad: float = 0.0
    slide_offset_m: float = 0.0
    arm_offset_rad: float = 0.0
    branch: Branch = "open"
    kind: ClassVar[str] = "connecting link"
    mobility: ClassVar[Mobility] = Mobility(bodies=4, lower_pairs=4)
    notes: ClassVar[tuple[str, ...]] = ()

    @property
    def _side(self) -> float:
        return 1.0 if self.branch == "open" else -1.0

    def _parts(self, lever_rad: ArrayLike) -> tuple[Array, Array, Array]:
        q = np.asarray(lever_rad, dtype=float) + self.arm_offset_rad - self.slide_direction_rad
        across = self.slide_offset_m - self.arm_m * np.sin(q)
        left = (self.link_m - across) * (self.link_m + across)
        return q, self._side * np.sqrt(np.maximum(left, 0.0)), across

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m] along d, from the foot of the square through the pivot."""
        q, along, _ = self._parts(lever_rad)
        return self.arm_m * np.cos(q) + along

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]: -r sin q + r cos q (h - r sin q) / run."""
        q, along, across = self._parts(lever_rad)
        return self.arm_m * (np.cos(q) * across / along - np.sin(q))

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the lever angles in the stroke at which arm and link lie in one line and the slide stops.

        Equation: sin(p-d) = h / (r + l) stretched, h / (r - l) folded; which side follows from the branch.
        """
        r, length, h = self.arm_m, self.link_m, self.slide_offset_m
        found = []
        for reach, side in ((r + length, self._side), (r - length, -self._side)):
            if reach != 0.0 and abs(h) < abs(reach):
                q = np.arcsin(h / reach)
                found.append(q if side > 0.0 else np.pi - q)
        angles = np.array(found) - self.arm_offset_rad + self.slide_direction_rad
        return angles_within(angles, start_rad, end_rad)

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: no length, or a link too short to close."""
        found = [
            Problem(f"linkage.{name}_mm", "must be above zero", f"{value * 1e3:g}")
            for name, value in (("arm", self.arm_m), ("link", self.link_m))
            if not value > 0.0
        ]
        if found:
            return tuple(found)
        turns = self.slide_direction_rad - self.arm_offset_rad + np.array([0.5, -0.5]) * np.pi
        ends = (start_rad, end_rad, *angles_within(turns, start_rad, end_rad))
        _, _, across = self._parts(ends)
        need = float(np.abs(across).max())
        if need < self.link_m * (1.0 - _SQUARE):
            return ()
        angle = np.rad2deg(self._first_open(start_rad, end_rad))
        what = f"the link is too short to close, from lever angle {angle:.1f} deg on"
        return (Problem("linkage.link_mm", what, f"{self.link_m * 1e3:g}", f"above {need * 1e3:.1f} mm"),)

    def _first_open(self, start_rad: float, end_rad: float) -> float:
        """Return the first lever angle of the stroke at which the link does not reach the slide line."""
        if abs(self._parts(start_rad)[2]) >= self.link_m * (1.0 - _SQUARE):
            return start_rad
        sines = (self.slide_offset_m + np.array([1.0, -1.0]) * self.link_m) / self.arm_m
        q = np.arcsin(np.clip(sines, -1.0, 1.0))[np.abs(sines) <= 1.0 + _SQUARE]
        angles = np.concatenate([q, np.pi - q]) - self.arm_offset_rad + self.slide_direction_rad
        within = angles_within(angles, start_rad, end_rad)
        return min(within, key=lambda angle: abs(angle - start_rad), default=end_rad)

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): one newton in the link.

        Pin friction turns the line of force out of the link by delta, sin(delta) = mu r (s_A + s_B) / l, with
        s_A and s_B the senses in which arm and slide turn on the link: the moment balance of a weightless
        link.
        """
        q, along, across = self._parts(lever_rad)
        link_turn = -way * self.arm_m * np.cos(q) / along
        at_arm, at_slide = np.sign(way - link_turn), np.sign(-link_turn)
        sine = np.clip(friction.friction_radius_m * (at_arm + at_slide) / self.link_m, -1.0, 1.0)
        cosine = push * np.sqrt(1.0 - sine**2)
        k_along, k_across = along / self.link_m, across / self.link_m
        f_along = cosine * k_along - sine * k_across
        f_across = cosine * k_across + sine * k_along
        arm_along, arm_across = self.arm_m * np.cos(q), self.arm_m * np.sin(q)
        torque = arm_across * f_along - arm_along * f_across - friction.friction_radius_m * at_arm
        on_lever = -turned(f_along, f_across, self.slide_direction_rad)
        return Contact(f_along, f_across, torque, on_lever, np.ones_like(q))

    def pins_m(self, lever_rad: ArrayLike) -> tuple[Array, Array]:
        """Return the arm's pin and the slide's pin (P, 2) [m] in the lever's plane, from the pivot."""
        arm = self.arm_m * in_plane(np.asarray(lever_rad, dtype=float) + self.arm_offset_rad)
        x = self.slide_m(lever_rad)
        return arm, turned(x, np.full_like(x, self.slide_offset_m), self.slide_direction_rad)
