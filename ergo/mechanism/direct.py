"""Linkages without a slide line of their own: the load at the handle, on the lever's shaft, or a rack."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide, in_plane


@dataclass(frozen=True)
class HandleLoad:
    """The load acts at the handle itself, against its path.

    Parameters
    ----------
    length_m : pivot to handle [m], the lever's own length
    """

    length_m: float
    kind: ClassVar[str] = "handle"
    mobility: ClassVar[Mobility] = Mobility(bodies=2, lower_pairs=1)
    notes: ClassVar[tuple[str, ...]] = ()

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the handle's path length (P,) [m], growing with the lever angle: L a."""
        return self.length_m * np.asarray(lever_rad, dtype=float)

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]: L."""
        return np.full(np.shape(lever_rad), self.length_m)

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the dead centres in the stroke: none."""
        return ()

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: nothing."""
        return ()

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): the load sits on the lever at the handle."""
        none = np.zeros_like(lever_rad)
        tangent = in_plane(lever_rad + 0.5 * np.pi)
        return Contact(push, none, -push * self.length_m, -push[:, None] * tangent, none, has_guide=False)


@dataclass(frozen=True)
class ShaftLoad:
    """The load is a torque [N m] on the lever's shaft; the slide coordinate is the lever angle [rad]."""

    kind: ClassVar[str] = "shaft"
    mobility: ClassVar[Mobility] = Mobility(bodies=2, lower_pairs=1)
    notes: ClassVar[tuple[str, ...]] = ()

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the lever angle (P,) [rad]."""
        return np.asarray(lever_rad, dtype=float)

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return ones (P,)."""
        return np.ones(np.shape(lever_rad))

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the dead centres in the stroke: none."""
        return ()

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: nothing."""
        return ()

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): a pure couple, no force on the pivot."""
        none = np.zeros_like(lever_rad)
        return Contact(push, none, -push, np.zeros((len(lever_rad), 2)), none, has_guide=False)


@dataclass(frozen=True)
class Rack:
    """A pinion on the lever's shaft drives a rack.

    Parameters
    ----------
    pinion_radius_m : pitch radius of the pinion [m]
    pressure_angle_rad : of the teeth [rad]; it presses the rack off the pinion with tan(angle) of the drive

    The side of the pinion on which the rack runs is not asked for, so the pivot pin is taken to carry the
    tooth force on top of the rest, whatever its direction: the largest it can be. Friction between the teeth
    is left out.
    """

    pinion_radius_m: float
    pressure_angle_rad: float
    kind: ClassVar[str] = "rack"
    mobility: ClassVar[Mobility] = Mobility(bodies=3, lower_pairs=2, higher_pairs=1)
    notes: ClassVar[tuple[str, ...]] = (
        "rack: the pivot pin is taken to carry the whole tooth force on top of the rest, the largest it can "
        "be; friction between the teeth is left out",
    )

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the rack's travel (P,) [m]: r a."""
        return self.pinion_radius_m * np.asarray(lever_rad, dtype=float)

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad]: r."""
        return np.full(np.shape(lever_rad), self.pinion_radius_m)

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the dead centres in the stroke: none."""
        return ()

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from its stroke: a pinion without a radius."""
        if self.pinion_radius_m > 0.0:
            return ()
        return (Problem("linkage.pinion_radius_mm", "must be above zero", f"{self.pinion_radius_m * 1e3:g}"),)

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return the contact (see `linkage.Linkage.contact`): one newton of tooth force."""
        ones = np.ones_like(lever_rad)
        along = push * np.cos(self.pressure_angle_rad)
        across = ones * np.sin(self.pressure_angle_rad)
        on_lever = np.stack([ones, 0.0 * ones], axis=1)
        torque = -along * self.pinion_radius_m
        return Contact(along, across, torque, on_lever, 0.0 * ones, direction_known=False)
