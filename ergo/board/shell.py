"""The frame round every page: title block, tools, the way between pages, cautions."""

from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html

from ergo.board.attributes import attributes
from ergo.board.ids import Id
from ergo.board.layouts.figures import export
from ergo.board.store import new_key

PAGES = {
    "/open": "Open",
    "/": "Bench",
    "/left-out": "Who is left out",
    "/let-go": "Let-go",
    "/placements": "Placements tried",
    "/search": "Search",
    "/sources": "Sources",
    "/take-away": "Take away",
}
CAUTION = (
    "A screening calculation from population data. It is no risk assessment, and it replaces neither guarding, nor trials "
    "with real operators, nor local codes and licensed practice."
)
FONT = "'Pullward Sans','DejaVu Sans',sans-serif"


def frame(*, engine_ready: bool, theme: str) -> dmc.MantineProvider:
    """Return what stays while pages change."""
    return dmc.MantineProvider(
        [
            dcc.Location(id=Id.PLACE, refresh=False),
            dcc.Store(id=Id.TAB, data=new_key()[:12]),
            dcc.Store(id=Id.EDIT),
            dcc.Store(id=Id.ARRIVED),
            dcc.Store(id=Id.HEARD),
            dcc.Store(id=Id.RASTER),
            dcc.Store(id=Id.KEPT_CHANGED),
            dcc.Store(id=Id.SAID),
            dcc.Download(id=Id.DOWNLOAD),
            dcc.Interval(id=Id.ENGINE_TICK, interval=700, disabled=engine_ready),
            html.A("Skip to the page", href="#page", className="skip"),
            html.Header([_title_block(), _tools(theme)], className="head"),
            html.Nav(
                [dcc.Link(text, href=path, className="page-link") for path, text in PAGES.items()],
                className="pages", **attributes(aria_label="Pages"),
            ),
            html.P(id=Id.ENGINE_SAYS, role="status", className="engine-says"),
            html.Div(id=Id.CONFLICT, role="alert", className="conflict"),
            html.Main(id=Id.PAGE, tabIndex="-1"),
            html.Footer(
                [
                    html.P([html.B("Caution. "), CAUTION, " ", html.Span(id=Id.CAUTIONS)]),
                    dcc.Link("Which numbers are recalled, and every source", href="/sources"),
                ],
                className="foot",
            ),
        ],
        id=Id.THEME, forceColorScheme="dark" if theme == "dark" else "light",
        theme={"fontFamily": FONT, "defaultRadius": 2, "primaryColor": "dark", "respectReducedMotion": True},
    )  # fmt: skip


def _title_block() -> html.Div:
    return html.Div(
        [
            html.Span("Pullward", className="maker"),
            _cell("study", html.H1("no study yet", id=Id.TITLE)),
            _cell("variant", dmc.Select(id=Id.VARIANT, data=["as written"], value="as written", size="xs",
                                        allowDeselect=False, **attributes(aria_label="Variant"))),
            _cell("state", html.Span("opening", id=Id.STATE_LINE, role="status")),
        ],
        className="title-block",
    )  # fmt: skip


def _cell(caption: str, body: Any) -> html.Div:
    return html.Div([html.Span(caption, className="caption"), body], className=f"cell cell-{caption}")


def _tools(theme: str) -> html.Div:
    def tool(text: str, key: Id, hint: str = "") -> html.Button:
        return html.Button(text, id=key, n_clicks=0, title=hint or None)

    return html.Div(
        [
            tool("Undo", Id.UNDO, "Ctrl+Z"),
            tool("Redo", Id.REDO, "Ctrl+Y"),
            tool("Keep", Id.KEEP_NOW, "Keep this placement to compare it with others"),
            export("Download study", "toml:study"),
            tool("Light" if theme == "dark" else "Dark", Id.THEME_SWITCH),
        ],
        className="tools", role="group", **attributes(aria_label="Tools"),
    )  # fmt: skip
