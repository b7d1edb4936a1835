"""How strength falls with age, as a share of a young adult's."""

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library

Array = NDArray[np.float64]
TABLE = "age_strength"
YOUNGEST, OLDEST = 16.0, 80.0


def age_strength_share(women: NDArray[np.bool_], age_years: Array, library: Library) -> Array:
    """Return the share of a young adult's strength that is left at an age.

    Parameters
    ----------
    women : array
        (n,) whether a woman.
    age_years : Array
        (n,) age [years], 16 to 80; the line to 75 years is carried on to 80.
    library : Library
        Holds `age_strength`.

    Returns
    -------
    Array
        (n,) 1 up to the age at which the fall begins, then a straight line through the share at 75 years.

    Raises
    ------
    ValueError
        Outside 16 to 80 years, which no row covers.

    Notes
    -----
    Source: danneskiold_samsoe_2009, abstract: men fall linearly from 25 years to 54-89 % at 75, women from about
    40 years to 48-92 %; the middle of each range is used.
    """
    if np.any((age_years < YOUNGEST) | (age_years > OLDEST)):
        msg = f"strength by age is not covered below {YOUNGEST:g} or above {OLDEST:g} years"
        raise ValueError(msg)
    rows = library.values(TABLE)
    start = np.where(women, rows["women_fall_from_years"], rows["men_fall_from_years"])
    left = np.where(women, rows["women_share_at_75"], rows["men_share_at_75"])
    return 1.0 - (1.0 - left) * np.maximum(age_years - start, 0.0) / (75.0 - start)
