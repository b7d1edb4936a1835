"""What is kept of one placement: verdict, ratings, where it is worst and why, and what it costs in travel and force."""

import math
from collections import OrderedDict
from typing import Any

import numpy as np

from ergo.datasets import library
from ergo.errors import PullwardError
from ergo.evaluation.plan import people_of
from ergo.evaluation.results import RATING_NAMES, Results
from ergo.evaluation.run import evaluate
from ergo.people.operators import Operators
from ergo.study.model import Study

# Column -> SQLite type; the order is that of the store and of every export.
COLUMNS: dict[str, str] = {
    "verdict": "TEXT",
    "problem": "TEXT",
    **{f"{name}{end}": "REAL" for name in RATING_NAMES for end in ("", "_low", "_high")},
    "missed": "TEXT",
    "worst_stroke": "REAL",
    "cause": "TEXT",
    "largest_demand_n": "REAL",
    "hand_travel_mm": "REAL",
    "tool_mm_per_hand_mm": "REAL",
    "feel_n": "REAL",
    "gap_mm": "REAL",
}
Outcome = dict[str, Any]
_KEPT_PEOPLE = 4
_people: OrderedDict[str, Operators] = OrderedDict()


def people_for(study: Study) -> Operators:
    """Return the study's people; drawn once for all placements that ask for the same ones."""
    key = f"{study.folder}|{study.operators.model_dump_json()}"
    if key not in _people:
        _people[key] = people_of(study, library())
        while len(_people) > _KEPT_PEOPLE:
            _people.popitem(last=False)
    return _people[key]


def judge_placement(study: Study) -> Outcome:
    """Evaluate one placement and return what is kept of it; a placement that is no machine says why instead."""
    try:
        return outcome_of(evaluate(study, operators=people_for(study)))
    except PullwardError as error:
        return refused(str(error))


def refused(problem: str) -> Outcome:
    """Return the outcome of a placement that cannot be judged."""
    return {**dict.fromkeys(COLUMNS), "verdict": "no placement", "problem": problem}


def outcome_of(results: Results) -> Outcome:
    """Return what is kept of an evaluation.

    Parameters
    ----------
    results : Results
        As evaluated.

    Returns
    -------
    dict
        By column: ratings 0..100 with 95 % interval; `missed` the ratings below target; `worst_stroke` and `cause`
        of the rating that misses its target by most (of `served` where none does); largest demand [N]; hand travel
        over the whole stroke [mm]; `tool_mm_per_hand_mm` how far the tool moves a millimetre of the hand at its
        coarsest (linkage `shaft`: 1/m, see `ratio`); `feel_n` the smallest change of tool force that is felt, where
        it is least felt [N]; smallest gap to a zone [mm]. None where not covered.
    """
    stroke, ratings = results.stroke, results.ratings
    short = [name for name in RATING_NAMES if not ratings[name].met]
    worst = ratings[min(short, key=lambda name: ratings[name].value - ratings[name].target)] if short else ratings["served"]
    found: Outcome = {"verdict": results.verdict, "problem": None}
    for name in RATING_NAMES:
        rating = ratings[name]
        found |= {name: _number(rating.value), f"{name}_low": _number(rating.low), f"{name}_high": _number(rating.high)}
    found["missed"] = ", ".join(name.replace("_", "-") for name in short)
    found["worst_stroke"], found["cause"] = _number(worst.worst_stroke), worst.cause
    found["largest_demand_n"] = _extreme(stroke.demand_n, np.max)
    found["hand_travel_mm"] = _number(np.linalg.norm(np.diff(stroke.handle_mm, axis=0), axis=1).sum())
    found["tool_mm_per_hand_mm"] = _extreme(np.abs(stroke.ratio), np.max)
    found["feel_n"] = _extreme(stroke.feel_n, np.max)
    found["gap_mm"] = _extreme(stroke.gap_mm, np.min)
    return found


def _number(value: Any) -> float | None:
    """Return a number as the store holds it: ten significant digits as in `results.json`, None where there is none."""
    return float(f"{float(value):.10g}") if math.isfinite(value) else None


def _extreme(values: np.ndarray, pick: Any) -> float | None:
    finite = values[np.isfinite(values)]
    return _number(pick(finite)) if finite.size else None
