"""The bench drawing against the geometry of the made results."""

import math
import xml.etree.ElementTree as ET

import numpy as np
import pytest

from ergo.pictures import theme
from ergo.pictures.bench_view import Layers, machine_drawing
from ergo.pictures.linkage_lines import linkage_points
from ergo.pictures.machine_lines import lever_points, zone_outline
from ergo.pictures.operators_view import operators_drawing
from ergo.pictures.projection import SIDE, Frame
from ergo.pictures.ribbon import WIDEST, force_scale, overrun_at, overrun_path

SVG = "{http://www.w3.org/2000/svg}"


def groups(svg, name):
    return [g for g in ET.fromstring(svg).iter(f"{SVG}g") if g.attrib.get("class") == name]


def words(svg):
    return [t.text for t in ET.fromstring(svg).iter(f"{SVG}text")]


def test_what_the_study_sets_is_dimensioned_with_its_key(short):
    svg = machine_drawing(short).svg
    assert {"length 300", "250 from edge", "210 over bench", "start −10°", "end 60°"} <= set(words(svg))
    keys = {g.attrib["data-key"] for g in groups(svg, "dimension") if g.attrib.get("data-key")}
    assert {"lever.length_mm", "lever.start_deg", "lever.end_deg", "lever.pivot_mm", "linkage.arm_mm"} <= keys


def test_zones_and_touch_points_are_named(short):
    assert {"punch", "guide post", "spindle switch"} <= set(words(machine_drawing(short).svg))


def test_the_lever_is_drawn_at_start_middle_and_end_in_both_views(short):
    drawn = [g.attrib["data-stroke"] for g in groups(machine_drawing(short).svg, "lever")]
    assert sorted(drawn) == sorted(["0.000", "0.500", "1.000"] * 2)


def test_lever_ends_lie_where_sine_and_cosine_put_them(short, factory):
    made = lever_points(short)
    angle = math.radians(factory.START)
    expected = (
        factory.PIVOT[0],
        factory.PIVOT[1] - 300.0 * math.sin(angle),
        factory.PIVOT[2] + 300.0 * math.cos(angle),
    )
    assert made["end"][0] == pytest.approx(expected)


def test_the_link_keeps_its_length_and_the_slide_its_line(short, factory):
    points = linkage_points(short)
    link = np.linalg.norm(points["slide_pin"] - points["arm_pin"], axis=1)
    assert link == pytest.approx(np.full(factory.POSITIONS, 110.0))
    # Slide direction 180 degrees is straight down, and the line passes through the pivot.
    assert points["slide_pin"][:, 1] == pytest.approx(np.full(factory.POSITIONS, factory.PIVOT[1]))


def test_the_ribbon_is_widest_where_the_hand_force_is_largest(short):
    per_newton, bar = force_scale(short)
    assert per_newton * 140.0 == pytest.approx(WIDEST)
    assert bar == 100.0


def test_pull_has_open_chevrons_and_push_filled_ones(short, factory):
    from dataclasses import replace

    def marks(results):
        svg = machine_drawing(results, layers=Layers(ribbon=True, dimensions=False)).svg
        ribbon = groups(svg, "ribbon")[0]
        chevrons = [e for e in ribbon if len(e.attrib.get("points", "").split()) == 3]
        return {(e.tag.removeprefix(SVG), e.attrib["fill"] != "none") for e in chevrons}

    pushed = replace(short, stroke=replace(short.stroke, pull=-np.abs(short.stroke.pull)))
    assert marks(short) == {("polyline", False)}
    assert marks(pushed) == {("polygon", True)}


def test_the_tail_of_the_overrun_is_as_long_as_the_overrun(short):
    overrun = overrun_at(short, 0.8)
    assert overrun == pytest.approx([38.0, 61.0, 94.0])
    tail = overrun_path(short, 0.8, 94.0, count=400)
    # Chords of a circle of 300 mm radius, 20 of them over the stroke, are shorter than their arcs by under 0.1 %.
    assert np.linalg.norm(np.diff(tail, axis=0), axis=1).sum() == pytest.approx(94.0, rel=2e-3)


def test_the_let_go_is_a_break_with_a_tail_and_a_fan(short, meets, factory):
    svg = machine_drawing(short).svg
    assert groups(svg, "let-go")
    assert groups(svg, "overrun")
    still = factory.made(load__lets_go_at=None)
    assert not groups(machine_drawing(still).svg, "let-go")


def test_hazards_are_hatched_once_and_obstacles_twice(short):
    svg = machine_drawing(short).svg
    roles = {g.attrib["data-name"]: g.attrib["data-role"] for g in groups(svg, "zone")}
    assert roles == {"punch": "hazard", "guide post": "obstacle"}


def test_a_box_seen_from_the_side_is_its_own_rectangle(short):
    outline = zone_outline(Frame(SIDE, 1.0, (0.0, 0.0)), short.study["zones"][0])
    size = outline.max(axis=0) - outline.min(axis=0)
    assert size == pytest.approx([60.0 * 4.0, 80.0 * 4.0])


@pytest.mark.parametrize("axis", ["fore-aft", "upright", [0.5, 0.5, 0.7]])
def test_every_axis_and_every_ink_can_be_drawn(factory, axis):
    for ink in theme.INKS.values():
        drawn = ET.fromstring(machine_drawing(factory.made(lever__axis=axis), ink).svg)
        assert drawn.tag.endswith("svg")
        assert len(list(drawn.iter())) > 50  # lever, ribbon, bench and dimensions take many more


@pytest.mark.parametrize(
    "linkage",
    [
        {"kind": "rack", "pinion_radius_mm": 20.0},
        {"kind": "handle"},
        {"kind": "slotted arm", "slide_offset_mm": 40.0, "slide_direction_deg": 90.0, "arm_offset_deg": 150.0},
        {"kind": "fixed pin", "arm_mm": 45.0, "play_mm": 1.0, "slide_direction_deg": 180.0, "arm_offset_deg": 75.0},
    ],
)
def test_every_linkage_can_be_drawn(factory, linkage):
    from dataclasses import replace

    made = factory.made()
    drawing = machine_drawing(replace(made, study={**made.study, "linkage": linkage}))
    assert ET.fromstring(drawing.svg).tag == f"{SVG}svg"
    assert "nan" not in drawing.svg


def test_women_are_dashed_and_men_solid(short):
    svg = operators_drawing(short, 0, inked=-1).svg
    dashes = {}
    for g in groups(svg, "person"):
        outlines = [e.attrib.get("stroke-dasharray", "") for e in g if e.tag == f"{SVG}polygon"]
        dashes[g.attrib["data-name"]] = set(outlines)
    assert dashes["small woman (P5)"] == {theme.WOMEN_DASH}
    assert dashes["large man (P95)"] == {""}


def test_reach_lines_are_named(short):
    assert [g.attrib["data-name"] for g in groups(operators_drawing(short).svg, "reach")] == [
        "small woman (P5)",
        "large man (P95)",
    ]


def test_the_text_twin_says_what_the_drawing_says(short):
    rows = {name: (value, key) for name, value, key in machine_drawing(short).rows}
    assert rows["lever length"] == ("300\u202fmm", "lever.length_mm")
    assert rows["link"] == ("110.0\u202fmm", "linkage.link_mm")


def test_the_same_results_give_the_same_bytes(factory):
    assert machine_drawing(factory.made()).svg == machine_drawing(factory.made()).svg
