"""The report's drawings, all from the drawing module that the board uses."""

from dataclasses import dataclass

from ergo.evaluation.results import Results
from ergo.pictures import theme
from ergo.pictures.bench_view import machine_drawing
from ergo.pictures.left_out_view import people_drawing, strip_drawing
from ergo.pictures.operators_view import operators_drawing
from ergo.pictures.ratings_view import ratings_drawing
from ergo.pictures.sheet import Drawing
from ergo.pictures.stroke_view import stroke_drawing
from ergo.pictures.theme import Ink


@dataclass(frozen=True)
class Drawings:
    """Every drawing of one report."""

    machine: Drawing
    operators: Drawing
    stroke: Drawing
    people: Drawing
    strip: Drawing
    ratings: Drawing

    def all(self) -> tuple[Drawing, ...]:
        """Return them in the order of the report."""
        return self.ratings, self.machine, self.operators, self.stroke, self.people, self.strip


def draw_all(results: Results, ink: Ink = theme.PRINT) -> Drawings:
    """Return the drawings of a report."""
    return Drawings(
        machine=machine_drawing(results, ink, height=860.0),
        operators=operators_drawing(results, ink=ink, height=650.0, inked=-1),
        stroke=stroke_drawing(results, ink),
        people=people_drawing(results, ink, height=300.0),
        strip=strip_drawing(results, ink),
        ratings=ratings_drawing(results, ink),
    )
