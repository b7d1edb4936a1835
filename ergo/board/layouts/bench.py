"""The main page: the drawing, the chart under it, the ratings beside it, and the values."""

from typing import Any

from dash import dcc, html

from ergo.board.draft import Draft
from ergo.board.ids import Id
from ergo.board.layouts import values


def page(draft: Draft) -> html.Div:
    """Return the main page; pictures and ratings arrive as soon as the engine has them."""
    return html.Div(
        [
            html.Aside(
                [
                    html.H2("Values", className="quiet-head"),
                    html.Div(id=Id.VALUES_PROBLEMS, className="problems", role="status"),
                    html.Div(values.drawer(draft), id=Id.VALUES),
                ],
                className="drawer", **{"aria-label": "Values of the study"},
            ),
            html.Div([_picture(), _chart()], className="middle"),
            html.Section(
                html.P("The ratings are being worked out.", className="waiting"),
                id=Id.RATINGS, className="ratings", **{"aria-label": "Ratings", "aria-live": "polite"},
            ),
            dcc.Store(id=Id.DRAWN),
            dcc.Store(id=Id.PEOPLE_DRAWN),
            dcc.Store(id=Id.POINTER),
        ],
        className="bench-page",
    )  # fmt: skip


def _picture() -> html.Section:
    return html.Section(
        [
            html.Div(
                [
                    _tab("machine", "Machine", chosen=True),
                    _tab("operators", "Operators at it"),
                    _tab("space", "In space"),
                    html.Span("Drag a dimension to change it.", className="hint"),
                ],
                className="views", role="group", **{"aria-label": "View"},
            ),
            html.Div(
                [
                    html.Figure(id=Id.BENCH_PICTURE, className="drawn view-machine"),
                    html.Figure(id=Id.PEOPLE_PICTURE, className="drawn view-operators"),
                    html.Div(id=Id.SPACE_PICTURE, className="drawn view-space"),
                ],
                className="sheet show-machine", id=Id.SHEET,
            ),
        ],
        className="picture", **{"aria-label": "Bench drawing"},
    )  # fmt: skip


def _tab(name: str, text: str, *, chosen: bool = False) -> html.Button:
    return html.Button(text, className="view", **{"data-view": name, "aria-pressed": "true" if chosen else "false"})


def _chart() -> html.Section:
    return html.Section(
        [
            html.Figure(id=Id.CHART_PICTURE, className="drawn chart"),
            html.P("Move over the chart, or focus it and press the arrow keys, to read the stroke.",
                   id=Id.POINTER_SAYS, className="readout"),  # fmt: skip
        ],
        className="stroke", **{"aria-label": "Stroke chart"},
    )  # fmt: skip


def empty(shipped: dict[str, str]) -> Any:
    """Return what a board without a study offers."""
    from ergo.board.ids import Part, of

    rows = [
        html.Li(html.Button([html.B(title), html.Span(name)], id=of(Part.SHIPPED, name), n_clicks=0))
        for name, title in shipped.items()
    ]
    return html.Section(
        [
            html.H2("Start with a study"),
            html.P("Open one of the shipped studies and change it by hand, start a new one, or bring your own file."),
            html.Ul([*rows, html.Li(html.Button([html.B("New study"), html.Span("every key at its default")],
                                                id=of(Part.SHIPPED, ":new"), n_clicks=0))], className="studies"),
        ],
        className="empty",
    )  # fmt: skip
