"""Sweeps and suggestions: started, watched, stopped; results shown as they come."""

from typing import Any

from dash import Dash, Input, Output, State, ctx, no_update
from dash.exceptions import PreventUpdate

from ergo.board.controls import control_paths, window
from ergo.board.draft import value_at
from ergo.board.guard import work_key
from ergo.board.ids import Id
from ergo.board.layouts import search
from ergo.board.room import Room
from ergo.board.searching import keys_to_vary, suggestion, sweep, values_between


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    _ends(app, room)
    _start(app, room)
    _watch(app, room)
    _suggest(app, room)
    _watch_suggestion(app, room)


def _ends(app: Dash, room: Room) -> None:
    """Offer the ends of a value's window when it is chosen."""

    @app.callback(Output(Id.SWEEP_LOW, "value"), Output(Id.SWEEP_HIGH, "value"), Input(Id.SWEEP_KEY, "value"))
    def ends(path: str | None) -> tuple[Any, Any]:
        draft = room.store.work(work_key()).draft
        rows = control_paths(draft.data) if draft else {}
        row = rows.get(path or "") or rows.get(str(path).rpartition("[")[0])
        if draft is None or row is None:
            raise PreventUpdate
        low, high, _ = window(row, value_at(draft.data, str(path)))
        return low, high


def _start(app: Dash, room: Room) -> None:
    """Start a sweep."""

    @app.callback(
        Output(Id.JOB, "data"),
        Output(Id.SWEEP_SAYS, "children", allow_duplicate=True),
        Input(Id.SWEEP, "n_clicks"),
        State(Id.SWEEP_KEY, "value"),
        State(Id.SWEEP_LOW, "value"),
        State(Id.SWEEP_HIGH, "value"),
        State(Id.SWEEP_STEPS, "value"),
        prevent_initial_call=True,
    )
    def start(clicks: int, path: str, low: Any, high: Any, steps: Any) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        if not clicks or work.draft is None:
            raise PreventUpdate
        if not work.draft.sound:
            return no_update, "Nothing was tried: this is not a study yet; its problems stand beside the fields."
        words = keys_to_vary(work.draft.data).get(path)
        ends = [v for v in (low, high, steps) if isinstance(v, (int, float)) and not isinstance(v, bool)]
        if words is None or len(ends) != 3:
            return no_update, "Nothing was tried: the value, both ends and the number of placements are needed."
        values = values_between(float(low), float(high), int(steps))
        data = work.draft.data
        job = room.jobs.start(work.key, "sweep", lambda j: sweep(j, room.judge, work, data, path, values))
        return {"key": job.key, "path": path, "words": words}, ""


def _watch(app: Dash, room: Room) -> None:
    """Show how far it is and what has come, until it is done."""

    @app.callback(
        Output(Id.SWEEP_SAYS, "children"),
        Output(Id.SWEEP_TABLE, "children"),
        Output(Id.JOB_TICK, "disabled"),
        Output(Id.SWEEP_STOP, "disabled"),
        Input(Id.JOB, "data"),
        Input(Id.JOB_TICK, "n_intervals"),
        Input(Id.SWEEP_STOP, "n_clicks"),
        prevent_initial_call=True,
    )
    def watch(started: dict[str, str] | None, _: int, __: int) -> tuple[Any, ...]:
        if not started:
            raise PreventUpdate
        job = room.jobs.of(work_key(), started.get("key"))
        if job is None:
            return "This search is lost: the board was started anew. Start it again.", no_update, True, True
        if ctx.triggered_id == Id.SWEEP_STOP:
            job.stop()
        done = job.done.is_set()
        return search.progress(job), search.table(job, started["path"], started["words"]), done, done


def _suggest(app: Dash, room: Room) -> None:
    """Start looking for the smallest changes."""

    @app.callback(
        Output(Id.SUGGEST_JOB, "data"),
        Output(Id.SUGGEST_SAYS, "children", allow_duplicate=True),
        Input(Id.SUGGEST, "n_clicks"),
        State(Id.SUGGEST_KEYS, "value"),
        prevent_initial_call=True,
    )
    def start(clicks: int, paths: Any) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        if not clicks or work.draft is None:
            raise PreventUpdate
        study = work.draft.good
        if study is None or not work.draft.sound:
            return no_update, "Nothing was tried: this is not a study yet; its problems stand beside the fields."
        known = keys_to_vary(work.draft.data)
        chosen = [path for path in paths or [] if path in known]
        if not chosen:
            return no_update, "Nothing was tried: choose at least one value that may change."
        job = room.jobs.start(work.key, "suggestion", lambda j: suggestion(j, room.judge, study, chosen))
        return {"key": job.key, "words": {path: known[path] for path in chosen}}, ""


def _watch_suggestion(app: Dash, room: Room) -> None:
    """Show how far the suggestion is and what it has found, until it is done."""

    @app.callback(
        Output(Id.SUGGEST_SAYS, "children"),
        Output(Id.SUGGEST_TABLE, "children"),
        Output(Id.SUGGEST_TICK, "disabled"),
        Output(Id.SUGGEST_STOP, "disabled"),
        Input(Id.SUGGEST_JOB, "data"),
        Input(Id.SUGGEST_TICK, "n_intervals"),
        Input(Id.SUGGEST_STOP, "n_clicks"),
        prevent_initial_call=True,
    )
    def watch(started: dict[str, Any] | None, _: int, __: int) -> tuple[Any, ...]:
        if not started:
            raise PreventUpdate
        job = room.jobs.of(work_key(), started.get("key"))
        if job is None:
            return "This search is lost: the board was started anew. Start it again.", no_update, True, True
        if ctx.triggered_id == Id.SUGGEST_STOP:
            job.stop()
        done = job.done.is_set()
        return search.verdict(job), search.proposals(job, started["words"]), done, done
