"""The one place where the board asks for pictures: SVG text whose inks follow the page's theme."""

import dataclasses

from ergo.board.bench_sheet import BenchSheet, bench_sheet, operators_corner
from ergo.board.let_go_sheet import overrun_drawing
from ergo.evaluation.results import Results
from ergo.pictures import bench_view, left_out_view, operators_view, ratings_view, stroke_view, theme
from ergo.pictures.sheet import Drawing
from ergo.pictures.theme import Ink

# Sheets for a wide screen and for one held in the hand; words keep their size on both.
WIDE, NARROW = 560.0, 440.0
BANDS = ("var(--band-1)", "var(--band-2)", "var(--band-3)")


def page_ink() -> Ink:
    """Return inks that the page's style sheet fills in, so that one drawing serves every theme and the printer."""
    names = [f.name for f in dataclasses.fields(Ink) if f.name != "band"]
    return Ink(**{n: f"var(--{n.replace('_', '-')})" for n in names}, band=BANDS)


PAGE = page_ink()
THEMES = {"light": theme.LIGHT, "dark": theme.DARK, "print": theme.PRINT}


def bench(results: Results) -> BenchSheet:
    """Return the bench drawing for the page."""
    return bench_sheet(results, PAGE)


def corner(results: Results, position: int) -> str:
    """Return the operators for the corner of the bench drawing."""
    return operators_corner(results, position, PAGE)


def machine(results: Results, width: float = WIDE) -> Drawing:
    """Return the dimensioned views on a sheet of their own."""
    return bench_view.machine_drawing(results, PAGE, width=width)


def operators(results: Results, position: int | None, ink: Ink = PAGE) -> Drawing:
    """Return three operators at the lever at one stroke position."""
    return operators_view.operators_drawing(results, position, ink, width=640.0, height=430.0)


def stroke(results: Results, *, width: float = 640.0, height: float = 240.0) -> Drawing:
    """Return the stroke chart: needed and allowed force."""
    return stroke_view.stroke_drawing(results, PAGE, width=width, height=height)


def stroke_span(drawing: Drawing) -> tuple[float, float]:
    """Return where the stroke begins and ends on the chart's sheet, so that a pointer can be put in step with it."""
    return stroke_view.LEFT, drawing.width - stroke_view.RIGHT


def left_out(results: Results, width: float = WIDE) -> Drawing:
    """Return a dot a person, served or lost, by stature and strength."""
    return left_out_view.people_drawing(results, PAGE, width=width)


def left_out_strip(results: Results, width: float = WIDE) -> Drawing:
    """Return the share lost along the stroke, stacked by limit."""
    return left_out_view.strip_drawing(results, PAGE, width=width, height=230.0)


def overrun(results: Results, width: float = WIDE) -> Drawing:
    """Return how far the handle runs on, let go at any position."""
    return overrun_drawing(results, PAGE, width=width)


def named(name: str, results: Results) -> Drawing:
    """Return a drawing to take away by its name, in print inks; KeyError for a name that is not one."""
    made = {
        "machine": bench_view.machine_drawing,
        "stroke": stroke_view.stroke_drawing,
        "left_out": left_out_view.people_drawing,
        "left_out_strip": left_out_view.strip_drawing,
        "ratings": ratings_view.ratings_drawing,
    }
    if name == "overrun":
        return overrun_drawing(results, theme.PRINT, width=WIDE)
    if name == "operators":
        return operators_view.operators_drawing(results, ink=theme.PRINT)
    return made[name](results, theme.PRINT)


def theme_css() -> str:
    """Return the inks as custom properties of the page: light, dark, and print."""
    return "\n".join(
        (
            f":root {{ {_properties(theme.LIGHT)} }}",
            f':root[data-mantine-color-scheme="dark"] {{ {_properties(theme.DARK)} }}',
            f"@media print {{ :root, :root[data-mantine-color-scheme] {{ {_properties(theme.PRINT)} }} }}",
        )
    )


def _properties(ink: Ink) -> str:
    fields = [f.name for f in dataclasses.fields(Ink) if f.name != "band"]
    pairs = [(n.replace("_", "-"), getattr(ink, n)) for n in fields]
    pairs += [(f"band-{n}", colour) for n, colour in enumerate(ink.band, 1)]
    return " ".join(f"--{name}: {colour};" for name, colour in pairs)
