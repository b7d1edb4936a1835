"""Many placements from the board: one key varied between two ends, each placement judged as the engine comes free."""

from collections.abc import Iterator
from typing import Any

import numpy as np

from ergo.board.controls import control_paths, inner_paths, label, window
from ergo.board.draft import draft_of, problems_by_field, set_at, value_at
from ergo.board.jobs import Job
from ergo.board.judge import DRAGGED_COUNT, Judge, fewer_operators
from ergo.board.store import Work
from ergo.errors import PullwardError
from ergo.evaluation.results import Results, rating_row
from ergo.study.model import Study

FEWEST_STEPS, MOST_STEPS = 2, 60
MOST_FREE = 6  # keys that a suggestion may change at once
SUGGESTION_TRIALS = 120


def keys_to_vary(data: dict[str, Any]) -> dict[str, str]:
    """Return every numeric key of a study, by its path, as it is called on the screen."""
    found: dict[str, str] = {}
    for path, row in control_paths(data).items():
        if row["kind"] not in ("number", "point") or row["section"] in ("study", "targets") or row["low"] is None:
            continue
        for inner in inner_paths(path, row, data):
            if isinstance(value_at(data, inner), (int, float)):
                found[inner] = f"{row['section']}: {label(row)}{_part(inner)}"
    return found


def free_of(data: dict[str, Any]) -> list[str]:
    """Return the keys that a study sets free, or the lever's length where it sets none free."""
    known = keys_to_vary(data)
    targets = data.get("targets")
    free = targets.get("free") if isinstance(targets, dict) else None
    found = [path for path in free if path in known] if isinstance(free, dict) else []
    return found[:MOST_FREE] or [path for path in ("lever.length_mm",) if path in known]


def _part(path: str) -> str:
    return {"[0]": ", right", "[1]": ", away", "[2]": ", up"}.get(path[-3:], "")


def values_between(low: float, high: float, count: int) -> list[float]:
    """Return `count` evenly spaced values from `low` to `high`, rounded to what a drawing states."""
    count = int(np.clip(count, FEWEST_STEPS, MOST_STEPS))
    return [float(f"{v:.6g}") for v in np.linspace(low, high, count)]


def sweep(job: Job, judge: Judge, work: Work, data: dict[str, Any], path: str, values: list[float]) -> int:
    """Judge the study at each value, adding a row to the job as each is answered; return how many were judged."""
    judged = 0
    for n, value in enumerate(values):
        job.tell(n / len(values), f"{n} of {len(values)} judged")
        row: dict[str, Any] = {"value": value}
        draft = draft_of(set_at(data, path, value), work.files, work.name)
        if draft.good is None:
            row["problem"] = "; ".join(f"{w}: {t}" for w, t in problems_by_field(draft.problems).items())
        else:
            try:
                results = judge.lend(fewer_operators(draft.good, min(draft.good.operators.count, DRAGGED_COUNT)), job.tell_only)
            except PullwardError as error:
                row["problem"] = str(error)
            else:
                row.update(row_of(results))
                judged += 1
        job.rows.append(row)
    return judged


def free_bounds(study: Study, paths: list[str]) -> dict[str, tuple[float, float]]:
    """Return the bounds between which keys may change: those the study sets free, else the window of their slider."""
    data, found = study.content(), {}
    rows = control_paths(data)
    for path in paths[:MOST_FREE]:
        row = rows.get(path) or rows.get(path.rpartition("[")[0])
        if path in study.targets.free:
            found[path] = study.targets.free[path]
        elif row is not None:
            low, high, _ = window(row, value_at(data, path))
            found[path] = (low, high)
    return found


def suggestion(job: Job, judge: Judge, study: Study, paths: list[str]) -> dict[str, Any]:
    """Look for the smallest changes of some keys that meet every target; each proposal becomes a row when it is confirmed."""
    from ergo.explore.suggest import suggest

    few = fewer_operators(study, min(study.operators.count, DRAGGED_COUNT))
    found = suggest(
        few, free=free_bounds(study, paths), trials=SUGGESTION_TRIALS, judge=lambda s: judge.lend(s, job.tell_only),
        tell=job.tell, show=lambda proposal: job.rows.append(proposal.to_dict()),
    )  # fmt: skip
    return found.to_dict()


def row_of(results: Results) -> dict[str, Any]:
    """Return what a placement's row shows."""
    return {
        "verdict": results.verdict,
        "count": int(results.crowd.served.size),
        "ratings": {name: rating_row(r) for name, r in results.ratings.items()},
    }


def best(rows: list[dict[str, Any]]) -> Iterator[int]:
    """Yield the rows that meet every target; where none does, those that serve most."""
    judged = [n for n, r in enumerate(rows) if "ratings" in r]
    meeting = [n for n in judged if rows[n]["verdict"] == "meets"]
    if meeting:
        yield from meeting
    elif judged:
        most = max(rows[n]["ratings"]["served"]["value"] or 0.0 for n in judged)
        yield from (n for n in judged if rows[n]["ratings"]["served"]["value"] == most)
