"""Opening studies: shipped ones, those of the folder, files brought along."""

from typing import Any

from dash import ALL, Dash, Input, Output, State, ctx, html, no_update
from dash.exceptions import PreventUpdate

from ergo.board import opening
from ergo.board.guard import work_key
from ergo.board.ids import Id, Part
from ergo.board.room import Room
from ergo.errors import StudyError


def register(app: Dash, room: Room) -> None:
    """Make the page work."""

    @app.callback(
        Output(Id.PLACE, "pathname", allow_duplicate=True),
        Input({"type": str(Part.SHIPPED), "path": ALL}, "n_clicks"),
        Input({"type": str(Part.IN_FOLDER), "path": ALL}, "n_clicks"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def opened(shipped: list[int], in_folder: list[int], tab: str) -> str:
        chosen = ctx.triggered_id
        if not any([*shipped, *in_folder]) or not isinstance(chosen, dict):
            raise PreventUpdate
        work, name = room.store.work(work_key()), str(chosen["path"])
        if chosen["type"] == str(Part.SHIPPED):
            opening.open_shipped(work, name, tab)
        else:
            opening.open_in_folder(work, room.folder, name, tab)
        return "/"

    @app.callback(
        Output(Id.PLACE, "pathname", allow_duplicate=True),
        Output(Id.UPLOAD_SAYS, "children"),
        Input(Id.UPLOAD, "contents"),
        State(Id.UPLOAD, "filename"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def uploaded(contents: list[str] | None, names: list[str] | None, tab: str) -> tuple[Any, Any]:
        if not contents or not names:
            raise PreventUpdate
        try:
            opening.bring(room.store.work(work_key()), dict(zip(names, contents, strict=True)), tab)
        except StudyError as error:
            rows = [html.Li([html.Code(p.where), " ", _said(p)]) for p in error.problems]
            return no_update, [html.P("Nothing was opened."), html.Ul(rows)]
        return "/", ""


def _said(problem: Any) -> str:
    return problem.sentence().removeprefix(problem.where).removeprefix(": ")
