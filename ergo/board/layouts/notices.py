"""Short notices that may come up on any page: problems of the study, a change in another tab."""

from typing import Any

from dash import html

from ergo.board.draft import Draft, problems_by_field
from ergo.board.ids import Id


def problems(draft: Draft) -> list[Any]:
    """Return every problem with its place, empty when the study is sound."""
    told = problems_by_field(draft.problems)
    if not told:
        return []
    head = "This is not a study yet. The pictures show the last one that was." if draft.good else "Not a study yet."
    rows = [html.Li([html.Code(where), " ", text]) for where, text in told.items()]
    return [html.P(head), html.Ul(rows)]


def conflict() -> list[Any]:
    """Return the choice when another tab has changed the same work."""
    return [
        html.P("This study was changed in another tab since this tab last saw it. Nothing was overwritten; undo reaches both."),
        html.Button("Show what the other tab has", id=Id.CONFLICT_TAKE),
        html.Button("Keep what this tab has", id=Id.CONFLICT_KEEP),
    ]
