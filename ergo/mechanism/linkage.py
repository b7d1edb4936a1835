"""The linkages between lever and load, one file a kind; this is their face."""

from typing import ClassVar, Protocol

from numpy.typing import ArrayLike

from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.connecting_link import ConnectingLink
from ergo.mechanism.contact import Contact, Mobility, PinAndGuide
from ergo.mechanism.curved_slot import ConstantRatio, CurvedSlot
from ergo.mechanism.direct import HandleLoad, Rack, ShaftLoad
from ergo.mechanism.fixed_pin import FixedPin, FixedPinAnswer
from ergo.mechanism.measured_ratio import MeasuredRatio, TravelCurve
from ergo.mechanism.slotted_arm import SlottedArm

__all__ = [
    "KINDS",
    "ConnectingLink",
    "ConstantRatio",
    "CurvedSlot",
    "FixedPin",
    "FixedPinAnswer",
    "HandleLoad",
    "Linkage",
    "MeasuredRatio",
    "Rack",
    "ShaftLoad",
    "SlottedArm",
    "TravelCurve",
]


class Linkage(Protocol):
    """What every linkage that moves can answer; lever angles [rad] by the station's convention."""

    kind: ClassVar[str]
    mobility: ClassVar[Mobility]
    notes: ClassVar[tuple[str, ...]]

    def slide_m(self, lever_rad: ArrayLike) -> Array:
        """Return the slide coordinate (P,) [m] at lever angles (P,)."""
        ...

    def slide_per_rad_m(self, lever_rad: ArrayLike) -> Array:
        """Return its change per lever angle (P,) [m/rad], signed, in closed form."""
        ...

    def dead_centres_rad(self, start_rad: float, end_rad: float) -> tuple[float, ...]:
        """Return the lever angles within the stroke at which the slide stops and turns back."""
        ...

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what keeps the linkage from the stroke, in the study file's keys; empty if nothing does."""
        ...

    def contact(self, lever_rad: Array, way: float, push: Array, friction: PinAndGuide) -> Contact:
        """Return one newton of contact force at lever angles (P,).

        Parameters
        ----------
        lever_rad : (P,) lever angles [rad]
        way : sense in which the lever turns, +1 or -1
        push : (P,) sign of the contact force along the linkage's own normal (link, slot, tooth)
        friction : what rubs
        """
        ...


KINDS: dict[str, type] = {
    kind.kind: kind
    for kind in (HandleLoad, ShaftLoad, Rack, ConnectingLink, SlottedArm, CurvedSlot, FixedPin, MeasuredRatio)
}
