"""Take away: the study, the report, drawings and tables."""

from typing import Any

from dash import dcc, html

from ergo.board.ids import Id
from ergo.board.layouts.figures import export

DRAWINGS = {
    "machine": "Bench, lever and handle path",
    "operators": "Operators at the lever",
    "stroke": "Stroke chart",
    "left_out": "People served and lost",
    "left_out_strip": "Lost along the stroke",
    "ratings": "Ratings",
}
TABLES = {"stroke": "The stroke, position by position", "ratings": "Ratings", "people": "One row an operator"}


def page(name: str, *, folder: bool, report: bool) -> html.Div:
    """Return the page; without a folder there is no saving, without a report maker no report."""
    return html.Div(
        [
            html.H2("Take away"),
            html.Div([_study(name, folder), _report(report), _rows("Drawings", DRAWINGS, ("svg", "png")),
                      _rows("Tables", TABLES, ("csv",), export("All tables as XLSX", "xlsx:all"),
                            export("Results as JSON", "json:results"))], className="figures"),
            html.Div(id=Id.EXPORT_SAYS, role="status", className="problems"),
        ],
        className="page",
    )


def _study(name: str, folder: bool) -> html.Section:
    parts: list[Any] = [html.H3("Study"), html.P(export("Study as TOML", "toml:study"))]
    if folder:
        parts += [
            html.Label("File name in the folder", htmlFor=str(Id.SAVE_NAME)),
            html.Div([dcc.Input(id=Id.SAVE_NAME, value=name, type="text", maxLength=80),
                      html.Button("Save into the folder", id=Id.SAVE, n_clicks=0)], className="row"),
            html.P(id=Id.SAVE_SAYS, role="status"),
        ]
    else:
        parts.append(html.P("Start the board with --folder to save studies into a folder of yours.", className="hint-line"))
    return html.Section(parts, className="figure")


def _report(report: bool) -> html.Section:
    if not report:
        return html.Section([html.H3("Report"), html.P("This installation makes no report.")], className="figure")
    return html.Section(
        [
            html.H3("Report"),
            html.P("The reasoning behind this lever as a PDF, for the machine's design file."),
            html.Button("Make the report", id=Id.REPORT, n_clicks=0),
            html.Div(id=Id.REPORT_SAYS, role="status"),
            dcc.Store(id=Id.REPORT_JOB),
            dcc.Interval(id=Id.REPORT_TICK, interval=300, disabled=True),
        ],
        className="figure",
    )


def _rows(title: str, found: dict[str, str], kinds: tuple[str, ...], *more: Any) -> html.Section:
    rows = [
        html.Li([html.Span(words), html.Span([export(k.upper(), f"{k}:{name}", words) for k in kinds])])
        for name, words in found.items()
    ]
    return html.Section([html.H3(title), html.Ul(rows, className="take"), *more], className="figure")
