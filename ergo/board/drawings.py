"""The one place where the board asks for pictures: SVG text whose inks follow the page's theme."""

import dataclasses

from ergo.evaluation.results import Results
from ergo.pictures import bench_view, left_out_view, stroke_view, theme
from ergo.pictures.sheet import Drawing
from ergo.pictures.theme import Ink


def page_ink() -> Ink:
    """Return inks that the page's style sheet fills in, so that one drawing serves every theme and the printer."""
    names = [f.name for f in dataclasses.fields(Ink) if f.name != "band"]
    return Ink(**{n: f"var(--{n.replace('_', '-')})" for n in names}, band=tuple(f"var(--band-{n})" for n in (1, 2, 3)))


PAGE = page_ink()
THEMES = {"light": theme.LIGHT, "dark": theme.DARK, "print": theme.PRINT}


def machine(results: Results, ink: Ink = PAGE, *, width: float = 640.0, height: float = 560.0) -> Drawing:
    """Return the dimensioned views of bench, lever, linkage and handle path."""
    return bench_view.machine_drawing(results, ink, width=width, height=height)


def operators(results: Results, position: int | None, ink: Ink = PAGE) -> Drawing:
    """Return three operators at the lever at one stroke position."""
    return bench_view.operators_drawing(results, position, ink)


def stroke(results: Results, ink: Ink = PAGE, *, width: float = 640.0, height: float = 240.0) -> Drawing:
    """Return the stroke chart: needed and allowed force."""
    return stroke_view.stroke_drawing(results, ink, width=width, height=height)


def mm_per_unit(machine_drawing: Drawing) -> float:
    """Return the millimetres of the machine in a unit of its drawing, from the scale in its title."""
    scale = machine_drawing.title.partition("1 : ")[2].split()[0]
    return float(scale) / theme.UNITS_PER_PAPER_MM


def stroke_span(drawing: Drawing) -> tuple[float, float]:
    """Return where the stroke begins and ends on the chart's sheet, so that a pointer can be put in step with it."""
    return stroke_view.LEFT, drawing.width - stroke_view.RIGHT


def left_out(results: Results, ink: Ink = PAGE) -> Drawing:
    """Return a dot a person, served or lost, by stature and strength."""
    return left_out_view.people_drawing(results, ink)


def left_out_strip(results: Results, ink: Ink = PAGE) -> Drawing:
    """Return the share lost along the stroke, stacked by limit."""
    return left_out_view.strip_drawing(results, ink)


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
