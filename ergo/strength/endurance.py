"""How large a share of strength can be held for a time: the published endurance curves, turned round."""

import numpy as np

from ergo.datasets import Library

TABLE = "repetition"
JOINTS = ("shoulder", "elbow", "grip")


def rohmert_1960_s(share: float, library: Library) -> float:
    """Return the holding time [s] at a share of strength; NaN below 0.15, where the curve does not hold.

    T = -90 + 126/f - 36/f^2 + 6/f^3. Source: rohmert_1960, memory.
    """
    r = library.values(TABLE)
    if share < r["rohmert_lowest_share"] or share > 1.0:
        return float("nan")
    return r["rohmert_constant_s"] + r["rohmert_1_s"] / share + r["rohmert_2_s"] / share**2 + r["rohmert_3_s"] / share**3


def frey_law_avin_2010_s(share: float, joint: str, library: Library) -> float:
    """Return the holding time [s] of a joint at a share of strength, 0.05 to 1: T = c f^e.

    Source: frey_law_avin_2010, coefficients from memory.
    """
    r = library.values(TABLE)
    return r[f"{joint}_coefficient_s"] * share ** r[f"{joint}_exponent"]


def holding_share(hold_s: float, library: Library) -> tuple[float, str]:
    """Return the largest share of strength that every joint of the arm can hold for a time, and which decides.

    Parameters
    ----------
    hold_s : float
        Holding time [s]; 0 leaves the whole strength.

    Returns
    -------
    tuple
        Share 0..1 and the curve that decides: Frey Law and Avin by joint, or Rohmert.

    Notes
    -----
    Valid range: the Rohmert curve only from a share of 0.15 (about 16 minutes); beyond that time it is left out.
    """
    if hold_s <= 0.0:
        return 1.0, ""
    r = library.values(TABLE)
    found = {}
    for joint in JOINTS:
        share = (hold_s / r[f"{joint}_coefficient_s"]) ** (1.0 / r[f"{joint}_exponent"])
        found[f"Frey Law and Avin 2010, {joint}"] = min(share, 1.0)
    shares = np.linspace(r["rohmert_lowest_share"], 1.0, 2000)
    times = np.array([rohmert_1960_s(float(s), library) for s in shares])
    if hold_s <= times[0]:
        found["Rohmert 1960"] = float(np.interp(-hold_s, -times, shares))
    name = min(found, key=lambda key: found[key])
    return found[name], name
