"""What a sweep says: the best placements, those that nothing beats, and how much each axis matters."""

import itertools
from collections.abc import Sequence
from dataclasses import dataclass
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ergo.explore.pareto import OBJECTIVES, front

if TYPE_CHECKING:
    import pandas as pd

BINS = 8


@dataclass(frozen=True)
class Sensitivity:
    """How the served share [points of 100] follows one axis, all others running through their values.

    `swing` is the largest less the smallest mean over the axis' values; `variance_share` the part of all variance that
    lies between them (correlation ratio, 0..1); `best` the value, or the middle of the span, with the largest mean.
    """

    path: str
    swing: float
    variance_share: float
    best: Any


@dataclass(frozen=True)
class Summary:
    """Counts, and frames of placements: `best` first, `front` by served share."""

    count: int
    judged: int
    meeting: int
    refused: int
    best: "pd.DataFrame"
    front: "pd.DataFrame"
    sensitivity: tuple[Sensitivity, ...]

    def to_dict(self) -> dict[str, Any]:
        """Return the summary as plain values."""
        return {
            "count": self.count, "judged": self.judged, "meeting": self.meeting, "refused": self.refused,
            "best": plain_rows(self.best), "pareto_front": plain_rows(self.front), "objectives": dict(OBJECTIVES),
            "sensitivity": [vars(s) for s in self.sensitivity],
        }  # fmt: skip


def plain_rows(frame: "pd.DataFrame") -> list[dict[str, Any]]:
    """Return the rows of a frame as plain values, None where there is none."""
    rows = frame.astype(object).where(frame.notna(), None).to_dict("records")
    return [{str(k): v.item() if isinstance(v, np.generic) else v for k, v in row.items()} for row in rows]


def summarise(frame: "pd.DataFrame", paths: Sequence[str], count: int, *, best: int = 10) -> Summary:
    """Return what a sweep says.

    Parameters
    ----------
    frame : DataFrame
        One row a placement, as `read_store` gives it.
    paths : sequence
        The varied keys.
    count : int
        How many placements the sweep has in all.
    best : int
        How many of the best are wanted.

    Returns
    -------
    Summary
        Best: fewest ratings missed, then largest served share, then least hand force. Front: served share against
        hand travel and how far the tool moves a millimetre of the hand.
    """
    judged: Any = frame[frame["verdict"] != "no placement"]
    missed = judged["missed"].fillna("").map(lambda words: len(words.split(", ")) if words else 0)
    ranked = judged.assign(_missed=missed).sort_values(
        ["_missed", "served", "largest_demand_n", "placement"], ascending=[True, False, True, True]
    )
    on_front = front(judged[list(OBJECTIVES)].to_numpy(dtype=float), list(OBJECTIVES.values()))
    return Summary(
        count=count,
        judged=len(judged),
        meeting=int((judged["verdict"] == "meets").sum()),
        refused=len(frame) - len(judged),
        best=ranked.head(best).drop(columns="_missed"),
        front=judged[on_front].sort_values(["served", "placement"], ascending=[False, True]),
        sensitivity=tuple(sorted((_sensitivity(judged, p) for p in paths), key=lambda s: -s.variance_share)),
    )


def _sensitivity(judged: Any, path: str) -> Sensitivity:
    served, cells = judged["served"].to_numpy(dtype=float), judged[path].tolist()
    names, groups = _groups(cells)
    if not names:
        return Sensitivity(path, 0.0, 0.0, None)
    counts = np.bincount(groups, minlength=len(names))
    means = np.bincount(groups, weights=served, minlength=len(names)) / counts
    total = float(((served - served.mean()) ** 2).sum())
    between = float((counts * (means - served.mean()) ** 2).sum())
    share = min(between / total, 1.0) if total > 0.0 else 0.0
    return Sensitivity(path, float(means.max() - means.min()), share, names[int(np.argmax(means))])


def _groups(cells: list[Any]) -> tuple[list[Any], NDArray[np.int64]]:
    """Return the values of an axis and each placement's value (n,); a range of many values as the middles of a few bins."""
    names = sorted(set(cells))
    if len(names) > 2 * BINS and all(isinstance(name, (int, float)) for name in names):
        numbers = np.array(cells, dtype=float)
        edges = np.unique(np.quantile(numbers, np.linspace(0.0, 1.0, BINS + 1)))
        groups = np.clip(np.searchsorted(edges, numbers, side="right") - 1, 0, edges.size - 2)
        return [float(f"{0.5 * (a + b):.6g}") for a, b in itertools.pairwise(edges)], groups.astype(np.int64)
    place = {name: n for n, name in enumerate(names)}
    return names, np.array([place[cell] for cell in cells], dtype=np.int64)
