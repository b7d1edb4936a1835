"""When the load lets go: how far the handle runs on, whether the body keeps its balance, what is in the way."""

from collections.abc import Mapping
from typing import Any

import numpy as np
from dash import html

from ergo.board import drawings
from ergo.board.attributes import attributes
from ergo.board.layouts.figures import figure, table
from ergo.evaluation.results import Results
from ergo.pictures.sheet import quantity

COLUMNS = ("let go at", "load", "handle runs on, P5", "P50", "P95", "which way", "balance kept", "one step", "thrown",
           "smallest gap")  # fmt: skip


def body(results: Results) -> list[Any]:
    """Return the page for results."""
    where = np.flatnonzero(np.isfinite(results.stroke.overrun_mm).any(axis=1))
    rating = results.ratings.get("let_go")
    if where.size == 0:
        asked = results.study.get("load", {}).get("lets_go_at") is not None
        hint = "Set the stroke position at which the load suddenly lets go: Load, lets go at, on the Bench page."
        said = rating.reason if rating and asked else hint
        return [html.H2("No let-go is judged in this study."), html.P(said, className="lead")]
    p = chosen(results, where)
    told = sentences(results.details.get("let_go", {})) or ([rating.reason] if rating else [])
    return [
        html.H2(f"When the load lets go at {100 * results.stroke.stroke[p]:.0f}\u202f% of the stroke"),
        *[html.P(text, className="lead") for text in told],
        table(COLUMNS, [_row(results, p)], numbers=range(1, 10)),
        html.Div([html.Div([figure(drawings.overrun, results, "overrun"), _body_share(results, p)]),
                  figure(drawings.machine, results, "machine")], className="figures"),
        html.Details([html.Summary("Let go at any other position"),
                      table(COLUMNS, [_row(results, int(n)) for n in where], numbers=range(1, 10))]),
    ]  # fmt: skip


def chosen(results: Results, where: Any) -> int:
    """Return the position that the study lets go at, else the one where most are thrown."""
    asked = results.study.get("load", {}).get("lets_go_at")
    if asked is not None:
        return int(where[np.argmin(np.abs(results.stroke.stroke[where] - float(asked)))])
    thrown = results.stroke.balance[where, 2]
    return int(where[int(np.argmax(np.where(np.isfinite(thrown), thrown, -1.0)))])


def sentences(details: Mapping[str, Any]) -> list[str]:
    """Return the engine's own sentences about the let-go."""
    found = details.get("sentences", ())
    return [str(text) for text in found] if isinstance(found, (list, tuple)) else [str(found)]


def _row(results: Results, p: int) -> list[str]:
    s = results.stroke
    return [
        f"{100 * s.stroke[p]:.0f}\u202f%",
        quantity(float(s.load_n[p]), "N"),
        *[quantity(float(v), "mm") for v in s.overrun_mm[p]],
        s.overrun_toward[p].removeprefix("toward "),
        *[f"{100 * v:.1f}\u202f%" if np.isfinite(v) else "not covered" for v in s.balance[p]],
        quantity(float(s.gap_mm[p]), "mm"),
    ]


def _body_share(results: Results, p: int) -> html.Section:
    """Return the balance of the operators at the let-go as one bar, told by shade and words."""
    s = results.stroke
    shares = [float(v) if np.isfinite(v) else 0.0 for v in s.balance[p]]
    parts = [
        html.Span(className=f"share share-{n}", style={"width": f"{100 * v:.2f}%"}) for n, v in enumerate(shares)
    ]
    words = [
        html.Li([html.Span(className=f"share-key share-{n}"), f"{name}: {100 * v:.1f}\u202f%"])
        for n, (name, v) in enumerate(zip(("balance kept", "one step needed", "thrown"), shares, strict=True))
    ]
    return html.Section(
        [html.H3(f"The body, let go at {100 * s.stroke[p]:.0f}\u202f% of the stroke"),
         html.Div(parts, className="shares", **attributes(aria_hidden="true")), html.Ul(words, className="share-words")],
        className="figure",
    )  # fmt: skip
