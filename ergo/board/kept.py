"""Placements that were kept: what they rated, and how they differ on the same people."""

import hashlib
from typing import Any

import numpy as np

from ergo.board.store import MOST_KEPT, Kept, Work, new_key
from ergo.evaluation.results import RATING_NAMES, Results, rating_row
from ergo.explore.compare import Difference, paired_difference

LONGEST_NOTE = 400
LONGEST_VALUE = 40


def keep(work: Work, results: Results, data: dict[str, Any], note: str) -> Kept:
    """Keep a placement with a note; the oldest is let go when there are too many."""
    with work.lock:
        made = Kept(new_key()[:12], note[:LONGEST_NOTE], work.name, data, summary_of(results))
        work.kept.append(made)
        del work.kept[: max(0, len(work.kept) - MOST_KEPT)]
        work.save()
    return made


def summary_of(results: Results) -> dict[str, Any]:
    """Return what stays of a placement's results: ratings, and who was served among which people."""
    served = np.asarray(results.crowd.served, dtype=bool)
    people = np.ascontiguousarray(results.crowd.stature_mm, dtype=float).tobytes()
    s = results.stroke
    return {
        "ratings": {name: rating_row(r) for name, r in results.ratings.items()},
        "verdict": results.verdict,
        "variant": results.variant,
        "count": int(served.size),
        "people": hashlib.sha256(people).hexdigest()[:16],
        "served": np.packbits(served).tobytes().hex(),
        "hand_travel_mm": float(np.linalg.norm(np.diff(s.handle_mm, axis=0), axis=1).sum()),
        "most_force_n": float(np.nanmax(s.demand_n)) if np.isfinite(s.demand_n).any() else None,
    }


def difference_of(first: dict[str, Any], second: dict[str, Any], name: str = "") -> Difference | None:
    """Return by how much the second serves more of the same people, with its 95 % interval.

    Parameters
    ----------
    first, second : dict
        Summaries of two kept placements.
    name : str
        What the second is called.

    Returns
    -------
    Difference [points], or None when the two were not judged on the same people.
    """
    if first["people"] != second["people"] or first["count"] != second["count"]:
        return None
    return paired_difference(name, served_of(second), served_of(first))


def served_of(summary: dict[str, Any]) -> np.ndarray:
    """Return who is served (n,) in a summary."""
    packed = np.frombuffer(bytes.fromhex(summary["served"]), dtype=np.uint8)
    return np.unpackbits(packed, count=summary["count"]).astype(bool)


def changes(first: dict[str, Any], second: dict[str, Any]) -> dict[str, Any]:
    """Return the dotted keys, and the second's values, in which two studies' data differ; titles and notes aside."""
    a, b = _flat("", first), _flat("", second)
    skipped = ("study.", "variants")
    return {k: b.get(k) for k in sorted(a.keys() | b.keys()) if a.get(k) != b.get(k) and not k.startswith(skipped)}


def changes_in_words(first: dict[str, Any], second: dict[str, Any]) -> str:
    """Return what differs in one line."""
    found = changes(first, second)
    return ", ".join(f"{k} {_shown(v)}" for k, v in found.items()) or "nothing"


def axes_of(kept: list[Kept]) -> dict[str, list[float | None]]:
    """Return what the trade chart can be drawn over: ratings and what differs between the placements, in figures."""
    found: dict[str, list[float | None]] = {}
    for name in RATING_NAMES:
        found[name.replace("_", "-")] = [k.summary["ratings"].get(name, {}).get("value") for k in kept]
    found["hand travel, mm"] = [k.summary["hand_travel_mm"] for k in kept]
    found["largest force, N"] = [k.summary["most_force_n"] for k in kept]
    flat = [_flat("", k.data) for k in kept]
    for key in sorted(set().union(*flat)) if flat else ():
        values = [f.get(key) for f in flat]
        if len({str(v) for v in values}) > 1 and all(isinstance(v, (int, float)) for v in values):
            found[key] = [float(v) for v in values if isinstance(v, (int, float))]
    return found


def as_variant(base: dict[str, Any], kept: Kept, name: str) -> dict[str, Any]:
    """Return the base study with a kept placement written into it as a variant."""
    entry = {"name": name, "set": {k: v for k, v in changes(base, kept.data).items() if v is not None}}
    others = [v for v in base.get("variants", ()) if v.get("name") != name]
    return {**base, "variants": [*others, entry]}


def _flat(path: str, value: Any) -> dict[str, Any]:
    if isinstance(value, dict):
        return {k: v for key, inner in value.items() for k, v in _flat(f"{path}.{key}".lstrip("."), inner).items()}
    return {path: value}


def _shown(value: Any) -> str:
    if value is None:
        return "left out"
    if isinstance(value, list):
        return ", ".join(_shown(v) for v in value)[:LONGEST_VALUE]
    return f"{value:g}" if isinstance(value, float) else str(value)[:LONGEST_VALUE]
