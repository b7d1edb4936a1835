"""Placements side by side on the same people, and by how much they differ."""

from collections.abc import Sequence

import numpy as np

from ergo.evaluation.results import RATING_NAMES, Results
from ergo.explore.compare import Difference, paired_difference
from ergo.pictures.ratings_view import label
from ergo.pictures.sheet import figure, plain
from ergo.report.blocks import Rows, Words


def name_of(results: Results) -> str:
    """Return what a placement is called: its variant, else its study's title."""
    return plain(results.variant or results.study["study"]["title"], 60)


def paired_served(first: Results, second: Results) -> Difference | None:
    """Return by how much the second serves more of the same people; None when the two were not drawn alike."""
    alike = first.crowd.stature_mm.shape == second.crowd.stature_mm.shape
    if not alike or not np.array_equal(first.crowd.stature_mm, second.crowd.stature_mm):
        return None
    return paired_difference(name_of(second), np.asarray(second.crowd.served), np.asarray(first.crowd.served))


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
    side = "more" if difference.points >= 0 else "fewer"
    span = f"95 % interval of the difference {figure(difference.low, 1)} to {figure(difference.high, 1)}"
    chance = "" if difference.clear else "; no difference beyond chance"
    return f"{head} On the same people it serves {figure(abs(difference.points), 1)} points {side} ({span}{chance})."
