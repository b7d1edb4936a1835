"""Search: vary one value between two ends, or ask for the smallest changes that meet the targets."""

import json
from typing import Any

import dash_mantine_components as dmc
from dash import dcc, html

from ergo.board.attributes import attributes
from ergo.board.ids import Id
from ergo.board.jobs import Job
from ergo.board.searching import MOST_FREE, MOST_STEPS, best
from ergo.evaluation.results import RATING_NAMES
from ergo.pictures.ratings_view import label


def page(keys: dict[str, str], free: list[str]) -> html.Div:
    """Return the page; `free` are the keys that a suggestion may change unless others are chosen."""
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
    return html.Div([*parts, *_smallest(choices, free)], className="page")


def _smallest(choices: list[dict[str, str]], free: list[str]) -> list[Any]:
    """Return the part that asks for the smallest changes."""
    return [
        html.H3("Smallest changes that meet every target"),
        html.Div(
            [
                dmc.MultiSelect(id=Id.SUGGEST_KEYS, label="values that may change", data=choices, value=free, searchable=True,
                                size="xs", maxValues=MOST_FREE, className="wide-select"),
                html.Button("Suggest", id=Id.SUGGEST, n_clicks=0),
                html.Button("Stop", id=Id.SUGGEST_STOP, n_clicks=0, disabled=True),
            ],
            className="row form-row",
        ),
        html.P("Each changes between the bounds in the study's targets, or within its slider; the tool keeps its travel.",
               className="note"),
        html.Div(id=Id.SUGGEST_SAYS, role="status"),
        html.Div(id=Id.SUGGEST_TABLE),
        dcc.Store(id=Id.JOB), dcc.Interval(id=Id.JOB_TICK, interval=250, disabled=True),
        dcc.Store(id=Id.SUGGEST_JOB), dcc.Interval(id=Id.SUGGEST_TICK, interval=400, disabled=True),
    ]  # fmt: skip


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


def verdict(job: Job) -> list[Any]:
    """Return how far a suggestion is, or what it came to, in words."""
    if not job.done.is_set() or job.trouble or not isinstance(job.result, dict):
        return progress(job)
    result = job.result
    if result["meets_already"]:
        return [html.P("Meets every target as it stands: nothing has to change.")]
    if result["proposals"]:
        return [html.P(f"{_ways(len(result['proposals']))} to meet every target; {result['trials']} placements were tried.")]
    how = ("Each target can be met alone, but not all at once. Still missed at the nearest: " if result["together"]
           else "Missed by every placement tried: ")  # fmt: skip
    missed = ", ".join(f"{label(b['rating']) if b['rating'] in RATING_NAMES else 'tool travel'} {b['best']:.0f} where"
                       f" {b['target']:.0f} is asked" for b in result["blocked"])  # fmt: skip
    return [html.P(f"No change of these values inside their bounds is enough; {result['trials']} placements were tried."),
            html.P(how + missed + ".")]  # fmt: skip


def _ways(count: int) -> str:
    return "One way" if count == 1 else f"{count} ways"


def proposals(job: Job, keys: dict[str, str]) -> Any:
    """Return the proposals confirmed so far, cheapest first, or the nearest miss."""
    rows = sorted(job.rows, key=lambda row: row["cost"])
    result = job.result if isinstance(job.result, dict) else {}
    nearest = result.get("nearest")
    shown = [(f"Proposal {n}", row) for n, row in enumerate(rows, 1)] or ([("Nearest miss", nearest)] if nearest else [])
    if not shown:
        return []
    head = html.Tr([html.Th(c, scope="col") for c in ("", "changes", *map(label, RATING_NAMES), "what to do")])
    first = shown[0][1]["before"]
    body = [html.Tr([html.Th("as it stands", scope="row"), html.Td("none"), *_values(first), html.Td()])]
    body += [_proposal(name, row, keys) for name, row in shown]
    caption = html.Caption("Judged on the same people")
    return html.Div(html.Table([caption, html.Thead(head), html.Tbody(body)], className="kept"), className="table",
                    tabIndex="0", role="region", **attributes(aria_label="Proposals"))  # fmt: skip


def _proposal(name: str, row: dict[str, Any], keys: dict[str, str]) -> html.Tr:
    changes = [html.Span(f"{keys.get(c['key'], c['key'])} {c['from']:g} to {c['to']:g} {c['unit']}".strip(), className="what")
               for c in row["changes"]]  # fmt: skip
    edits = json.dumps([[c["key"], c["to"]] for c in row["changes"]])
    button = html.Button("Put in", className="quiet", **attributes(data_edits=edits, aria_label=f"Put in {name}"))
    return html.Tr([html.Th(name, scope="row"), html.Td(changes or "none"), *_values(row["after"]),
                    html.Td(button, className="acts")], className="reference" if row["meets"] else "")  # fmt: skip


def _values(kept: dict[str, Any]) -> list[Any]:
    found = [kept.get(name) for name in RATING_NAMES]
    return [html.Td("not rated" if v is None else f"{v:.0f}", className="number") for v in found]
