"""A drawing on a page, its text twin as a table, and the ways to take it away."""

from collections.abc import Callable, Iterable, Sequence
from typing import Any

from dash import html

from ergo.board import drawings
from ergo.board.attributes import attributes
from ergo.board.ids import Part, of
from ergo.evaluation.results import Results
from ergo.pictures.sheet import Drawing


def figure(draw: Callable[[Results, float], Drawing], results: Results, name: str) -> html.Section:
    """Return a drawing for wide and for narrow screens, its twin, and buttons that export it."""
    drawing, narrow = draw(results, drawings.WIDE), draw(results, drawings.NARROW)
    return html.Section(
        [
            html.Figure(className="drawn", **attributes(data_svg=drawing.svg, data_narrow=narrow.svg)),
            html.Div(
                [
                    html.Details([html.Summary("The same as a table"), table(drawing.columns, drawing.rows)]),
                    export("SVG", f"svg:{name}", drawing.title),
                    export("PNG", f"png:{name}", drawing.title),
                ],
                className="figure-foot",
            ),
        ],
        className="figure", **attributes(aria_label=drawing.title),
    )  # fmt: skip


def export(text: str, path: str, what: str = "") -> html.Button:
    """Return a button that takes something away."""
    extra = attributes(aria_label=f"{text}, {what}") if what else {}
    return html.Button(text, id=of(Part.EXPORT, path), n_clicks=0, className="quiet", **extra)


def table(columns: Sequence[str], rows: Iterable[Sequence[Any]], *, caption: str = "", numbers: Sequence[int] = ()
          ) -> html.Div:  # fmt: skip
    """Return a plain table; `numbers` are the columns set to the right."""
    right = dict.fromkeys(numbers, "number")
    head = html.Thead(html.Tr([html.Th(c, scope="col", className=right.get(n, "")) for n, c in enumerate(columns)]))
    body = html.Tbody([html.Tr([html.Td(c, className=right.get(n, "")) for n, c in enumerate(row)]) for row in rows])
    top = [html.Caption(caption)] if caption else []
    return html.Div(html.Table([*top, head, body]), className="table", tabIndex="0", role="region",
                    **attributes(aria_label=caption or f"Table of {columns[0] if columns else 'values'}"))  # fmt: skip
