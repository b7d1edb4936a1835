"""Virtual people drawn from a population: scrambled Sobol points through a multivariate lognormal, seeded."""

import warnings

import numpy as np
from numpy.typing import NDArray

from ergo.people.dimensions import COMPOSED, DIMENSIONS, composed
from ergo.people.populations import SexModel

Array = NDArray[np.float64]
JOINT_FACTORS = 16
BITS = 30  # binary digits of a Sobol coordinate
# Sobol dimensions: sizes, then age, the common strength factor, the joint factors.
AGE, COMMON, JOINTS = len(DIMENSIONS), len(DIMENSIONS) + 1, len(DIMENSIONS) + 2
WIDTH = JOINTS + JOINT_FACTORS


def sobol_points(count: int, seed: int, stream: int) -> Array:
    """Return scrambled Sobol points (count, WIDTH) in the open unit cube.

    Parameters
    ----------
    count : int
        Points; the first of a longer draw are those of a shorter one.
    seed, stream : int
        The same two give the same points; each sex has its own stream.

    Returns
    -------
    Array
        Each coordinate in the middle of its cell of width 2^-30, so that none is 0 or 1.

    Notes
    -----
    The general-purpose generator of SciPy: linear matrix scramble with a digital shift.
    """
    from scipy.stats import qmc

    if count == 0:
        return np.empty((0, WIDTH))
    with warnings.catch_warnings():
        # A count that is no power of two loses some balance, which the stated intervals already allow for.
        warnings.simplefilter("ignore", UserWarning)
        points = qmc.Sobol(WIDTH, scramble=True, bits=BITS, rng=np.random.default_rng([seed, stream])).random(count)
    return points + 0.5 ** (BITS + 1)


def normal_points(points: Array) -> Array:
    """Return the standard normal deviates of points in the open unit cube."""
    from scipy.special import ndtri

    return ndtri(points)


def mass_deviate(model: SexModel, z: Array) -> Array:
    """Return the standard normal deviate (n,) of log body mass: r z0 + sqrt(1 - r^2) z1."""
    return model.stature_mass * z[:, 0] + np.sqrt(1.0 - model.stature_mass**2) * z[:, 1]


def log_size(deviate: Array, median: Array | float, below: Array | float, above: Array | float) -> Array:
    """Return a log body size from its standard normal deviate: median + deviate x the SD of its side."""
    return median + deviate * np.where(deviate < 0.0, below, above)


def draw_sizes(model: SexModel, z: Array) -> dict[str, Array]:
    """Return body sizes [mm, kg] of people from standard normal deviates.

    Parameters
    ----------
    model : SexModel
        One sex of a population.
    z : Array
        (n, D) independent standard normals.

    Returns
    -------
    dict
        Every dimension (n,).

    Notes
    -----
    The deviates of ln stature and ln mass are binormal, and e = factor . z is correlated as the survey's residuals
    are. A further dimension that the table gives has the deviate weights . (theirs) + share e and the table's own
    median and spread; one that it does not give is intercept + slopes . (ln stature, ln mass) + residual e.
    Dimensions that follow from others follow from the drawn ones, unless the table gives them.
    """
    first = np.column_stack([z[:, 0], mass_deviate(model, z)])
    rest = z[:, 2:] @ model.factor.T
    logs = log_size(first, model.median[:2], model.below[:2], model.above[:2])
    own = log_size(first @ model.weights.T + model.share * rest, model.median[2:], model.below[2:], model.above[2:])
    followed = model.intercept + logs @ model.slopes.T + model.residual * rest
    sizes = np.exp(np.column_stack([logs, np.where(model.given, own, followed)]))
    drawn = dict(zip(DIMENSIONS, sizes.T, strict=True))
    made = composed(drawn, model.thumb_share)
    return {**drawn, **{name: made[name] for name in COMPOSED if name not in model.stated}}
