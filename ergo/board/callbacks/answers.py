"""Results for the pages that are read: asked of the engine, or taken from what it said before."""

from collections.abc import Callable
from typing import Any

from dash import Dash, Input, Output, State, html
from dash.exceptions import PreventUpdate

from ergo.board.attributes import attributes
from ergo.board.guard import work_key
from ergo.board.ids import Id
from ergo.board.judge import SupersededError
from ergo.board.room import Room
from ergo.board.store import Work
from ergo.errors import PullwardError
from ergo.evaluation.results import Results
from ergo.study.model import Study


def as_variant(study: Study, name: str | None) -> Study:
    """Return the study as one of its variants makes it, as written where there is none of that name."""
    return study.variant(name) if name and name in {v.name for v in study.variants} else study


def results_of(room: Room, work: Work, variant: str | None, tab: str) -> Results:
    """Return the results of the last sound study for the full population.

    Raises
    ------
    PreventUpdate
        When there is no study, or a newer question took over.
    PullwardError, TimeoutError
        When the engine refuses or does not answer.
    """
    draft = work.draft
    if draft is None or draft.good is None:
        raise PreventUpdate
    try:
        return room.judge.ask(f"{work.key}:{tab}", as_variant(draft.good, variant)).wait()
    except SupersededError as error:
        raise PreventUpdate from error


def fill(app: Dash, room: Room, where: Id, body: Callable[[Results], list[Any]]) -> None:
    """Let a page's body follow the study."""

    @app.callback(
        Output(where, "children"), Input(Id.ARRIVED, "data"), Input(Id.VARIANT, "value"), State(Id.TAB, "data")
    )
    def filled(_: Any, variant: str | None, tab: str) -> html.Div:
        work = room.store.work(work_key())
        change = work.change
        try:
            found = body(results_of(room, work, variant, tab))
        except (PullwardError, TimeoutError) as error:
            found = [html.H2("No results"), html.P(str(error))]
        return html.Div(found, **attributes(data_change=change))
