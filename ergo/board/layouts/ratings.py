"""The ratings strip: what decides, how far from its target, and for whom."""

from typing import Any

import numpy as np
from dash import html

from ergo.board.attributes import attributes
from ergo.evaluation.results import Results
from ergo.pictures.ratings_view import interval, label, ordered
from ergo.pictures.sheet import figure


def strip(results: Results, key: str) -> list[Any]:
    """Return the verdict and one row a rating; what falls short comes first, in bold, with a solid square.

    `key` tells the page which pictures these ratings belong to.
    """
    head = "Meets every target" if results.meets else "Falls short"
    mark = "mark mark-met" if results.meets else "mark mark-short"
    people = results.people
    who = f"{people['count']} operators, {100 * float(people['women_share']):.0f}\u202f% women"
    return [
        html.Div([html.Span(className=mark), html.H2(head), html.Span(who, className="who")], className="verdict",
                 **attributes(data_key=key)),
        html.P(results.reasons[0] if results.reasons else "", className="verdict-why"),
        *[_row(results, name) for name in ordered(results)],
    ]


def _row(results: Results, name: str) -> html.Details:
    r = results.ratings[name]
    value = figure(r.value, 1) if np.isfinite(r.value) else "not rated"
    short = "" if r.met else " short"
    summary = html.Summary(
        [
            html.Span(className=f"mark {'mark-met' if r.met else 'mark-short'}"),
            html.Span(label(name), className="name"),
            _bar(r),
            html.Span(value, className="number"),
            html.Span(r.reason, className="reason"),
        ]
    )
    target = f"target {figure(r.target, 1)}" if np.isfinite(r.target) else "no target"
    facts = [f"95\u202f% interval {interval(r.low, r.high)}", target]
    if np.isfinite(r.worst_stroke):
        facts.append(f"worst at {100 * r.worst_stroke:.0f}\u202f% of the stroke")
    if r.cause:
        facts.append(f"decided by: {r.cause}")
    return html.Details(
        [summary, html.P("; ".join(facts) + ".", className="facts"),
         html.A("Sources and their status", href="/sources", className="facts")],
        className=f"rating{short}", **attributes(data_rating=name, data_value=f"{r.value:.6g}"),
    )  # fmt: skip


def _bar(rating: Any) -> html.Span:
    parts = []
    if np.isfinite(rating.value):
        parts.append(html.Span(className="fill", style={"width": f"{_clip(rating.value):.2f}%"}))
    if np.isfinite(rating.low) and np.isfinite(rating.high):
        low, high = _clip(rating.low), _clip(rating.high)
        parts.append(html.Span(className="whisker", style={"left": f"{low:.2f}%", "width": f"{high - low:.2f}%"}))
    if np.isfinite(rating.target):
        parts.append(html.Span(className="tick", style={"left": f"{_clip(rating.target):.2f}%"}))
    return html.Span(parts, className="bar", **attributes(aria_hidden="true"))


def _clip(value: float) -> float:
    return float(np.clip(value, 0.0, 100.0))
