"""What an evaluation found: frozen, with the units in the names, as JSON and as tables."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import TYPE_CHECKING, Any

import numpy as np
from numpy.typing import NDArray

from ergo.rating.ratings import Rating

if TYPE_CHECKING:
    import pandas as pd

Array = NDArray[np.float64]
RATING_NAMES = ("direction", "reach", "force", "posture", "clearance", "let_go", "served")
CAPABILITY_NAMES = ("women_p05", "women_p50", "men_p05", "men_p50", "men_p99")


@dataclass(frozen=True)
class StrokeTable:
    """Everything that is known position by position; arrays (P,) unless said otherwise, edge units.

    handle_mm, work_dir : (P, 3). `pull`, `up`, `inward` : parts of the work direction seen from the trunk.
    capability_n, allowed_n : percentile name -> (P,) [N], before and after repetition.
    governing : P mappings limit -> share of operators, strongest posture.
    lost : P mappings limit -> share of operators not served at that position.
    table_n, en_1005_3_n, overrun_mm, gap_mm, feel_n : NaN where not covered or not asked; `not_covered` says why.
    overrun_mm : (P, 3) P5, P50, P95. balance : (P, 3) shares kept, one step, thrown.
    """

    stroke: Array
    lever_deg: Array
    handle_mm: Array
    work_dir: Array
    demand_n: Array
    slide_mm: Array
    ratio: Array
    side_force_n: Array
    load_n: Array
    friction_n: Array
    weight_n: Array
    pull: Array
    up: Array
    inward: Array
    capability_n: Mapping[str, Array]
    allowed_n: Mapping[str, Array]
    served_share: Array
    reach_share: Array
    governing: tuple[Mapping[str, float], ...]
    lost: tuple[Mapping[str, float], ...]
    table_n: Array
    en_1005_3_n: Array
    overrun_mm: Array
    overrun_toward: tuple[str, ...]
    balance: Array
    gap_mm: Array
    feel_n: Array
    not_covered: Mapping[str, str] = field(default_factory=dict)


@dataclass(frozen=True)
class Person:
    """One representative operator at every position, ready to be drawn; points (P, 3) [mm]."""

    name: str
    women: bool
    stature_mm: float
    mass_kg: float
    served: bool
    points_mm: Mapping[str, Array]
    trunk_deg: Array
    elbow_deg: Array
    capability_n: Array


@dataclass(frozen=True)
class PeopleTable:
    """One row an operator, arrays (n,): who is served, who is lost, where and to what."""

    women: NDArray[np.bool_]
    age_years: Array
    stature_mm: Array
    mass_kg: Array
    strength_share: Array
    stand_x_mm: Array
    stand_y_mm: Array
    margin: Array
    worst_stroke: Array
    limit: tuple[str, ...]
    served: NDArray[np.bool_]


@dataclass(frozen=True)
class Results:
    """The answer to one study (or one of its variants)."""

    version: str
    study: Mapping[str, Any]
    variant: str
    people: Mapping[str, Any]
    ratings: Mapping[str, Rating]
    stroke: StrokeTable
    persons: tuple[Person, ...]
    crowd: PeopleTable
    verdict: str
    reasons: tuple[str, ...]
    cautions: tuple[str, ...]
    sources: tuple[Mapping[str, str], ...]
    details: Mapping[str, Any]
    manifest: Mapping[str, Any]

    @property
    def meets(self) -> bool:
        """Whether every rated target is met."""
        return self.verdict == "meets"

    def to_dict(self) -> dict[str, Any]:
        """Return the content of `results.json`, plain numbers and text, None where there is no number."""
        return {
            "pullward": self.version,
            "study": _plain(self.study),
            "variant": self.variant,
            "people": _plain(self.people),
            "ratings": {name: rating_row(r) for name, r in self.ratings.items()},
            "stroke": [self._position(p) for p in range(self.stroke.stroke.size)],
            "verdict": self.verdict,
            "reasons": list(self.reasons),
            "cautions": list(self.cautions),
            "sources": [dict(s) for s in self.sources],
            "details": _plain(self.details),
            "manifest": _plain(self.manifest),
        }

    def _position(self, p: int) -> dict[str, Any]:
        s = self.stroke
        simple = ("stroke", "lever_deg", "demand_n", "slide_mm", "ratio", "side_force_n", "load_n", "friction_n",
                  "weight_n", "pull", "up", "inward", "served_share", "reach_share", "table_n", "en_1005_3_n",
                  "gap_mm", "feel_n")  # fmt: skip
        row: dict[str, Any] = {name: _plain(getattr(s, name)[p]) for name in simple}
        row["handle_mm"], row["work_dir"] = _plain(s.handle_mm[p]), _plain(s.work_dir[p])
        row["capability_n"] = {name: _plain(v[p]) for name, v in s.capability_n.items()}
        row["allowed_n"] = {name: _plain(v[p]) for name, v in s.allowed_n.items()}
        row["governing"], row["lost"] = _plain(s.governing[p]), _plain(s.lost[p])
        row["overrun_mm"] = dict(zip(("p05", "p50", "p95"), _plain(s.overrun_mm[p]), strict=True))
        row["overrun_toward"] = s.overrun_toward[p]
        row["balance"] = dict(zip(("kept", "step", "thrown"), _plain(s.balance[p]), strict=True))
        return row

    def _repr_html_(self) -> str:
        """Return the results for a notebook; the report writes them, and is loaded only then."""
        import importlib

        return str(importlib.import_module("ergo.report.html").results_html(self))

    def stroke_frame(self) -> "pd.DataFrame":
        """Return the stroke as a table, one row a position, units in the column names."""
        import pandas as pd

        rows = [self._position(p) for p in range(self.stroke.stroke.size)]
        return pd.DataFrame([{k: v for name, value in r.items() for k, v in _flatten(name, value)} for r in rows])

    def ratings_frame(self) -> "pd.DataFrame":
        """Return the ratings as a table, one row a rating."""
        import pandas as pd

        return pd.DataFrame([{"rating": n, **rating_row(r)} for n, r in self.ratings.items()])

    def people_frame(self) -> "pd.DataFrame":
        """Return the operators as a table, one row a person."""
        import pandas as pd

        return pd.DataFrame({name: getattr(self.crowd, name) for name in PeopleTable.__dataclass_fields__})


def rating_row(rating: Rating) -> dict[str, Any]:
    """Return a rating as plain values."""
    names = ("value", "low", "high", "target", "met", "worst_stroke", "cause", "reason")
    return {name: _plain(getattr(rating, name)) for name in names}


def _flatten(name: str, value: Any) -> list[tuple[str, Any]]:
    """Return nested cells as flat ones: x, y, z of a vector, and `name_key` of a mapping."""
    if isinstance(value, dict):
        return [(f"{name}_{key}", v) for key, v in value.items()]
    if isinstance(value, list):
        return [(f"{name}_{axis}", v) for axis, v in zip("xyz", value, strict=True)]
    return [(name, value)]


def _plain(value: Any) -> Any:
    """Return numbers as JSON has them: rounded to ten significant digits, None for what is not a number."""
    if isinstance(value, Mapping):
        return {str(k): _plain(v) for k, v in value.items()}
    if isinstance(value, np.ndarray):
        return [_plain(v) for v in value.tolist()]
    if isinstance(value, (list, tuple)):
        return [_plain(v) for v in value]
    if isinstance(value, (bool, np.bool_)):
        return bool(value)
    if isinstance(value, (int, np.integer)):
        return int(value)
    if isinstance(value, (float, np.floating)):
        return float(f"{float(value):.10g}") if np.isfinite(value) else None
    return value
