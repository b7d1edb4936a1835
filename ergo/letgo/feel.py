"""What the hand still feels of the tool: the smallest change of tool force that it would notice."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library
from ergo.frames import Array
from ergo.letgo.parameters import rows

TABLE = "letgo_feel"
NAMES = ("force_weber", "lowest_force_n", "highest_force_n")
# A screw with a forward efficiency of one half or less cannot be driven back by its load.
SELF_LOCKING_EFFICIENCY = 0.5


def parameter_names() -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that feel rests on."""
    return tuple((TABLE, name) for name in NAMES)


@dataclass(frozen=True)
class Touch:
    """How finely a hand tells forces apart.

    weber : smallest noticeable change over the force itself
    lowest_n, highest_n : forces between which that share was shown [N]

    Source: table `letgo_feel`.
    """

    weber: float
    lowest_n: float
    highest_n: float

    @classmethod
    def from_library(cls, library: Library) -> "Touch":
        """Return the touch of table `letgo_feel`; a DataError if a row is missing."""
        values = rows(library, TABLE, NAMES, "what the hand still feels of the tool").values()
        return cls(values["force_weber"], values["lowest_force_n"], values["highest_force_n"])


@dataclass(frozen=True)
class Feel:
    """What the hand feels at each position: arrays (P,).

    load_share : part of the hand force that is owed to the load alone, the rest is friction and weight
    smallest_share : smallest noticeable change of the tool force, over the tool force; infinite where none is
    smallest_n : the same [N] at the tool, or [N m] on a shaft
    felt : False where the load has no part in the hand force, or no change short of all of it is noticed
    covered : False where the hand force lies outside the range in which the share of touch was shown
    """

    load_share: Array
    smallest_share: Array
    smallest_n: Array
    felt: NDArray[np.bool_]
    covered: NDArray[np.bool_]

    def reasons(self, touch: Touch) -> tuple[str, ...]:
        """Return one sentence a position on what is not felt or not covered, empty where neither holds."""
        said = []
        for felt, covered in zip(self.felt, self.covered, strict=True):
            if not covered:
                said.append(
                    f"not covered: touch was measured from {touch.lowest_n:g} to {touch.highest_n:g} N at the hand"
                )
            else:
                said.append("" if felt else "no change of the tool force short of losing it is noticed")
        return tuple(said)


def smallest_noticed(
    hand_force_n: ArrayLike,
    friction_n: ArrayLike,
    weight_n: ArrayLike,
    load_n: ArrayLike,
    touch: Touch,
) -> Feel:
    """Return the smallest change of tool force that the hand on a lever would notice, at P positions.

    Parameters
    ----------
    hand_force_n : (P,) hand force [N]
    friction_n, weight_n : (P,) its parts owed to friction, and to lever weight and return spring [N]
    load_n : (P,) tool force [N], or torque on a shaft [N m]
    touch : how finely the hand tells forces apart

    Returns
    -------
    Feel

    Valid range: hand forces inside the range of `touch`; slow changes; friction is taken not to change with
    the load, so what blunts is counted in full.
    Equation: smallest change = weber x hand force / (load's part of the hand force) x tool force.
    Source: pang_tan_durlach_1991; rule worked out from it.
    """
    hand, rubs, weighs, load = np.broadcast_arrays(
        *(np.atleast_1d(np.asarray(v, dtype=float)) for v in (hand_force_n, friction_n, weight_n, load_n))
    )
    return _feel(hand, hand - rubs - weighs, load, touch)


def screw_hand_force_n(load_n: ArrayLike, lead_m: float, wheel_radius_m: float, efficiency: float) -> Array:
    """Return the force at the rim of a feed screw's wheel (P,) [N]: load x lead / (2 pi radius efficiency).

    Parameters
    ----------
    load_n : (P,) tool force [N]
    lead_m, wheel_radius_m : lead of the screw and radius of its wheel [m], above zero
    efficiency : of the screw when driven by the wheel, above 0 and up to 1
    """
    return np.asarray(load_n, dtype=float) * lead_m / (2.0 * np.pi * wheel_radius_m * efficiency)


def screw_noticed(load_n: ArrayLike, lead_m: float, wheel_radius_m: float, efficiency: float, touch: Touch) -> Feel:
    """Return the smallest change of tool force that the hand on a feed screw's wheel would notice.

    Parameters
    ----------
    load_n, lead_m, wheel_radius_m, efficiency
        As in `screw_hand_force_n`.
    touch : how finely the hand tells forces apart

    Returns
    -------
    Feel
        The load's part is what the load alone would put on the rim by driving the screw back; a self-locking
        screw passes nothing back, so the hand gets no cue.

    Valid range: as for `smallest_noticed`.
    Equation: load share = 2 - 1 / efficiency, the efficiency of driving back; 0 at one half and below.
    Source: common_practice (power screws).
    """
    hand = np.atleast_1d(screw_hand_force_n(load_n, lead_m, wheel_radius_m, efficiency))
    back = max(2.0 - 1.0 / efficiency, 0.0) if efficiency > SELF_LOCKING_EFFICIENCY else 0.0
    return _feel(hand, back * hand, np.broadcast_to(np.asarray(load_n, dtype=float), hand.shape), touch)


def _feel(hand: Array, part: Array, load: Array, touch: Touch) -> Feel:
    works = (hand > 0.0) & (part > 0.0)
    share = np.where(works, part, 0.0) / np.where(hand > 0.0, hand, 1.0)
    change = touch.weber / np.where(works, share, 1.0)
    smallest = np.where(works, change, np.inf)
    return Feel(
        load_share=share,
        smallest_share=smallest,
        smallest_n=np.where(works, change * np.abs(load), np.inf),
        felt=smallest < 1.0,
        covered=(hand >= touch.lowest_n) & (hand <= touch.highest_n),
    )
