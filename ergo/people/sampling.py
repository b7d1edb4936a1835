"""Virtual people drawn from a population: scrambled Sobol points through a multivariate lognormal, seeded."""

import warnings

import numpy as np
from numpy.typing import NDArray

from ergo.people.dimensions import DIMENSIONS
from ergo.people.populations import SexModel

Array = NDArray[np.float64]
JOINT_FACTORS = 16
# Sobol dimensions: sizes, then age, the common strength factor, the joint factors.
WIDTH = len(DIMENSIONS) + 2 + JOINT_FACTORS


def sobol_points(count: int, seed: int, stream: int) -> Array:
    """Return scrambled Sobol points (count, WIDTH) in the open unit cube; the same for the same seed and stream."""
    from scipy.stats import qmc

    rng = np.random.default_rng([seed, stream])
    with warnings.catch_warnings():
        # A count that is no power of two loses some balance, which the stated intervals already allow for.
        warnings.simplefilter("ignore", UserWarning)
        points = qmc.Sobol(WIDTH, scramble=True, rng=rng).random(count)
    return np.clip(points, 0.5**33, 1.0 - 0.5**33)


def normal_points(points: Array) -> Array:
    """Return standard normal deviates of points in the unit cube."""
    from scipy.special import ndtri

    return ndtri(points)


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
    ln stature and ln mass are binormal; every further dimension is mean + weights . (their deviates) + spread e,
    with e correlated as the survey's residuals are.
    """
    stature = z[:, 0]
    mass = model.stature_mass * z[:, 0] + np.sqrt(1.0 - model.stature_mass**2) * z[:, 1]
    rest = z[:, 2:] @ np.linalg.cholesky(_positive(model.correlation)).T
    logs = np.empty((len(z), len(DIMENSIONS)))
    logs[:, 0] = model.mean[0] + model.sd[0] * stature
    logs[:, 1] = model.mean[1] + model.sd[1] * mass
    logs[:, 2:] = model.mean[2:] + np.column_stack([stature, mass]) @ model.weights.T + model.spread * rest
    return dict(zip(DIMENSIONS, np.exp(logs).T, strict=True))


def mass_deviate(model: SexModel, z: Array) -> Array:
    """Return the standard normal deviate of log body mass (n,)."""
    return model.stature_mass * z[:, 0] + np.sqrt(1.0 - model.stature_mass**2) * z[:, 1]


def _positive(correlation: Array) -> Array:
    """Return a shipped correlation matrix made symmetric and safely positive (it is rounded to four places)."""
    matrix = 0.5 * (correlation + correlation.T)
    values, vectors = np.linalg.eigh(matrix)
    fixed = (vectors * np.maximum(values, 1e-6)) @ vectors.T
    size = np.sqrt(np.diag(fixed))
    return fixed / np.outer(size, size)
