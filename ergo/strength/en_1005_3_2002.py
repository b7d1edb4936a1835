"""EN 1005-3:2002+A1:2008: basic force, multipliers, reduced force limit and risk zone."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Table

Array = NDArray[np.float64]
TABLE = "en_1005_3"
ZONES = ("recommended", "not recommended", "to be avoided")


@dataclass(frozen=True)
class ForceLimit:
    """Reduced force limit along a direction [N] (NaN where not covered), its multipliers, and caveats."""

    basic_n: Array
    reduced_n: Array
    velocity: float
    frequency: float
    duration: float
    reason: str
    caveat: str

    def zone(self, force_n: Array) -> list[str]:
        """Return the risk zone of each force (P,) [N]; empty text where not covered."""
        share = np.asarray(force_n) / self.reduced_n
        return ["" if not np.isfinite(s) else ZONES[int(s > 0.5) + int(s > 0.7)] for s in np.atleast_1d(share)]


def en_1005_3_2002(pull: Array, up: Array, inward: Array, *, standing: bool, trunk_support: bool, action_s: float,
                   actions_per_minute: float, hours: float, library: Library, moving: bool = True) -> ForceLimit:  # fmt: skip
    """Return the standard's force limit along a direction, for professional use (P15 of working adults).

    Parameters
    ----------
    pull, up, inward : Array
        (P,) parts of the unit direction of the hand's force on the handle.
    standing, trunk_support : bool
        Standing takes the whole-body rows fore and aft; sitting the one-arm rows, with or without support.
    action_s, actions_per_minute, hours : float
        Time of one action [s], actions a minute, hours of such work a day.
    moving : bool
        Whether the action is an evident movement.

    Returns
    -------
    ForceLimit
        FBr = FB x mv x mf x md. Between directions an ellipsoid is laid here; the standard names single ones.

    Notes
    -----
    Valid range: up to 8 hours; actions over 3 s up to 20 a minute.
    Source: en_1005_3, tables 1 to 4, status memory.
    """
    rows = library.table(TABLE)
    kind = "arm" if not standing else "whole body"
    support = "sitting one arm, trunk support" if trunk_support else "sitting one arm, no trunk support"
    fore = "standing" if standing else support
    forces = {
        "pull": _force(rows, f"FB {kind} pull", fore),
        "push": _force(rows, f"FB {kind} push", fore),
        "up": _force(rows, "FB arm up", "sitting one arm"),
        "down": _force(rows, "FB arm down", "sitting one arm"),
        "in": _force(rows, "FB arm inward", "sitting one arm"),
        "out": _force(rows, "FB arm outward", "sitting one arm"),
    }
    total = np.zeros(np.asarray(pull).shape)
    for part, plus, minus in ((pull, "pull", "push"), (up, "up", "down"), (inward, "in", "out")):
        total = total + (part / np.where(part >= 0.0, forces[plus], forces[minus])) ** 2
    basic = 1.0 / np.sqrt(np.maximum(total, 1e-12))
    velocity = 0.8 if moving else 1.0
    frequency, reason = _frequency(rows, action_s, actions_per_minute)
    duration = _duration(rows, hours)
    if not np.isfinite(duration):
        reason = f"{hours:g} hours a day is beyond the standard's 8"
    caveat = "up, down and sideways use the sitting one-arm rows: the standard has no standing ones" if standing else ""
    return ForceLimit(basic, basic * velocity * frequency * duration, velocity, frequency, duration, reason, caveat)


def _force(rows: Table, item: str, condition: str) -> float:
    return float(rows.row(item=item, condition=condition)["professional_n"])


def _frequency(rows: Table, action_s: float, per_minute: float) -> tuple[float, str]:
    column = int(per_minute > 0.2) + int(per_minute > 2.0) + int(per_minute > 20.0)
    start = "action time <=3 s (0.05 min); <=0.2 actions/min" if column == 0 else "<=3 s; "
    names = (start, "<=3 s; 0.2-2 /min", "<=3 s; 2-20 /min", "<=3 s; >20 /min")
    if action_s > 3.0:
        names = (">3 s; <=0.2 /min", ">3 s; 0.2-2 /min", ">3 s; 2-20 /min", ">3 s; >20 /min")
    value = rows.row(item="mf", condition=names[column])["multiplier"]
    if not value:
        return np.nan, "actions longer than 3 s more than 20 times a minute are not covered"
    return float(value), ""


def _duration(rows: Table, hours: float) -> float:
    if hours > 8.0:
        return np.nan
    name = "<=1 h per day" if hours <= 1.0 else ("1-2 h" if hours <= 2.0 else "2-8 h")
    return float(rows.row(item="md", condition=name)["multiplier"])
