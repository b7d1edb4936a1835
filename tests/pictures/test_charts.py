"""Stroke chart, ratings and who is left out, against the made results."""

import xml.etree.ElementTree as ET
from dataclasses import replace

import numpy as np
import pytest

from ergo.pictures import theme
from ergo.pictures.left_out_view import limits_met, lost_by_limit, people_drawing, shapes_of, strip_drawing
from ergo.pictures.ratings_view import ordered, ratings_drawing
from ergo.pictures.stroke_view import BOTTOM, LEFT, RIGHT, TOP, force_top, nice_step, spread, stroke_drawing

SVG = "{http://www.w3.org/2000/svg}"


def group(svg, kind, **data):
    for g in ET.fromstring(svg).iter(f"{SVG}g"):
        if g.attrib.get("class") == kind and all(g.attrib.get(f"data-{k}") == v for k, v in data.items()):
            return g
    raise AssertionError(kind)


def corners(element):
    return np.array([[float(v) for v in pair.split(",")] for pair in element.attrib["points"].split()])


def test_the_needed_force_is_drawn_where_the_axes_put_it(short):
    drawing = stroke_drawing(short, width=680.0, height=330.0)
    curve = corners(next(iter(group(drawing.svg, "demand"))))
    top = force_top(short)
    expected_x = LEFT + (680.0 - LEFT - RIGHT) * 0.8
    expected_y = (330.0 - BOTTOM) - (330.0 - BOTTOM - TOP) * 140.0 / top
    assert curve[16] == pytest.approx([expected_x, expected_y], abs=0.01)


def test_the_table_line_ends_where_the_table_does(short):
    drawing = stroke_drawing(short)
    line = corners(next(e for e in group(drawing.svg, "limit", name="table_n") if e.tag == f"{SVG}polyline"))
    # The made table is known below 70 % of the stroke: its last position is 65 %.
    assert line[-1, 0] == pytest.approx(LEFT + (680.0 - LEFT - RIGHT) * 0.65, abs=0.01)


def test_the_bold_line_is_the_needed_force(short):
    svg = stroke_drawing(short).svg
    demand = float(next(iter(group(svg, "demand"))).attrib["stroke-width"])
    assert demand > theme.MACHINE > theme.THIN


def test_the_twin_has_every_tenth_with_units(short):
    rows = stroke_drawing(short).rows
    assert len(rows) == 11
    assert rows[0][:2] == ("0\u202f%", "40\u202fN")
    assert rows[8][1] == "140\u202fN"
    assert rows[8][6] == "not covered"


@pytest.mark.parametrize(("top", "step"), [(10.0, 2.0), (12.0, 2.5), (480.0, 100.0), (0.04, 0.01)])
def test_axis_steps_are_round(top, step):
    assert nice_step(top) == pytest.approx(step)


def test_names_are_spread_apart_inside_their_room():
    places = spread([50.0, 51.0, 52.0, 99.0], 40.0, 100.0)
    assert np.diff(places).min() >= 12.0 - 1e-9
    assert places[-1] <= 100.0
    assert places[0] >= 40.0


def test_ratings_that_fall_short_come_first_and_carry_a_square(short):
    assert ordered(short)[:2] == ["force", "served"]
    svg = ratings_drawing(short).svg
    squares = {
        name: sum(e.tag == f"{SVG}polygon" and corners(e)[0, 0] == 12.0 for e in group(svg, "rating", name=name))
        for name in short.ratings
    }
    assert {name for name, n in squares.items() if n} == {"force", "served"}


def test_every_rating_has_its_sentence_in_the_twin(short):
    rows = {row[0]: row for row in ratings_drawing(short).rows}
    assert rows["let-go"][1] == "91.0"
    assert rows["direction"][2] == "no interval"
    assert {row[5] for row in rows.values()} == {r.reason for r in short.ratings.values()}


def test_each_limit_loses_the_share_that_was_made(short):
    # Two of the eight made operators are lost, one to each limit.
    assert limits_met(short) == [("elbow", 0.125), ("reach", 0.125)]
    assert len(set(shapes_of(short).values())) == 2


def test_nobody_who_is_lost_is_left_off_the_drawing(short):
    crowd = short.crowd
    many = replace(
        crowd,
        **{name: np.tile(getattr(crowd, name), 500) for name in crowd.__dataclass_fields__ if name != "limit"},
        limit=crowd.limit * 500,
    )
    svg = people_drawing(replace(short, crowd=many)).svg
    marks = [e for e in ET.fromstring(svg).iter(f"{SVG}polygon") if e.attrib["fill"] == theme.LIGHT.ink]
    # 2 x 500 lost people, and a mark of each limit in the legend.
    assert len(marks) == 1000 + 2


def test_the_strip_stacks_to_the_share_lost(short):
    names, heights = lost_by_limit(short)
    assert names == ["elbow", "reach"]
    assert heights.sum(axis=0) == pytest.approx(1.0 - short.stroke.served_share)
    assert strip_drawing(short).rows[0][1] == "2.0\u202f%"


def test_nobody_left_out_is_said_in_words(short):
    everyone = replace(short, crowd=replace(short.crowd, served=np.ones(8, dtype=bool)))
    assert people_drawing(everyone).alt == "Nobody of the operators drawn is left out."


@pytest.mark.parametrize("ink", list(theme.INKS))
def test_every_ink_has_enough_contrast_for_text(ink):
    """WCAG 2 contrast of text inks on their paper: at least 4.5 to 1."""

    def luminance(colour):
        parts = [int(colour[k : k + 2], 16) / 255.0 for k in (1, 3, 5)]
        linear = [v / 12.92 if v <= 0.03928 else ((v + 0.055) / 1.055) ** 2.4 for v in parts]
        return 0.2126 * linear[0] + 0.7152 * linear[1] + 0.0722 * linear[2]

    made = theme.INKS[ink]
    for colour in (made.ink, made.grey, made.pull, made.push):
        high, low = sorted((luminance(colour), luminance(made.paper)), reverse=True)
        assert (high + 0.05) / (low + 0.05) >= 4.5
