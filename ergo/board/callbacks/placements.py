"""Keeping placements, comparing them, and going back to one."""

from typing import Any

from dash import ALL, Dash, Input, Output, State, ctx, no_update
from dash.exceptions import PreventUpdate

from ergo.board import drawings
from ergo.board.callbacks.answers import results_of
from ergo.board.guard import work_key
from ergo.board.ids import Id, Part
from ergo.board.kept import as_variant, axes_of, keep
from ergo.board.layouts import placements
from ergo.board.room import Room
from ergo.board.store import OtherTabError, Work
from ergo.errors import PullwardError


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    _keep_with_note(app, room)
    _keep_now(app, room)
    _act(app, room)
    _list(app, room)


def _keep_with_note(app: Dash, room: Room) -> None:
    """Keep what stands in the fields, from the page, with a note."""

    @app.callback(
        Output(Id.KEEP_SAYS, "children"),
        Output(Id.KEEP_NOTE, "value"),
        Output(Id.KEPT_CHANGED, "data"),
        Input(Id.KEEP, "n_clicks"),
        State(Id.KEEP_NOTE, "value"),
        State(Id.VARIANT, "value"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def kept(clicks: int, note: str | None, variant: str, tab: str) -> tuple[Any, Any, Any]:
        work = room.store.work(work_key())
        if not clicks or work.draft is None:
            raise PreventUpdate
        if not work.draft.sound or work.draft.good is None:
            return "Not kept: this is not a study yet; its problems stand beside the fields.", no_update, no_update
        try:
            results = results_of(room, work, variant, tab)
        except (PullwardError, TimeoutError) as error:
            return f"Not kept: {error}", no_update, no_update
        made = keep(work, results, dict(results.study), str(note or "").strip())
        return f"Kept as {made.note or f'placement {len(work.kept)}'}.", "", made.key


def _keep_now(app: Dash, room: Room) -> None:
    """Keep what stands in the fields, from any page."""

    @app.callback(
        Output(Id.SAID, "data"),
        Output(Id.KEPT_CHANGED, "data", allow_duplicate=True),
        Input(Id.KEEP_NOW, "n_clicks"),
        State(Id.VARIANT, "value"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def kept_now(clicks: int, variant: str, tab: str) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        if not clicks or work.draft is None:
            raise PreventUpdate
        if not work.draft.sound:
            return "not kept: no study yet", no_update
        try:
            results = results_of(room, work, variant, tab)
        except (PullwardError, TimeoutError) as error:
            return f"not kept: {error}"[:80], no_update
        made = keep(work, results, dict(results.study), "")
        return f"kept as placement {len(work.kept)}", made.key

    app.clientside_callback(
        "function(said) { return dash_clientside.board.said(said); }",
        Output(Id.HEARD, "data", allow_duplicate=True), Input(Id.SAID, "data"), prevent_initial_call=True,
    )  # fmt: skip


def _act(app: Dash, room: Room) -> None:
    """Put back, take out, compare against, write as a variant."""

    @app.callback(
        Output(Id.KEPT_CHANGED, "data", allow_duplicate=True),
        Output(Id.PLACE, "pathname", allow_duplicate=True),
        Output(Id.KEEP_SAYS, "children", allow_duplicate=True),
        Input({"type": str(Part.KEPT), "path": ALL}, "n_clicks"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def act(clicks: list[int], tab: str) -> tuple[Any, Any, Any]:
        chosen = ctx.triggered_id
        if not any(clicks) or not isinstance(chosen, dict):
            raise PreventUpdate
        work = room.store.work(work_key())
        kind, _, key = str(chosen["path"]).partition(":")
        try:
            said = acted(work, kind, key, tab)
        except OtherTabError:
            return no_update, no_update, "Nothing was changed: another tab changed this study first. Reload to see it."
        return f"{kind}:{key}", "/" if kind == "back" else no_update, said


def _list(app: Dash, room: Room) -> None:
    """Let table and chart follow what is kept."""

    @app.callback(
        Output(Id.KEPT_TABLE, "children"),
        Output(Id.TRADE_X, "data"), Output(Id.TRADE_X, "value"),
        Output(Id.TRADE_Y, "data"), Output(Id.TRADE_Y, "value"),
        Input(Id.KEPT_CHANGED, "data"),
        State(Id.TRADE_X, "value"), State(Id.TRADE_Y, "value"),
        prevent_initial_call=True,
    )  # fmt: skip
    def listed(_: Any, across: str | None, up: str | None) -> tuple[Any, ...]:
        work = room.store.work(work_key())
        axes = list(axes_of(work.kept))
        x = across if across in axes else placements.ACROSS
        y = up if up in axes else placements.UP
        return placements.table(work, work.reference), axes, x, axes, y

    @app.callback(
        Output(Id.TRADE, "children"),
        Output(Id.TRADE_AXES, "hidden"),
        Input(Id.KEPT_CHANGED, "data"),
        Input(Id.TRADE_X, "value"),
        Input(Id.TRADE_Y, "value"),
        Input(Id.THEME, "forceColorScheme"),
    )
    def traded(_: Any, across: str, up: str, theme: str) -> tuple[Any, bool]:
        work = room.store.work(work_key())
        return placements.trade(work, across, up, drawings.THEMES[theme]), len(work.kept) < 2


def acted(work: Work, kind: str, key: str, tab: str) -> str:
    """Do what a button of a kept placement says; return what was done."""
    with work.lock:
        found = next((k for k in work.kept if k.key == key), None)
        if found is None:
            return "That placement is no longer kept."
        seen = work.seen_by.get(tab, work.change)
        if kind == "back":
            work.replace(found.data, why=f"put back {key}", tab=tab, seen=seen)
            work.seen_by[tab] = work.change
            return ""
        if kind == "drop":
            work.kept.remove(found)
            said = "Taken out."
        elif kind == "reference":
            work.reference, said = key, ""
        elif kind == "variant" and work.draft is not None:
            name = (found.note or f"kept {key[:4]}")[:40]
            work.replace(as_variant(work.draft.data, found, name), why=f"variant {key}", tab=tab, seen=seen)
            work.seen_by[tab] = work.change
            said = f"Written into the study as variant {name}."
        else:
            said = ""
        work.save()
        return said
