"""95 % intervals of shares and means from the operators drawn."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Z = 1.959963984540054  # standard normal quantile of 0.975


def share_interval(hit: NDArray[np.bool_], women: NDArray[np.bool_]) -> tuple[float, float, float]:
    """Return a share and its 95 % interval, women and men as strata of fixed size.

    Parameters
    ----------
    hit, women : arrays
        (n,) whether the person counts, and whether a woman.

    Returns
    -------
    tuple
        Share, low, high in 0..1.

    Notes
    -----
    Each stratum by Wilson's score interval; the strata's half widths are joined as the square root of the sum of
    their squares, each side apart (Newcombe's way of joining intervals). Exact for one stratum.
    """
    total = hit.size
    share, below, above = 0.0, 0.0, 0.0
    for chosen in (women, ~women):
        n = int(chosen.sum())
        if n == 0:
            continue
        weight, p = n / total, float(hit[chosen].mean())
        low, high = wilson(p, n)
        share += weight * p
        below += (weight * (p - low)) ** 2
        above += (weight * (high - p)) ** 2
    return share, max(share - float(np.sqrt(below)), 0.0), min(share + float(np.sqrt(above)), 1.0)


def wilson(p: float, n: int) -> tuple[float, float]:
    """Return Wilson's 95 % score interval of a share `p` of `n`."""
    middle = (p + Z * Z / (2 * n)) / (1 + Z * Z / n)
    half = Z / (1 + Z * Z / n) * np.sqrt(p * (1 - p) / n + Z * Z / (4 * n * n))
    return float(max(middle - half, 0.0)), float(min(middle + half, 1.0))


def mean_interval(values: Array, women: NDArray[np.bool_]) -> tuple[float, float, float]:
    """Return the mean of (n,) values and its 95 % interval, women and men as strata of fixed size."""
    total, mean, variance = values.size, 0.0, 0.0
    for chosen in (women, ~women):
        n = int(chosen.sum())
        if n == 0:
            continue
        weight = n / total
        mean += weight * float(values[chosen].mean())
        variance += weight**2 * float(values[chosen].var(ddof=1) if n > 1 else 0.0) / n
    half = Z * float(np.sqrt(variance))
    return mean, mean - half, mean + half


def paired_interval(other: NDArray[np.bool_], base: NDArray[np.bool_]) -> tuple[float, float, float]:
    """Return mean, low and high (95 %) of a difference of two shares on the same n people.

    Parameters
    ----------
    other, base : arrays
        (n,) whether the person counts, n at least 1.

    Notes
    -----
    With b of n for the other alone and c for the base alone: mean d = (b - c) / n, and the score interval of Tango
    (1998) for paired shares, recalled: all D with |b - c - n D| <= z sqrt(n (2 q + D (1 - D))), where q, the share for
    the base alone that goes best with D, is (sqrt(w^2 - 8 n v) - w) / (4 n), w = -b - c + (2 n - b + c) D,
    v = -c D (1 - D). It holds its 95 % where few people differ, where mean and variance alone would say 0 to 0.
    """
    n = other.size
    alone, base_alone = int(np.sum(other & ~base)), int(np.sum(base & ~other))
    mean = (alone - base_alone) / n
    low = _score_end(alone, base_alone, n, mean, -1.0)
    return mean, low, _score_end(alone, base_alone, n, mean, 1.0)


def _score_end(alone: int, base_alone: int, n: int, mean: float, end: float) -> float:
    """Return the end (-1 or 1) of the score interval, by halving between the mean and that end."""
    inside, outside = mean, end
    for _ in range(60):
        middle = 0.5 * (inside + outside)
        if _within(alone, base_alone, n, middle):
            inside = middle
        else:
            outside = middle
    return inside


def _within(b: int, c: int, n: int, d: float) -> bool:
    w, v = -b - c + (2 * n - b + c) * d, -c * d * (1.0 - d)
    q = (np.sqrt(max(w * w - 8.0 * n * v, 0.0)) - w) / (4.0 * n)
    spread = n * (2.0 * q + d * (1.0 - d))
    return abs(b - c - n * d) <= Z * np.sqrt(max(spread, 0.0))
