"""Every number that decided something: its value, its source, and how well it is known."""

from collections import Counter, defaultdict
from typing import Any

from dash import dcc, html

from ergo.board.ids import Id
from ergo.board.jobs import Job
from ergo.board.layouts.figures import table
from ergo.board.layouts.search import progress
from ergo.evaluation.results import Results
from ergo.sources import STATUS_MEANING, STATUSES, bibliography

COLUMNS = ("number", "value", "status", "source", "where in it")


def page() -> html.Div:
    """Return the page; its body follows the study, the search for what would flip the verdict is asked for."""
    return html.Div(
        [
            html.Div(html.P("The engine is at it.", className="waiting"), id=Id.SOURCES_BODY),
            html.H3("Which of these numbers would flip the verdict?"),
            html.P("Each recalled or derived number alone is moved to the ends of its stated range, for few operators. "
                   "This takes a while."),
            html.Div([html.Button("Look for them", id=Id.FLIPS, n_clicks=0),
                      html.Button("Stop", id=Id.FLIPS_STOP, n_clicks=0, disabled=True)], className="row"),
            html.Div(id=Id.FLIPS_SAYS, role="status"),
            dcc.Store(id=Id.FLIPS_JOB),
            dcc.Interval(id=Id.FLIPS_TICK, interval=500, disabled=True),
        ],
        className="page",
    )  # fmt: skip


def flips_found(job: Job) -> list[Any]:
    """Return what would flip the verdict, as far as it is known."""
    if not job.done.is_set() or job.trouble:
        return progress(job)
    if not job.result:
        return [html.P("None of them alone would change which targets are met.")]
    return [html.Ul([html.Li(f.sentence()) for f in job.result], className="cautions")]


def body(results: Results) -> list[Any]:
    """Return the page's body for results."""
    counts = Counter(row["status"] for row in results.sources)
    used = [row["source"] for row in results.sources]
    return [
        html.H2(f"{counts.get('memory', 0)} of {len(results.sources)} numbers are recalled and not checked against the print."),
        html.Ul([html.Li(text) for text in results.cautions], className="cautions"),
        html.H3("What a status means"),
        table(("status", "meaning", "numbers in this result"),
              [(s, STATUS_MEANING[s], str(counts.get(s, 0))) for s in STATUSES], numbers=(2,)),
        html.H3("The numbers, by table"),
        html.P("Tables with recalled numbers come first."),
        *_tables(results),
        html.H3("Sources used"),
        html.Ul([html.Li([html.Code(key), " ", _entry(key)]) for key in sorted(set(used))], className="entries"),
        html.H3("What the engine says about this study"),
        html.Ul([html.Li(text) for text in results.reasons], className="cautions"),
    ]  # fmt: skip


def _tables(results: Results) -> list[Any]:
    grouped: dict[str, list[Any]] = defaultdict(list)
    for row in results.sources:
        grouped[row["table"]].append(row)
    order = sorted(grouped, key=lambda k: (-sum(r["status"] == "memory" for r in grouped[k]), k))
    return [_table(key, grouped[key]) for key in order]


def _table(key: str, rows: list[Any]) -> html.Details:
    counts = Counter(r["status"] for r in rows)
    told = ", ".join(f"{counts[s]} {s}" for s in reversed(STATUSES) if counts[s])
    title = str(rows[0].get("title", key))
    cells = [
        (
            r.get("row", r.get("name", "")),
            f"{r['value']}\u202f{r['unit']}".strip("\u202f"),
            html.Span(r["status"], className=f"status status-{r['status']}"),
            r["source"],
            r["locator"],
        )
        for r in rows
    ]
    return html.Details(
        [html.Summary([html.Span(title), html.Span(told, className="gist")]), table(COLUMNS, cells, numbers=(1,))],
        className="section",
    )


def _entry(key: str) -> str:
    found = bibliography().get(key)
    return found.entry() if found else "not in the bibliography"
