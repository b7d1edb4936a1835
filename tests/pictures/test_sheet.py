"""The sheet: text as SVG holds it, numbers as print has them, hatching inside its outline."""

import math
import xml.etree.ElementTree as ET

import numpy as np
import pytest

from ergo.pictures import theme
from ergo.pictures.sheet import Sheet, coordinate, figure, plain, quantity

SQUARE = np.array([[10.0, 10.0], [110.0, 10.0], [110.0, 60.0], [10.0, 60.0]])


def test_numbers_have_a_true_minus_and_no_negative_zero():
    assert figure(-3.14159, 2) == "−3.14"
    assert figure(-0.001, 1) == "0.0"
    assert figure(float("nan")) == "not covered"


def test_a_quantity_has_its_unit_after_a_thin_space():
    assert quantity(12.34, "N", 1) == "12.3\u202fN"
    assert quantity(float("inf"), "N") == "not covered"


def test_coordinates_have_fixed_decimals():
    assert coordinate(1.0 / 3.0) == "0.33"
    assert coordinate(-0.001) == "0.00"


@pytest.mark.parametrize(
    ("text", "kept"),
    [
        ("a\x00b\x1bc", "abc"),
        ("one\ntwo\tthree", "one two three"),
        ("\u202egnp.exe", "gnp.exe"),
        ("\ud800x", "x"),
        ("שלום 🙂", "שלום 🙂"),
    ],
)
def test_plain_text_loses_controls_and_direction_marks_only(text, kept):
    assert plain(text) == kept


def test_plain_text_is_cut_with_an_ellipsis():
    assert plain("x" * 50, 10) == "x" * 9 + "…"


def test_markup_in_words_stays_text():
    sheet = Sheet(100, 50, theme.LIGHT)
    hostile = "<script>alert('x')</script> & \"quoted\""
    sheet.words((5, 5), hostile)
    sheet.open("zone", name=hostile)
    sheet.close()
    root = ET.fromstring(sheet.drawing(hostile, hostile, (), ()).svg)
    names = {element.tag.split("}")[1] for element in root.iter()}
    assert "script" not in names
    assert hostile in [element.text for element in root.iter() if element.tag.endswith("text")]
    assert root.attrib["aria-label"] == hostile


def _cuts(crossed):
    sheet = Sheet(200, 100, theme.LIGHT)
    sheet.hatch(SQUARE, crossed=crossed, step=6.0)
    root = ET.fromstring(sheet.drawing("t", "a", (), ()).svg)
    return [
        np.array([[float(v) for v in pair.split(",")] for pair in e.attrib["points"].split()])
        for e in root.iter()
        if e.tag.endswith("polyline")
    ]


def test_hatching_is_at_45_degrees_inside_the_outline():
    cuts = _cuts(crossed=False)
    for cut in cuts:
        run, rise = cut[1] - cut[0]
        # Coordinates are rounded to a hundredth of a unit, so run and rise differ by at most two of them.
        assert abs(abs(run) - abs(rise)) <= 0.021
        assert (cut >= SQUARE.min(axis=0) - 0.01).all()
        assert (cut <= SQUARE.max(axis=0) + 0.01).all()


def test_hatching_covers_the_area_evenly():
    # Lines a step apart have a total length of area over step, but for the partial steps at two corners.
    total = sum(float(np.linalg.norm(cut[1] - cut[0])) for cut in _cuts(crossed=False))
    assert total == pytest.approx(100.0 * 50.0 / 6.0, rel=0.05)


def test_an_obstacle_is_hatched_both_ways():
    slopes = {math.copysign(1.0, (c[1] - c[0]).prod()) for c in _cuts(crossed=True)}
    assert slopes == {1.0, -1.0}
