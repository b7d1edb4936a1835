"""Edits: applied in the order in which the hand made them, answered with what stands in the fields now."""

from typing import Any

from dash import ALL, Dash, Input, Output, State, no_update
from dash.exceptions import PreventUpdate

from ergo.board.controls import control_paths, field_values, read_value
from ergo.board.draft import Draft, problems_by_field, value_at
from ergo.board.guard import work_key
from ergo.board.ids import Id, Part
from ergo.board.layouts import notices, values
from ergo.board.room import Room
from ergo.board.store import OtherTabError, Work

MOST_EDITS = 64
ZONE = {"role": "hazard", "shape": "box", "size_mm": [100.0, 100.0, 100.0]}


def register(app: Dash, room: Room) -> None:
    """Make the values work."""
    _edit(app, room)
    _hear(app)


def _edit(app: Dash, room: Room) -> None:
    """Apply edits, and build the drawer anew when its keys have changed."""

    @app.callback(
        Output(Id.ARRIVED, "data"),
        Output(Id.CONFLICT, "children"),
        Input(Id.EDIT, "data"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def edited(sent: dict[str, Any], tab: str) -> tuple[Any, Any]:
        work = room.store.work(work_key())
        with work.lock:
            try:
                return apply_edits(work, sent, str(tab)[:32]), ""
            except OtherTabError:
                refused = [e for e in _edits(sent) if e.get("do") == "set"]
                return {"n": _last_number(sent), "conflict": True, "refused": refused}, notices.conflict()

    @app.callback(
        Output(Id.VALUES, "children"),
        Output(Id.VALUES_PROBLEMS, "children"),
        Output(Id.VALUES_SHAPE, "data"),
        Input(Id.ARRIVED, "data"),
        State(Id.VALUES_SHAPE, "data"),
        prevent_initial_call=True,
    )
    def drawer(_: Any, built: str) -> tuple[Any, Any, Any]:
        draft = room.store.work(work_key()).draft
        if draft is None:
            raise PreventUpdate
        shape = values.shape(draft)
        if shape == built:
            return no_update, notices.problems(draft), no_update
        return values.drawer(draft), notices.problems(draft), shape


def _hear(app: Dash) -> None:
    """Let the page hear its own controls, and what the server says to them."""
    arguments = [Input({"type": str(part), "path": ALL}, prop) for part, prop in
                 ((Part.VALUE, "value"), (Part.VALUE, "checked"), (Part.SLIDER, "value"))]  # fmt: skip
    app.clientside_callback(
        "function() { return dash_clientside.board.changed.apply(null, arguments); }",
        Output(Id.HEARD, "data"),
        *arguments,
        prevent_initial_call=True,
    )
    app.clientside_callback(
        "function(state) { return dash_clientside.board.arrived(state); }",
        Output(Id.HEARD, "data", allow_duplicate=True),
        Input(Id.ARRIVED, "data"),
        prevent_initial_call=True,
    )


def apply_edits(work: Work, sent: dict[str, Any], tab: str) -> dict[str, Any]:
    """Apply every edit that was not applied before; return the state of the fields."""
    seen = sent.get("seen")
    seen = seen if isinstance(seen, int) else work.change if seen is None else 0
    done = work.numbers.get(tab, 0)
    for edit in _edits(sent):
        number = int(edit.get("n", 0))
        if number <= done:
            continue
        _apply(work, edit, tab, max(seen, work.seen_by.get(tab, 0)))
        work.numbers[tab] = done = number
        work.seen_by[tab] = work.change
    return state_of(work, done, str(sent.get("phase", "rest")))


def _apply(work: Work, edit: dict[str, Any], tab: str, seen: int) -> None:
    kind, path = edit.get("do"), str(edit.get("path", ""))[:200]
    if kind in ("undo", "redo"):
        work.undo(tab=tab, seen=seen, steps=-1 if kind == "undo" else 1)
    elif kind == "take":
        work.seen_by[tab] = work.change
    elif kind == "keep":
        for mine in _edits(edit):
            _set(work, mine, tab, seen, keep_mine=True)
    elif work.draft is None or kind == "rest":
        return
    elif kind == "set":
        _set(work, edit, tab, seen)
    elif kind == "add" and path in ("zones", "touch_points", "screw", "structure"):
        work.replace(_with_entry(work.draft.data, path), why=f"add to {path}", tab=tab, seen=seen)
    elif kind == "remove":
        work.replace(_without(work.draft.data, path), why=f"take out {path}", tab=tab, seen=seen)


def _set(work: Work, edit: dict[str, Any], tab: str, seen: int, *, keep_mine: bool = False) -> None:
    path = str(edit.get("path", ""))[:200]
    rows = control_paths(work.draft.data) if work.draft else {}
    row = rows.get(path) or rows.get(path.rpartition("[")[0])
    if row is None and path.rpartition(".")[2] not in ("kind", "shape"):
        return
    value = read_value(edit.get("value"), row)
    if work.draft is not None and value_at(work.draft.data, path) == value and not keep_mine:
        return
    work.apply(path, value, tab=tab, seen=seen, keep_mine=keep_mine)


def _edits(sent: dict[str, Any]) -> list[dict[str, Any]]:
    found = sent.get("edits") if isinstance(sent, dict) else None
    return [e for e in (found or [])[:MOST_EDITS] if isinstance(e, dict)]


def _last_number(sent: dict[str, Any]) -> int:
    return max((int(e.get("n", 0)) for e in _edits(sent)), default=0)


def _with_entry(data: dict[str, Any], section: str) -> dict[str, Any]:
    """Return the data with another zone or touch point over the bench, or with an empty section to fill in."""
    if section in ("screw", "structure"):
        return {**data, section: {}}
    taken = list(data.get(section, ()))
    top = value_at(data, "bench.surface_height_mm")
    place = [0.0, 300.0, (float(top) if isinstance(top, (int, float)) else 900.0) + 100.0]
    name = f"{section.removesuffix('s').replace('_', ' ')} {len(taken) + 1}"
    entry = {"name": name, **ZONE, "centre_mm": place} if section == "zones" else {"name": name, "at_mm": place}
    return {**data, section: [*taken, entry]}


def _without(data: dict[str, Any], path: str) -> dict[str, Any]:
    section, _, number = path.partition("[")
    if not number:
        return {k: v for k, v in data.items() if k != section or section not in ("screw", "structure")}
    return {**data, section: [e for n, e in enumerate(data.get(section, ())) if f"[{n}]" != f"[{number}"]}


def state_of(work: Work, number: int, phase: str) -> dict[str, Any]:
    """Return what the page has to know about the fields."""
    draft: Draft | None = work.draft
    if draft is None:
        return {"n": number, "change": work.change, "values": {}, "problems": {}, "problem_list": [], "sound": True,
                "title": "no study yet", "can_undo": False, "can_redo": False, "phase": phase}  # fmt: skip
    return {
        "n": number,
        "change": work.change,
        "phase": phase,
        "values": field_values(draft.data),
        "problems": problems_by_field(draft.problems),
        "problem_list": values.problem_list(draft),
        "sound": draft.sound,
        "title": str(value_at(draft.data, "study.title") or work.name),
        "can_undo": work.can_undo,
        "can_redo": work.can_redo,
    }

