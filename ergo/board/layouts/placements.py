"""Placements tried: kept ones with notes, side by side on the same people, and the way back to each."""

from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html

from ergo.board.attributes import attributes
from ergo.board.ids import Id, Part, of
from ergo.board.kept import axes_of, changes_in_words, difference_of
from ergo.board.store import Kept, Work
from ergo.evaluation.results import RATING_NAMES
from ergo.pictures.ratings_view import label
from ergo.pictures.theme import SHAPES, Ink

ACROSS, UP = "hand travel, mm", "served"
SYMBOLS = {"triangle": "triangle-up", "square": "square", "diamond": "diamond", "cross": "x", "plus": "cross",
           "bar": "line-ew-open", "wedge": "triangle-down", "star": "star"}  # fmt: skip


def page(work: Work) -> html.Div:
    """Return the page; table and chart change as placements come and go."""
    axes = list(axes_of(work.kept))
    return html.Div(
        [
            html.H2("Placements tried"),
            html.Div(
                [
                    html.Label("Note", htmlFor=str(Id.KEEP_NOTE)),
                    dcc.Input(id=Id.KEEP_NOTE, type="text", maxLength=400, placeholder="why this one", className="text"),
                    html.Button("Keep what stands in the fields", id=Id.KEEP, n_clicks=0),
                ],
                className="row",
            ),
            html.P(id=Id.KEEP_SAYS, role="status"),
            html.Div(table(work, work.reference), id=Id.KEPT_TABLE),
            html.Div(
                [
                    dmc.Select(id=Id.TRADE_X, label="across", size="xs", allowDeselect=False, data=axes, value=ACROSS),
                    dmc.Select(id=Id.TRADE_Y, label="up", size="xs", allowDeselect=False, data=axes, value=UP),
                ],
                id=Id.TRADE_AXES, className="row trade-axes", hidden=len(work.kept) < 2,
            ),
            html.Div(id=Id.TRADE),
        ],
        className="page",
    )  # fmt: skip


def table(work: Work, reference: str) -> Any:
    """Return the kept placements as a table, each against the reference on the same people."""
    if not work.kept:
        return html.P("Nothing is kept yet. Keep a placement, change the lever, keep another, and compare them here.",
                      className="lead")  # fmt: skip
    first = next((k for k in work.kept if k.key == reference), work.kept[0])
    names = [n for n in RATING_NAMES if n in first.summary["ratings"]]
    columns = ("placement", "verdict", *(label(n) for n in names), "serves more than the reference", "what to do")
    head = html.Thead(html.Tr([html.Th(c, scope="col") for c in columns]))
    rows = [_row(n, kept, first, names) for n, kept in enumerate(work.kept)]
    return html.Div(html.Table([html.Caption("Kept placements; the solid square marks a rating below its target"), head,
                                html.Tbody(rows)], className="kept"), className="table", tabIndex="0", role="region",
                    **attributes(aria_label="Kept placements"))  # fmt: skip


def _row(n: int, kept: Kept, first: Kept, names: list[str]) -> html.Tr:
    is_first = kept is first
    what = "the reference" if is_first else changes_in_words(first.data, kept.data)
    name = kept.note or f"placement {n + 1}"
    cells = [html.Td(_rating(kept.summary["ratings"].get(r, {})), className="number") for r in names]
    return html.Tr(
        [
            html.Th([html.B(name), html.Span(what, className="what")], scope="row"),
            html.Td("meets" if kept.summary["verdict"] == "meets" else "falls short"),
            *cells,
            html.Td("" if is_first else difference_words(first, kept)),
            html.Td(_buttons(kept, name, is_first=is_first), className="acts"),
        ],
        className="reference" if is_first else "",
    )


def _rating(row: dict[str, Any]) -> list[Any]:
    value = row.get("value")
    if value is None:
        return ["not rated"]
    mark = [] if row["met"] else [html.Span(className="mark mark-short"), " "]
    return [*mark, f"{value:.1f}"]


def difference_words(first: Kept, kept: Kept) -> str:
    """Return the paired difference in words; no winner inside the noise."""
    found = difference_of(first.summary, kept.summary)
    if found is None:
        return "other people: no paired difference"
    span = f"{found.points:+.1f} points, 95\u202f% interval {found.low:+.1f} to {found.high:+.1f}".replace("-", "−")
    return span if found.clear else f"{span}; no difference beyond chance"


def _buttons(kept: Kept, name: str, *, is_first: bool) -> list[Any]:
    acts = [("back", "Put back"), ("variant", "Write as variant"), ("drop", "Take out")]
    if not is_first:
        acts.insert(1, ("reference", "Use as reference"))
    return [
        html.Button(text, id=of(Part.KEPT, f"{act}:{kept.key}"), n_clicks=0, className="quiet",
                    **attributes(aria_label=f"{text}: {name}"))
        for act, text in acts
    ]  # fmt: skip


def trade(work: Work, across: str, up: str, ink: Ink) -> Any:
    """Return the trade chart: a mark a placement, its shape its own, named beside it."""
    axes = axes_of(work.kept)
    if len(work.kept) < 2 or across not in axes or up not in axes:
        return html.P("The trade chart needs two placements." if len(work.kept) < 2 else "")
    names = [k.note[:24] or f"placement {n + 1}" for n, k in enumerate(work.kept)]
    shapes = [SYMBOLS[SHAPES[n % len(SHAPES)]] for n in range(len(names))]
    axis = {"color": ink.ink, "gridcolor": ink.pale, "zeroline": False, "linecolor": ink.grey, "ticks": "outside"}
    figure = {
        "data": [{"type": "scatter", "mode": "markers+text", "x": axes[across], "y": axes[up], "text": names,
                  "textposition": "top center", "cliponaxis": False, "hoverinfo": "x+y+text",
                  "marker": {"symbol": shapes, "size": 11, "color": ink.ink, "line": {"width": 1, "color": ink.paper}}}],
        "layout": {"paper_bgcolor": ink.paper, "plot_bgcolor": ink.paper, "height": 340, "showlegend": False,
                   "margin": {"l": 64, "r": 40, "t": 24, "b": 48},
                   "font": {"family": "Pullward Sans, DejaVu Sans, sans-serif", "color": ink.ink, "size": 12},
                   "xaxis": {**axis, "title": {"text": across}}, "yaxis": {**axis, "title": {"text": up}}},
    }  # fmt: skip
    return dcc.Graph(figure=figure, config={"displayModeBar": False, "displaylogo": False, "showSendToCloud": False},
                     responsive=True)  # fmt: skip
