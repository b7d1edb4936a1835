"""The board as a Dash app: made here, served by `pullward board`."""

import os
from collections.abc import Callable
from pathlib import Path

from dash import Dash
from flask import has_request_context, request

from ergo.board import drawings, guard
from ergo.board.callbacks import (
    bench,
    left_out,
    let_go,
    opening,
    placements,
    search,
    shell,
    sources,
    take_away,
    values,
)
from ergo.board.judge import Judge
from ergo.board.room import Room
from ergo.board.shell import frame
from ergo.board.store import Store
from ergo.evaluation.results import Results
from ergo.sources import folder as data_folder
from ergo.study.reader import read_text
from ergo.study.template import template

INDEX = """<!DOCTYPE html>
<html lang="en" data-mantine-color-scheme="light">
<head>{%metas%}<meta name="viewport" content="width=device-width, initial-scale=1">
<title>Pullward</title><link rel="icon" href="/assets/mark.svg" type="image/svg+xml">
{%css%}<link rel="stylesheet" href="/inks.css"></head>
<body>{%app_entry%}<footer class="scripts">{%config%}{%scripts%}{%renderer%}</footer></body>
</html>"""


def create_app(*, evaluate: Callable[..., Results], make_report: Callable[..., bytes] | None = None,
               store_folder: Path | None = None, study_folder: Path | None = None, first: Path | None = None,
               port: int = 8060, host: str = "127.0.0.1", start: bool = False) -> Dash:  # fmt: skip
    """Return the board.

    Parameters
    ----------
    evaluate : callable
        The engine: a study in, results out.
    make_report : callable or None
        Makes a PDF from results; the button is left out without it.
    store_folder : Path or None
        Where works are kept; the user's state folder if None.
    study_folder : Path or None
        The only folder whose studies the browser may open and save.
    first : Path or None
        Study file that every browser begins with.
    port, host : int, str
        Where the board is served, for the check of hosts.
    start : bool
        Whether the engine's worker starts now, and compiles the kernels.
    """
    store = Store(state_folder() if store_folder is None else store_folder)
    room = Room(store, Judge(evaluate), study_folder, make_report, first)
    app = Dash(
        "pullward", assets_folder=str(data_folder("assets") / "web"), index_string=INDEX, title="Pullward",
        update_title="", suppress_callback_exceptions=True, serve_locally=True, compress=False,
    )  # fmt: skip
    guard.guard(app.server, port=port, hosts=(*guard.LOOPBACK, host))
    app.server.add_url_rule("/inks.css", "inks", lambda: (drawings.theme_css(), 200, {"Content-Type": "text/css"}))
    app.layout = lambda: frame(engine_ready=room.judge.ready.is_set(), theme=_theme())
    for page in (shell, values, bench, left_out, let_go, opening, placements, search, sources, take_away):
        page.register(app, room)
    app.server.config["BOARD_CSP"] = guard.policy(app)
    app.server.config["BOARD_ROOM"] = room
    if start:
        room.judge.start(read_text(template()))
    return app


def state_folder() -> Path:
    """Return the user's own folder for works in progress."""
    root = os.environ.get("XDG_STATE_HOME") or str(Path.home() / ".local" / "state")
    return Path(root) / "pullward" / "board"


def _theme() -> str:
    chosen = request.cookies.get("pullward_theme", "") if has_request_context() else ""
    return chosen if chosen in ("light", "dark") else "light"
