"""Placements side by side on the same people, and by how much they differ."""

from collections.abc import Sequence

import numpy as np

from ergo.evaluation.results import RATING_NAMES, Results
from ergo.pictures.ratings_view import label
from ergo.pictures.sheet import figure, plain
from ergo.report.blocks import Rows, Words

NORMAL_95 = 1.959964


def name_of(results: Results) -> str:
    """Return what a placement is called: its variant, else its study's title."""
    return plain(results.variant or results.study["study"]["title"], 60)


def paired_served(first: Results, second: Results) -> tuple[float, float, float] | None:
    """Return the difference of served shares (second less first) with its 95 % interval, on the same people.

    None when the two were not drawn alike. Equation: mean of the paired differences d in {-1, 0, 1}, standard
    error sqrt(var(d) / n).
    """
    a, b = np.asarray(first.crowd.served, dtype=float), np.asarray(second.crowd.served, dtype=float)
    if a.shape != b.shape or not np.array_equal(first.crowd.stature_mm, second.crowd.stature_mm):
        return None
    d = b - a
    half = NORMAL_95 * float(np.std(d)) / np.sqrt(d.size)
    return float(d.mean()), float(d.mean()) - half, float(d.mean()) + half


def changes_between(first: Results, second: Results) -> str:
    """Return the study values in which two placements differ."""
    flat_first, flat_second = _flat("", first.study), _flat("", second.study)
    keys = sorted(k for k in flat_first.keys() | flat_second.keys() if flat_first.get(k) != flat_second.get(k))
    shown = [
        f"{k} {plain(flat_second.get(k, 'not given'), 60)}" for k in keys if not k.startswith(("variants", "study."))
    ]
    return ", ".join(shown) or "nothing"


def _flat(path: str, value: object) -> dict[str, object]:
    if isinstance(value, dict):
        return {k: v for key, inner in value.items() for k, v in _flat(f"{path}.{key}".lstrip("."), inner).items()}
    return {path: str(value)}


def comparison(results: Results, against: Sequence[Results]) -> list[Rows | Words]:
    """Return the ratings of every placement side by side, and the paired differences."""
    columns = ("rating", f"{name_of(results)} (this report)", *(name_of(r) for r in against))
    rows = []
    for name in RATING_NAMES:
        cells = []
        for r in (results, *against):
            rating = r.ratings.get(name)
            cells.append("not rated" if rating is None else figure(rating.value, 1) + ("" if rating.met else " ■"))
        rows.append((label(name), *cells))
    rows.append(("verdict", *(r.verdict for r in (results, *against))))
    found: list[Rows | Words] = [
        Rows("Ratings of the placements compared; ■ marks one below its target", columns, tuple(rows))
    ]
    found += [Words(sentence(results, other)) for other in against]
    found.append(Words(_choice(results, against)))
    return found


def _choice(results: Results, against: Sequence[Results]) -> str:
    """Say which of the placements serves most, so that a reader sees whether this one is the best of those tried."""
    served = {n: r for n, r in enumerate((results, *against)) if "served" in r.ratings}
    if 0 not in served:
        return "The share served was not rated, so the placements cannot be ranked by it."
    best = max(served, key=lambda n: (served[n].meets, served[n].ratings["served"].value, -n))
    share = figure(served[best].ratings["served"].value, 1)
    if best == 0:
        return f"Of the placements compared, this one serves most people: {share} %."
    reason = "meets every target and " if served[best].meets and not results.meets else ""
    better = name_of(served[best])
    return (
        f"Of the placements compared, {better} {reason}serves most people, {share} %; this one was not the best tried."
    )


def sentence(results: Results, other: Results) -> str:
    """Say what changes between two placements, and for how many of the same people."""
    head = f"{name_of(other)} differs from {name_of(results)} in: {changes_between(results, other)}."
    difference = paired_served(results, other)
    if difference is None:
        return head + " The two were not judged on the same people, so no paired difference is given."
    mean, low, high = (100.0 * v for v in difference)
    gained = f"On the same people it serves {figure(abs(mean), 1)} % {'more' if mean >= 0 else 'fewer'} of them"
    return f"{head} {gained} (95 % interval {figure(low, 1)} to {figure(high, 1)} %)."
