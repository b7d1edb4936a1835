"""A handle that is also turned about its own axis: does the range of the wrist or the strength give out first."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library
from ergo.frames import Array
from ergo.letgo.parameters import rows

TABLE = "letgo_twist"
NAMES = ("normal_over_grip",)
NOT_COVERED, NOTHING, RANGE, FOREARM, GRIP = range(-1, 4)
LIMIT_WORDS = {
    NOT_COVERED: "not covered: no posture here",
    NOTHING: "nothing: range and strength are enough",
    RANGE: "the range of forearm and wrist",
    FOREARM: "the strength of the turning forearm",
    GRIP: "the grip, which slips on the handle",
}


def parameter_names() -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that the grip torque rests on."""
    return tuple((TABLE, name) for name in NAMES)


@dataclass(frozen=True)
class Twist:
    """Turning the handle at each position: arrays (n, P) of operators and positions.

    first : what gives out first: `RANGE`, `FOREARM`, `GRIP`, or `NOTHING`; `NOT_COVERED` without a posture
    able : True where nothing gives out
    torque_nm : torque that the operator can turn with, the lesser of forearm and grip [N m]
    margin : that torque over the needed one; infinite where none is needed
    turn_left_rad : forearm turn that is left the needed way [rad]
    """

    first: NDArray[np.int8]
    able: NDArray[np.bool_]
    torque_nm: Array
    margin: Array
    turn_left_rad: Array

    def shares(self, who: ArrayLike | None = None) -> dict[str, Array]:
        """Return what gives out first, as shares (P,) of the covered operators `who` (n,), by its words."""
        chosen = self.first if who is None else self.first[np.asarray(who, dtype=bool)]
        covered = np.maximum(np.sum(chosen != NOT_COVERED, axis=0), 1)
        wanted = (NOTHING, RANGE, FOREARM, GRIP)
        return {LIMIT_WORDS[code]: np.sum(chosen == code, axis=0) / covered for code in wanted}


def grip_torque_nm(grip_force_n: ArrayLike, friction: ArrayLike, diameter_m: ArrayLike, library: Library) -> Array:
    """Return the torque (...) [N m] at which a hand slips round a bar.

    Parameters
    ----------
    grip_force_n : (...) grip strength as a dynamometer reads it [N]
    friction : coefficient of hand on handle
    diameter_m : of the bar [m]

    Returns
    -------
    Array

    Valid range: a full grip round a round bar; a bar of about 25 to 60 mm.
    Equation: T = friction x (normal force over grip force) x grip force x diameter / 2.
    Source: table `letgo_twist`.
    """
    factor = rows(library, TABLE, NAMES, "the grip torque on a handle").values()["normal_over_grip"]
    grip, rubs, wide = (np.asarray(v, dtype=float) for v in (grip_force_n, friction, diameter_m))
    return factor * rubs * grip * wide / 2.0


def twist(
    needed_nm: ArrayLike,
    needed_turn_rad: ArrayLike,
    forearm_nm: ArrayLike,
    grip_nm: ArrayLike,
    turn_now_rad: ArrayLike,
    turn_end_rad: ArrayLike,
) -> Twist:
    """Return which gives out first when the handle is turned at P positions: range, forearm or grip.

    Parameters
    ----------
    needed_nm : (P,) torque to turn the handle [N m], at least 0
    needed_turn_rad : (P,) angle by which it must be turned [rad], at least 0
    forearm_nm : (n, P) strength of the forearm turning the needed way at that posture [N m]; NaN without one
    grip_nm : (n, P) or (n, 1) torque at which the grip slips [N m]
    turn_now_rad : (n, P) forearm turn with the hand on the handle, positive the needed way [rad]
    turn_end_rad : (n, P), (n, 1) or a number: end of the forearm's range that way [rad]

    Returns
    -------
    Twist
        Range comes first where the turn that is left falls short, whatever the strength.

    Valid range: one turn without changing grip; strength as it is at the posture given, not along the turn.
    """
    forearm = np.atleast_2d(np.asarray(forearm_nm, dtype=float))
    grip, now, end, need, angle = (
        np.broadcast_to(np.asarray(v, dtype=float), forearm.shape)
        for v in (grip_nm, turn_now_rad, turn_end_rad, needed_nm, needed_turn_rad)
    )
    able_nm, left = np.minimum(forearm, grip), end - now
    covered = ~np.isnan(able_nm + left)
    with np.errstate(invalid="ignore", divide="ignore"):
        short, weak = left < angle, able_nm < need
        margin = np.where(need > 0.0, able_nm / np.where(need > 0.0, need, 1.0), np.inf)
        weaker = np.where(forearm <= grip, FOREARM, GRIP)
    first = np.where(short, RANGE, np.where(weak, weaker, NOTHING))
    first = np.where(covered, first, NOT_COVERED).astype(np.int8)
    return Twist(
        first=first,
        able=first == NOTHING,
        torque_nm=np.where(covered, able_nm, np.nan),
        margin=np.where(covered, margin, np.nan),
        turn_left_rad=np.where(covered, left, np.nan),
    )
