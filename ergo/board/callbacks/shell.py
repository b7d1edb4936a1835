"""The frame: which page is shown, opening a study, theme, engine's state."""

from typing import Any

from dash import Dash, Input, Output, State, html, no_update

from ergo.board import layouts
from ergo.board.callbacks.values import state_of
from ergo.board.guard import work_key
from ergo.board.ids import Id
from ergo.board.opening import in_folder, open_file, shipped
from ergo.board.room import Room
from ergo.board.searching import free_of, keys_to_vary
from ergo.board.store import Work

READ = {"/left-out": Id.LEFT_OUT_BODY, "/let-go": Id.LET_GO_BODY}


def register(app: Dash, room: Room) -> None:
    """Make the frame work."""

    @app.callback(
        Output(Id.PAGE, "children"),
        Output(Id.ARRIVED, "data", allow_duplicate=True),
        Input(Id.PLACE, "pathname"),
        State(Id.TAB, "data"),
        prevent_initial_call="initial_duplicate",
    )
    def page(path: str, tab: str) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        if room.first is not None and work.key not in room.greeted:
            room.greeted.add(work.key)
            open_file(work, room.first, tab)
        return page_of(path, work, room), _state(work, tab)

    @app.callback(
        Output(Id.VARIANT, "data"), Output(Id.VARIANT, "value"),
        Input(Id.ARRIVED, "data"), State(Id.VARIANT, "value"), State(Id.VARIANT, "data"),
    )  # fmt: skip
    def variants(state: Any, chosen: str, offered: list[str]) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        good = work.draft.good if work.draft else None
        names = ["as written", *[v.name for v in good.variants]] if good else ["as written"]
        return (names if names != offered else no_update), (no_update if chosen in names else "as written")

    @app.callback(
        Output(Id.ENGINE_TICK, "disabled"), Output(Id.ENGINE_SAYS, "children"), Input(Id.ENGINE_TICK, "n_intervals")
    )
    def engine(_: int) -> tuple[bool, Any]:
        if not room.judge.ready.is_set():
            return False, "The engine is being compiled for this computer, once; the first answer takes longer."
        return True, room.judge.trouble

    app.clientside_callback(
        "function(clicks, now) { return dash_clientside.board.theme(clicks, now); }",
        Output(Id.THEME, "forceColorScheme"), Output(Id.THEME_SWITCH, "children"),
        Input(Id.THEME_SWITCH, "n_clicks"), State(Id.THEME, "forceColorScheme"),
    )  # fmt: skip
    app.clientside_callback(
        "function(name) { return dash_clientside.board.variant(name); }",
        Output(Id.HEARD, "data", allow_duplicate=True), Input(Id.VARIANT, "value"), prevent_initial_call=True,
    )  # fmt: skip


def page_of(path: str, work: Work, room: Room) -> Any:
    """Return the page at a path, as the work stands; without a study there is only opening one."""
    if work.draft is None or path == "/open":
        return layouts.opening.page(shipped(), in_folder(room.folder), empty=work.draft is None)
    if path == "/take-away":
        return layouts.take_away.page(work.name, folder=room.folder is not None, report=room.make_report is not None)
    if path == "/placements":
        return layouts.placements.page(work)
    if path == "/search":
        return layouts.search.page(keys_to_vary(work.draft.data), free_of(work.draft.data))
    if path == "/sources":
        return layouts.sources.page()
    if path in READ:
        return html.Div(html.Div(html.P("The engine is at it.", className="waiting"), id=READ[path]), className="page")
    return layouts.bench.page(work.draft)


def _state(work: Work, tab: str) -> dict[str, Any]:
    work.seen_by[tab] = work.change
    return state_of(work, work.numbers.get(tab, 0), "rest")
