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

SHARES = ("kept", "one step", "thrown")


def body(results: Results) -> list[Any]:
    """Return the page for results."""
    where = np.flatnonzero(np.isfinite(results.stroke.overrun_mm).any(axis=1))
    rating = results.ratings.get("let_go")
    if where.size == 0:
        asked = results.study.get("load", {}).get("lets_go_at") is not None
        hint = "Set the stroke position at which the load suddenly lets go: Load, lets go at, on the Bench page."
        said = rating.reason if rating and asked else hint
        return [html.H2("No let-go is judged in this study."), html.P(said, className="lead")]
    return [
        html.H2(rating.reason if rating else "The load lets go."),
        *[html.P(text, className="lead") for text in sentences(results.details.get("let_go", {}))],
        html.Div([figure(drawings.machine, results, "machine"), _body_share(results, where)], className="figures"),
        table(("at", "load", "handle runs on, P5", "P50", "P95", "toward", *SHARES, "smallest gap"),
              [_row(results, int(p)) for p in where], caption="Where the load may let go", numbers=range(1, 10)),
    ]  # fmt: skip


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
        s.overrun_toward[p],
        *[f"{100 * v:.1f}\u202f%" if np.isfinite(v) else "not covered" for v in s.balance[p]],
        quantity(float(s.gap_mm[p]), "mm"),
    ]


def _body_share(results: Results, where: Any) -> html.Section:
    """Return the balance of the operators at the let-go as one bar, told by shade and words."""
    s = results.stroke
    p = int(where[np.nanargmax(np.where(np.isfinite(s.balance[where, 2]), s.balance[where, 2], 0.0))])
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
