"""The share of strength that a job leaves: repetition by Potvin 2012, holding by the endurance curves."""

from dataclasses import dataclass

from ergo.datasets import Library
from ergo.strength.endurance import holding_share
from ergo.strength.potvin_2012 import potvin_2012


@dataclass(frozen=True)
class Repetition:
    """Share of strength left, 0..1, the duty cycle, what decides, and why not where it is not covered."""

    share: float
    duty_cycle: float
    governs: str
    reason: str


def repetition(*, strokes_per_minute: float, stroke_s: float, hold_s: float, hours_per_shift: float,
               library: Library) -> Repetition:  # fmt: skip
    """Return what repetition and holding leave of the strength.

    Parameters
    ----------
    strokes_per_minute, stroke_s, hold_s : float
        Strokes a minute, time of a loaded stroke and time it is held at its largest [s].
    hours_per_shift : float
        Hours of such work in a shift; the duty cycle is taken within that work, so that it does not enter here
        (EN 1005-3 counts it).

    Returns
    -------
    Repetition
        The smaller of Potvin's share and the holding share; at a duty cycle over 1 nothing is left.
    """
    duty = strokes_per_minute * (stroke_s + hold_s) / 60.0
    acceptable, reason = potvin_2012(duty, library)
    held, curve = holding_share(hold_s, library)
    if held < acceptable:
        return Repetition(held, duty, curve, reason)
    return Repetition(acceptable, duty, "Potvin 2012", reason)
