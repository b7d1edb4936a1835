"""Exports: drawings, tables, the study, the report; saving into the folder."""

import io
import json
import re
from typing import Any

from dash import ALL, Dash, Input, Output, State, ctx, dcc, no_update
from dash.exceptions import PreventUpdate

from ergo.board import drawings, opening
from ergo.board.callbacks.answers import results_of
from ergo.board.guard import work_key
from ergo.board.ids import Id, Part
from ergo.board.jobs import Job
from ergo.board.layouts import search
from ergo.board.room import Room
from ergo.board.store import Work
from ergo.errors import PullwardError
from ergo.evaluation.results import Results

FRAMES = {"stroke": Results.stroke_frame, "ratings": Results.ratings_frame, "people": Results.people_frame}


def register(app: Dash, room: Room) -> None:
    """Make exports work on every page that offers them."""
    _export(app, room)
    _save(app, room)
    _report(app, room)


def _export(app: Dash, room: Room) -> None:
    """Hand out drawings, tables and the study."""

    @app.callback(
        Output(Id.DOWNLOAD, "data"),
        Output(Id.RASTER, "data"),
        Input({"type": str(Part.EXPORT), "path": ALL}, "n_clicks"),
        State(Id.VARIANT, "value"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def taken(clicks: list[int], variant: str, tab: str) -> tuple[Any, Any]:
        if not any(clicks) or not isinstance(ctx.triggered_id, dict) or not ctx.triggered[0]["value"]:
            raise PreventUpdate
        work = room.store.work(work_key())
        kind, _, what = str(ctx.triggered_id["path"]).partition(":")
        if work.draft is None or work.draft.good is None:
            raise PreventUpdate
        stem = file_stem(work)
        if kind == "toml":
            return dcc.send_string(work.draft.good.as_toml(), f"{stem}.toml"), no_update
        results = results_of(room, work, variant, tab)
        if kind == "png":
            drawing = drawings.named(what, results)
            return no_update, {"svg": drawing.svg, "name": f"{stem}_{what}.png"}
        return exported(kind, what, results, stem), no_update


def _save(app: Dash, room: Room) -> None:
    """Save into the folder given."""

    @app.callback(
        Output(Id.SAVE_SAYS, "children"),
        Input(Id.SAVE, "n_clicks"),
        State(Id.SAVE_NAME, "value"),
        prevent_initial_call=True,
    )
    def saved(clicks: int, name: str | None) -> str:
        work = room.store.work(work_key())
        if not clicks or room.folder is None or work.draft is None:
            raise PreventUpdate
        if not work.draft.sound or work.draft.good is None:
            return "Not saved: this is not a study yet; its problems stand beside the fields."
        try:
            target = opening.save_into(room.folder, str(name or ""), work.draft.good.as_toml())
        except PullwardError as error:
            return f"Not saved: {error}."
        return f"Saved as {target.name}."

    app.clientside_callback(
        "function(sent) { return dash_clientside.board.raster(sent); }",
        Output(Id.HEARD, "data", allow_duplicate=True), Input(Id.RASTER, "data"), prevent_initial_call=True,
    )  # fmt: skip


def _report(app: Dash, room: Room) -> None:
    """Make the report in the background, and hand it out when it is done."""

    @app.callback(
        Output(Id.REPORT_JOB, "data"),
        Input(Id.REPORT, "n_clicks"),
        State(Id.VARIANT, "value"),
        State(Id.TAB, "data"),
        prevent_initial_call=True,
    )
    def start(clicks: int, variant: str, tab: str) -> str:
        work, make = room.store.work(work_key()), room.make_report
        if not clicks or make is None or work.draft is None or work.draft.good is None:
            raise PreventUpdate

        def made(job: Job) -> bytes:
            job.tell(0.1, "judging the study")
            results = results_of(room, work, variant, tab)
            job.tell(0.7, "writing the report")
            return make(results)

        return room.jobs.start(work.key, "report", made).key

    @app.callback(
        Output(Id.REPORT_SAYS, "children"),
        Output(Id.REPORT_TICK, "disabled"),
        Output(Id.DOWNLOAD, "data", allow_duplicate=True),
        Input(Id.REPORT_JOB, "data"),
        Input(Id.REPORT_TICK, "n_intervals"),
        prevent_initial_call=True,
    )
    def watch(key: str | None, _: int) -> tuple[Any, bool, Any]:
        if not key:
            raise PreventUpdate
        work = room.store.work(work_key())
        job = room.jobs.of(work.key, key)
        if job is None:
            return "The report is lost: the board was started anew. Make it again.", True, no_update
        if not job.done.is_set():
            return search.progress(job), False, no_update
        if job.trouble:
            return f"No report: {job.trouble}", True, no_update
        return "The report is in your downloads.", True, dcc.send_bytes(job.result, f"{file_stem(work)}_report.pdf")


def exported(kind: str, what: str, results: Results, stem: str) -> Any:
    """Return a download of one drawing or table."""
    if kind == "svg":
        return dcc.send_string(drawings.named(what, results).svg, f"{stem}_{what}.svg")
    if kind == "csv" and what in FRAMES:
        return dcc.send_string(FRAMES[what](results).to_csv(index=False), f"{stem}_{what}.csv")
    if kind == "xlsx":
        return dcc.send_bytes(workbook(results), f"{stem}.xlsx")
    if kind == "json":
        text = json.dumps(results.to_dict(), sort_keys=True, indent=1, ensure_ascii=False)
        return dcc.send_string(text, f"{stem}_results.json")
    raise PreventUpdate


def workbook(results: Results) -> bytes:
    """Return every table as one XLSX file."""
    import pandas as pd

    out = io.BytesIO()
    with pd.ExcelWriter(out, engine="openpyxl") as book:
        for name, frame in FRAMES.items():
            frame(results).to_excel(book, sheet_name=name, index=False)
        pd.DataFrame([dict(s) for s in results.sources]).to_excel(book, sheet_name="sources", index=False)
        pd.DataFrame({"caution": results.cautions}).to_excel(book, sheet_name="cautions", index=False)
    return out.getvalue()


def file_stem(work: Work) -> str:
    """Return the study's file name without its ending, safe for any file system."""
    return re.sub(r"[^\w.+-]+", "_", work.name.removesuffix(".toml"))[:60].strip("_.") or "study"
