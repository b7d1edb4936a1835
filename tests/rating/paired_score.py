"""The score interval of a difference of paired shares, by SciPy: the oracle of the project's closed form.

For each difference D the nuisance share q is found by maximising the trinomial likelihood, not from its formula; the
ends are where the score statistic reaches the normal quantile (SciPy's brentq).
"""

import numpy as np
from scipy.optimize import brentq, minimize_scalar
from scipy.stats import norm

Z = float(norm.ppf(0.975))


def likeliest(alone, base_alone, people, d):
    """Share q served by the base alone that goes best with a difference d (then q + d by the other alone)."""
    low, high = max(0.0, -d), (1.0 - d) / 2.0

    def badness(q):
        shares, counts = np.array([q + d, q, 1.0 - 2.0 * q - d]), np.array([alone, base_alone, people - alone - base_alone])
        return -float(np.sum(np.where(counts > 0, counts * np.log(np.maximum(shares, 1e-300)), 0.0)))

    return minimize_scalar(badness, bounds=(low, high), method="bounded", options={"xatol": 1e-14}).x


def score_interval(alone, base_alone, people):
    """Low and high end of the 95 % interval of (alone - base_alone) / people."""

    def over(d):
        spread = people * (2.0 * likeliest(alone, base_alone, people, d) + d - d * d)
        return abs(alone - base_alone - people * d) - Z * np.sqrt(max(spread, 0.0))

    mean = (alone - base_alone) / people
    return brentq(over, -1.0 + 1e-9, mean - 1e-9), brentq(over, mean + 1e-9, 1.0 - 1e-9)
