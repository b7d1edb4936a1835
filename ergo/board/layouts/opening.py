"""Open a study: shipped, from the folder given, brought along, or new."""

from typing import Any

from dash import dcc, html

from ergo.board.ids import Id, Part, of

Offered = dict[str, tuple[str, str]]


def page(shipped: Offered, in_folder: Offered | None, *, empty: bool) -> html.Div:
    """Return the page; `in_folder` is None when the board was started without a folder."""
    lead = (
        "Open a study and change it by hand. What you do is kept on this computer after every step."
        if empty
        else "The study in the fields stays one undo away."
    )
    own: list[Any] = [
        html.H3("Your own file"),
        html.P("A study file (.toml), together with the CSV files that it names; up to 1 MB each."),
        html.Label(
            dcc.Upload([html.Span("Choose files"), " or drop them here"], id=Id.UPLOAD, multiple=True, max_size=1_000_000,
                       accept=".toml,.csv", className="upload"),
        ),
        html.Div(id=Id.UPLOAD_SAYS, role="status", className="problems"),
    ]  # fmt: skip
    if in_folder is not None:
        there = _list(in_folder, Part.IN_FOLDER) if in_folder else html.P("No study there yet.")
        own += [html.H3("In the folder"), there]
    return html.Div(
        [
            html.H2("Start with a study" if empty else "Open another study"),
            html.P(lead, className="lead"),
            html.Div(
                [html.Section([html.H3("Shipped studies"), _list(shipped, Part.SHIPPED)]), html.Section(own)],
                className="figures",
            ),
        ],
        className="page opening",
    )


def _list(found: Offered, part: Part) -> html.Ul:
    return html.Ul(
        [
            html.Li(html.Button([html.B(title), html.Span(words)], id=of(part, name), n_clicks=0))
            for name, (title, words) in found.items()
        ],
        className="studies",
    )
