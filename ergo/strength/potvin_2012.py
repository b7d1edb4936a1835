"""Potvin 2012: the largest acceptable effort from the duty cycle."""

import numpy as np

from ergo.datasets import Library

TABLE = "repetition"


def potvin_2012(duty_cycle: float, library: Library) -> tuple[float, str]:
    """Return the acceptable share of strength, and why not where it is not covered (share 0).

    Parameters
    ----------
    duty_cycle : float
        Share of the time spent in effort, above 0 and up to 1.

    Returns
    -------
    tuple
        Share 0..1 and an empty reason; or 0 and the reason.

    Notes
    -----
    MAE = 1 - (DC - 1/28800)^0.24. Valid range: 1/28800 to 1; only about 6 % of its data lie at 0.5 and over.
    Source: potvin_2012, formula from memory.
    """
    rows = library.values(TABLE)
    if duty_cycle > 1.0:
        return 0.0, f"the strokes take {duty_cycle:.2f} times the time there is"
    beyond = max(duty_cycle - rows["potvin_offset"], 0.0)
    return float(1.0 - np.power(beyond, rows["potvin_exponent"])), ""
