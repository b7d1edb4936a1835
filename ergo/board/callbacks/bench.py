"""Pictures and ratings: asked for when the fields have changed, put in place when the engine has answered."""

from typing import Any

import numpy as np
from dash import ALL, Dash, Input, Output, Patch, State, ctx, html, no_update
from dash.exceptions import PreventUpdate

from ergo.board import drawings
from ergo.board.callbacks.answers import as_variant
from ergo.board.guard import work_key
from ergo.board.ids import Id, Part
from ergo.board.judge import SupersededError, question_key
from ergo.board.layouts import bench, ratings
from ergo.board.room import Room
from ergo.board.space import CAMERAS, space_figure
from ergo.errors import PullwardError
from ergo.evaluation.results import Results
from ergo.pictures.sheet import quantity
from ergo.study.model import Study


def register(app: Dash, room: Room) -> None:
    """Make the main page work."""
    _draw(app, room)
    _point(app, room)
    _space(app, room)
    _place(app)


def _draw(app: Dash, room: Room) -> None:
    """Ask the engine and draw what it answers."""

    @app.callback(
        Output(Id.DRAWN, "data"),
        Output(Id.RATINGS, "children"),
        Output(Id.SHOWN, "data"),
        Input(Id.ARRIVED, "data"),
        Input(Id.VARIANT, "value"),
        State(Id.TAB, "data"),
    )
    def draw(state: dict[str, Any] | None, variant: str | None, tab: str) -> tuple[Any, Any, Any]:
        work = room.store.work(work_key())
        state = state or {}
        with work.lock:
            draft, change = work.draft, work.change
        if draft is None or draft.good is None or state.get("conflict") or not (draft.sound or not state):
            raise PreventUpdate
        study = as_variant(draft.good, variant)
        phase = state.get("phase")
        more = phase != "drag" and phase != "full" and room.judge.takes_long(study)
        question = room.judge.ask(f"{work.key}:{tab}", study, quick=more or phase == "drag")
        try:
            results = question.wait()
        except SupersededError as error:
            raise PreventUpdate from error
        except (PullwardError, TimeoutError) as error:
            return no_update, refusal(str(error)), no_update
        drawn = bundle(results, question.study, change, full=study.operators.count)
        shown = {"key": drawn["key"], "position": drawn["position"]}
        return {**drawn, "more": more}, ratings.strip(results, drawn["key"]), shown


def _point(app: Dash, room: Room) -> None:
    """Draw the operators at the position under the pointer."""

    @app.callback(Output(Id.PEOPLE_DRAWN, "data"), Input(Id.POINTER, "data"), prevent_initial_call=True)
    def point(asked: dict[str, Any]) -> dict[str, Any]:
        results = room.judge.answer_to(str(asked.get("key", "")))
        if results is None:
            raise PreventUpdate
        position = int(np.clip(int(asked.get("position", 0)), 0, results.stroke.stroke.size - 1))
        return {"key": asked["key"], "position": position, "svg": drawings.operators(results, position).svg,
                "corner": drawings.corner(results, position)}  # fmt: skip


def _space(app: Dash, room: Room) -> None:
    """Show the scene in space, and look at it from where one likes."""

    @app.callback(
        Output(Id.SPACE_PICTURE, "children"),
        Input(Id.VIEW, "data"),
        Input(Id.SHOWN, "data"),
        Input(Id.POINTER, "data"),
        Input(Id.THEME, "forceColorScheme"),
    )
    def space(view: str, shown: Any, pointer: Any, theme: str) -> Any:
        results = room.judge.answer_to(str((shown or {}).get("key", "")))
        if view != "space" or results is None:
            raise PreventUpdate
        asked = pointer if pointer and pointer.get("key") == shown["key"] else shown
        position = int(np.clip(int(asked.get("position", 0)), 0, results.stroke.stroke.size - 1))
        return bench.space(space_figure(results, position, drawings.THEMES[theme]))

    @app.callback(
        Output(Id.SPACE_GRAPH, "figure"),
        Input({"type": str(Part.CAMERA), "path": ALL}, "n_clicks"),
        prevent_initial_call=True,
    )
    def look(clicks: list[int]) -> Any:
        chosen = ctx.triggered_id
        if not any(clicks) or not isinstance(chosen, dict) or chosen["path"] not in CAMERAS:
            raise PreventUpdate
        changed = Patch()
        changed["layout"]["scene"]["camera"] = CAMERAS[chosen["path"]]
        changed["layout"]["uirevision"] = f"{chosen['path']} {sum(clicks)}"
        return changed


def _place(app: Dash) -> None:
    """Let the page put the pictures in place."""

    for name, source in (("drew", Id.DRAWN), ("peopleDrew", Id.PEOPLE_DRAWN)):
        app.clientside_callback(
            f"function(drawn) {{ return dash_clientside.board.{name}(drawn); }}",
            Output(Id.HEARD, "data", allow_duplicate=True),
            Input(source, "data"),
            prevent_initial_call=True,
        )


def bundle(results: Results, study: Study, change: int, *, full: int) -> dict[str, Any]:
    """Return the pictures and what the pointer needs to read them."""
    chart, machine = drawings.stroke(results), drawings.bench(results)
    narrow = drawings.stroke(results, width=390.0, height=300.0)
    position = int(results.stroke.stroke.size // 2)
    count = study.operators.count
    said = f"{count} operators" if count >= full else f"{count} of {full} operators"
    return {
        "change": change,
        "key": question_key(study),
        "machine": machine.svg,
        "charts": {"wide": [chart.svg, *drawings.stroke_span(chart)], "narrow": [narrow.svg, *drawings.stroke_span(narrow)]},
        "operators": drawings.operators(results, position).svg,
        "corner": drawings.corner(results, position),
        "marks": machine.marks,
        "cells": machine.cells,
        "strokes": [round(float(s), 6) for s in results.stroke.stroke],
        "readout": [readout(results, p) for p in range(results.stroke.stroke.size)],
        "position": position,
        "mm_per_unit": machine.mm_per_unit,
        "said": said,
    }


def readout(results: Results, position: int) -> str:
    """Return one stroke position in words."""
    s = results.stroke
    weak = s.allowed_n.get("women_p05")
    parts = [
        f"At {100 * s.stroke[position]:.0f}\u202f% of the stroke",
        f"{quantity(float(s.demand_n[position]), 'N')} needed",
    ]
    if weak is not None:
        parts.append(f"women P5 may give {quantity(float(weak[position]), 'N')}")
    parts.append(f"{100 * float(s.served_share[position]):.1f}\u202f% served here")
    return ", ".join(parts) + "."


def refusal(text: str) -> list[Any]:
    """Return what the ratings say when the engine refuses the study."""
    return [html.Div([html.Span(className="mark mark-short"), html.H2("No ratings")], className="verdict"), html.P(text)]
