"""The page of the sources follows the study; what would flip the verdict is looked for in the background."""

from typing import Any

from dash import Dash, Input, Output, State, ctx
from dash.exceptions import PreventUpdate

from ergo.board.callbacks.answers import as_variant, fill
from ergo.board.guard import work_key
from ergo.board.ids import Id
from ergo.board.jobs import Job
from ergo.board.layouts import sources
from ergo.board.room import Room
from ergo.evaluation.flips import Flip, flips
from ergo.evaluation.results import Results
from ergo.study.model import Study


def register(app: Dash, room: Room) -> None:
    """Make the page work."""
    fill(app, room, Id.SOURCES_BODY, sources.body)

    @app.callback(
        Output(Id.FLIPS_JOB, "data"),
        Input(Id.FLIPS, "n_clicks"),
        State(Id.VARIANT, "value"),
        prevent_initial_call=True,
    )
    def start(clicks: int, variant: str) -> str:
        work = room.store.work(work_key())
        if not clicks or work.draft is None or work.draft.good is None:
            raise PreventUpdate
        study = as_variant(work.draft.good, variant)
        return room.jobs.start(work.key, "flips", lambda job: _look(job, room, study)).key

    @app.callback(
        Output(Id.FLIPS_SAYS, "children"),
        Output(Id.FLIPS_TICK, "disabled"),
        Output(Id.FLIPS_STOP, "disabled"),
        Input(Id.FLIPS_JOB, "data"),
        Input(Id.FLIPS_TICK, "n_intervals"),
        Input(Id.FLIPS_STOP, "n_clicks"),
        prevent_initial_call=True,
    )
    def watch(key: str | None, _: int, __: int) -> tuple[Any, bool, bool]:
        if not key:
            raise PreventUpdate
        job = room.jobs.of(work_key(), key)
        if job is None:
            return "This is lost: the board was started anew. Look again.", True, True
        if ctx.triggered_id == Id.FLIPS_STOP:
            job.stop()
        done = job.done.is_set()
        return sources.flips_found(job), done, done


def _look(job: Job, room: Room, study: Study) -> tuple[Flip, ...]:
    def judge(asked: Study, **more: Any) -> Results:
        return room.judge.borrow(asked, job.tell_only, **more)

    return flips(study, judge, tell=job.tell)
