"""An arm pinned straight to a slide, with nothing to take up the pin's sideways travel: no mechanism."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np

from ergo.errors import Problem
from ergo.mechanism.contact import Mobility, angles_within


@dataclass(frozen=True)
class FixedPinAnswer:
    """Why an arm pinned straight to a slide does not move, and how far its play would let it.

    mobility : the mobility count, 0
    sideways_travel_m : sideways room the pin would need over the stroke asked for [m]
    usable_rad : lever angle either side of the arm's square position at which the play is used up [rad]
    usable_from_start_rad : lever angle from the stroke's start at which the play is used up [rad]; the whole
        stroke where the play is enough
    """

    mobility: int
    sideways_travel_m: float
    usable_rad: float
    usable_from_start_rad: float
    play_m: float
    stroke_rad: float

    def sentences(self) -> tuple[str, ...]:
        """Return the answer in plain sentences."""
        stroke, usable = np.rad2deg(self.stroke_rad), np.rad2deg(self.usable_from_start_rad)
        return (
            f"An arm pinned straight to a slide is not a mechanism: its mobility count is {self.mobility}, "
            "so nothing moves.",
            f"Over the {stroke:.1f} degrees asked for, the pin would travel "
            f"{self.sideways_travel_m * 1e3:.2f} mm sideways, and nothing in the linkage takes that up.",
            f"A play of {self.play_m * 1e3:.2f} mm is used up {usable:.1f} degrees after the start, and at "
            f"best {np.rad2deg(self.usable_rad):.1f} degrees either side of the arm square to the slide.",
            "Take the travel up with a connecting link, a slot or a rack.",
        )


@dataclass(frozen=True)
class FixedPin:
    """An arm on the lever with its pin in a plain hole of the slide.

    Parameters
    ----------
    arm_m : pivot to pin [m]
    play_m : sideways clearance of pin and slide together [m]
    arm_offset_rad, slide_direction_rad : as for the connecting link [rad]

    Equation: sideways travel r (1 - cos a), a from the arm's square position.
    """

    arm_m: float
    play_m: float = 0.0
    slide_direction_rad: float = 0.0
    arm_offset_rad: float = 0.0
    kind: ClassVar[str] = "fixed pin"
    mobility: ClassVar[Mobility] = Mobility(bodies=3, lower_pairs=3)
    notes: ClassVar[tuple[str, ...]] = ()

    def problems(self, start_rad: float, end_rad: float) -> tuple[Problem, ...]:
        """Return what makes the arm meaningless: no length, or play below zero."""
        found = []
        if not self.arm_m > 0.0:
            found.append(Problem("linkage.arm_mm", "must be above zero", f"{self.arm_m * 1e3:g}"))
        if self.play_m < 0.0:
            found.append(Problem("linkage.play_mm", "must not be below zero", f"{self.play_m * 1e3:g}"))
        return tuple(found)

    def answer(self, start_rad: float, end_rad: float) -> FixedPinAnswer:
        """Return why this linkage does not move over the stroke from start to end [rad]."""
        turn = self.slide_direction_rad - self.arm_offset_rad
        square = angles_within(turn + np.array([0.5, -0.5]) * np.pi, start_rad, end_rad)
        q = np.array([start_rad, *square, end_rad]) - turn
        sideways = self.arm_m * np.sin(q)
        return FixedPinAnswer(
            mobility=self.mobility.count,
            sideways_travel_m=float(np.ptp(sideways)),
            usable_rad=float(np.arccos(max(1.0 - self.play_m / self.arm_m, -1.0))),
            usable_from_start_rad=self._used_up(start_rad, end_rad, square),
            play_m=self.play_m,
            stroke_rad=abs(end_rad - start_rad),
        )

    def _used_up(self, start_rad: float, end_rad: float, square: tuple[float, ...]) -> float:
        """Return how far the lever turns from its start before the pin's sideways travel exceeds the play.

        Between its square positions the pin drifts one way, so it is enough to look at the levels reached:
        the play is used up where the drift leaves the band [highest - play, lowest + play] seen so far.
        """
        turn = self.slide_direction_rad - self.arm_offset_rad
        ordered = sorted(square, key=lambda angle: abs(angle - start_rad))
        low = high = float(np.sin(start_rad - turn))
        share = self.play_m / self.arm_m
        for angle in (*ordered, end_rad):
            level = float(np.sin(angle - turn))
            limit = low + share if level > high else high - share
            low, high = min(low, level), max(high, level)
            if high - low > share + 1e-12:
                crossing = np.arcsin(np.clip(limit, -1.0, 1.0))
                met = angles_within(turn + np.array([crossing, np.pi - crossing]), start_rad, angle)
                return min(
                    (abs(a - start_rad) for a in met if _after(a, start_rad, ordered, angle)), default=0.0
                )
        return abs(end_rad - start_rad)


def _after(angle: float, start: float, square: list[float], stop: float) -> bool:
    """Return True where an angle lies on the last monotone stretch before `stop`."""
    before = [s for s in square if abs(s - start) < abs(stop - start)]
    begin = before[-1] if before else start
    return min(begin, stop) - 1e-9 <= angle <= max(begin, stop) + 1e-9
