"""The main page: the drawing, the chart under it, the ratings beside it, and the values."""

from typing import Any

from dash import dcc, html

from ergo.board.attributes import attributes
from ergo.board.draft import Draft
from ergo.board.ids import Id, Part, of
from ergo.board.layouts import notices, values
from ergo.board.space import CAMERAS


def page(draft: Draft) -> html.Div:
    """Return the main page; pictures and ratings arrive as soon as the engine has them."""
    return html.Div(
        [
            html.Aside(
                [
                    html.H2("Values", className="quiet-head"),
                    html.Div(notices.problems(draft), id=Id.VALUES_PROBLEMS, className="problems", role="status"),
                    dcc.Store(id=Id.VALUES_SHAPE, data=values.shape(draft)),
                    html.Div(values.drawer(draft), id=Id.VALUES),
                ],
                className="drawer", **attributes(aria_label="Values of the study"),
            ),
            html.Div([_picture(), _chart()], className="middle"),
            html.Section(
                html.P("The ratings are being worked out.", className="waiting"),
                id=Id.RATINGS, className="ratings", **attributes(aria_label="Ratings", aria_live="polite"),
            ),
            dcc.Store(id=Id.DRAWN),
            dcc.Store(id=Id.PEOPLE_DRAWN),
            dcc.Store(id=Id.SHOWN),
            dcc.Store(id=Id.POINTER),
            dcc.Store(id=Id.VIEW, data="machine"),
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
                className="views", role="group", **attributes(aria_label="View"),
            ),
            html.Div(
                [
                    html.Div(
                        [html.Figure(id=Id.BENCH_PICTURE, className="drawn"),
                         html.Figure(id=Id.BESIDE_PICTURE, className="drawn beside", **attributes(aria_hidden="true")),
                         html.Figure(id=Id.CORNER_PICTURE, className="drawn corner")],
                        className="view-machine",
                    ),
                    html.Figure(id=Id.PEOPLE_PICTURE, className="drawn view-operators"),
                    html.Div(id=Id.SPACE_PICTURE, className="drawn view-space"),
                ],
                className="sheet show-machine", id=Id.SHEET,
            ),
        ],
        className="picture", **attributes(aria_label="Bench drawing"),
    )  # fmt: skip


def _tab(name: str, text: str, *, chosen: bool = False) -> html.Button:
    return html.Button(text, className="view", **attributes(data_view=name, aria_pressed="true" if chosen else "false"))


def _chart() -> html.Section:
    return html.Section(
        [
            html.Figure(id=Id.CHART_PICTURE, className="drawn chart"),
            html.P("Move over the chart, or focus it and press the arrow keys, to read the stroke.",
                   id=Id.POINTER_SAYS, className="readout"),
        ],
        className="stroke", **attributes(aria_label="Stroke chart"),
    )


def space(figure: dict[str, Any]) -> list[Any]:
    """Return the scene with buttons for the keyboard, since the scene itself has none."""
    buttons = [html.Button(name, id=of(Part.CAMERA, name), n_clicks=0, className="quiet") for name in CAMERAS]
    return [
        html.Div(buttons, className="cameras", role="group", **attributes(aria_label="Look")),
        dcc.Graph(
            id=Id.SPACE_GRAPH, figure=figure, className="space-graph", responsive=True,
            config={"displayModeBar": False, "displaylogo": False, "showSendToCloud": False, "scrollZoom": True},
        ),
    ]  # fmt: skip
