"""Search: vary one value between two ends, or ask for the smallest changes that meet the targets."""

from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html

from ergo.board.attributes import attributes
from ergo.board.ids import Id
from ergo.board.jobs import Job
from ergo.board.searching import MOST_STEPS, best
from ergo.evaluation.results import RATING_NAMES
from ergo.pictures.ratings_view import label


def page(keys: dict[str, str], *, suggests: bool) -> html.Div:
    """Return the page."""
    first = "lever.length_mm" if "lever.length_mm" in keys else next(iter(keys), None)
    choices = [{"value": path, "label": words} for path, words in keys.items()]
    parts: list[Any] = [
        html.H2("Search"),
        html.H3("Vary one value"),
        html.Div(
            [
                dmc.Select(id=Id.SWEEP_KEY, label="value", data=choices, value=first, searchable=True, size="xs",
                           allowDeselect=False, className="wide-select"),
                dmc.NumberInput(id=Id.SWEEP_LOW, label="from", size="xs", hideControls=True),
                dmc.NumberInput(id=Id.SWEEP_HIGH, label="to", size="xs", hideControls=True),
                dmc.NumberInput(id=Id.SWEEP_STEPS, label="placements", value=9, min=2, max=MOST_STEPS, size="xs",
                                hideControls=True),
                html.Button("Try them", id=Id.SWEEP, n_clicks=0),
                html.Button("Stop", id=Id.SWEEP_STOP, n_clicks=0, disabled=True),
            ],
            className="row form-row",
        ),
        html.Div(id=Id.SWEEP_SAYS, role="status"),
        html.Div(id=Id.SWEEP_TABLE),
    ]  # fmt: skip
    if suggests:
        parts += [
            html.H3("Smallest changes that meet the targets"),
            html.P("Only the values that the study sets free may change: Targets, free, on the Bench page."),
            html.Div([html.Button("Suggest", id=Id.SUGGEST, n_clicks=0),
                      html.Button("Stop", id=Id.SUGGEST_STOP, n_clicks=0, disabled=True)], className="row"),
            html.Div(id=Id.SUGGEST_SAYS, role="status"),
            html.Div(id=Id.SUGGEST_TABLE),
        ]  # fmt: skip
    parts += [dcc.Store(id=Id.JOB), dcc.Interval(id=Id.JOB_TICK, interval=250, disabled=True)]
    return html.Div(parts, className="page")


def progress(job: Job) -> list[Any]:
    """Return how far a job is, in words and as a bar."""
    if job.done.is_set():
        return [html.P(job.trouble or job.what_done)]
    return [
        html.Progress(value=f"{job.share:.3f}", max="1", **attributes(aria_label="Progress")),
        html.Span(f" {job.what}"),
    ]


def table(job: Job, path: str, words: str) -> Any:
    """Return the placements judged so far; those that meet every target, or serve most, are marked."""
    if not job.rows:
        return []
    names = [n for n in RATING_NAMES if any(n in r.get("ratings", {}) for r in job.rows)]
    marked = set(best(job.rows))
    head = html.Tr([html.Th(c, scope="col") for c in (words, "verdict", *map(label, names), "what to do")])
    body = [_row(n, row, names, path, n in marked) for n, row in enumerate(job.rows)]
    count = next((r["count"] for r in job.rows if "count" in r), 0)
    caption = html.Caption(f"Judged with {count} operators; the rows set off meet every target, or serve most")
    return html.Div(html.Table([caption, html.Thead(head), html.Tbody(body)], className="kept"), className="table",
                    tabIndex="0", role="region", **attributes(aria_label="Placements judged"))  # fmt: skip


def _row(n: int, row: dict[str, Any], names: list[str], path: str, marked: bool) -> html.Tr:
    value = html.Td(f"{row['value']:g}", className="number")
    if "ratings" not in row:
        return html.Tr([value, html.Td(row["problem"], colSpan=len(names) + 2)])
    cells = []
    for name in names:
        rating = row["ratings"].get(name, {})
        shown = rating.get("value")
        mark = [] if rating.get("met", True) else [html.Span(className="mark mark-short"), " "]
        cells.append(html.Td([*mark, "not rated" if shown is None else f"{shown:.1f}"], className="number"))
    button = html.Button("Put in", className="quiet", **attributes(data_path=path, data_value=f"{row['value']:g}",
                                                                   aria_label=f"Put in {row['value']:g}"))  # fmt: skip
    verdict = "meets" if row["verdict"] == "meets" else "falls short"
    return html.Tr([value, html.Td(verdict), *cells, html.Td(button, className="acts")], className="reference" if marked else "")
