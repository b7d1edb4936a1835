"""What happens when the load lets go, joined from hand, body and zones."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.arm.posture import Posture
from ergo.evaluation.clearance import Gaps
from ergo.evaluation.plan import Plan
from ergo.rating.ratings import Rating, let_go
from ergo.strength.hand_capability import HandCapability

Array = NDArray[np.float64]


@dataclass(frozen=True)
class Release:
    """Let-go at every position, and at the one where it is judged."""

    rating: Rating
    safe: NDArray[np.bool_]
    at_stroke: float
    overrun_mm: Array
    toward: tuple[str, ...]
    balance: Array
    feel_n: Array
    details: Mapping[str, Any]
    tables: tuple[str, ...]
    not_covered: Mapping[str, str] = field(default_factory=dict)


def release(made: Plan, capability: HandCapability, posture: Posture, gap: Gaps) -> Release:
    """Return what a let-go does."""
    n, positions = capability.force_n.shape
    safe = np.ones(n, dtype=bool)
    rating = let_go(safe, safe, safe, made.people.women, 0.0, "none", "No let-go is judged.",
                    served_share=made.study.targets.served_share)  # fmt: skip
    nothing = np.full((positions, 3), np.nan)
    return Release(rating, safe, 0.0, nothing, ("",) * positions, nothing.copy(), np.full(positions, np.nan), {}, ())
