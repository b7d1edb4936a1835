"""Each linkage kind: closed forms at hand-worked places, dead centres, domains, slot shape, mobility."""

import numpy as np
import pytest

from ergo.mechanism.linkage import (
    KINDS,
    ConnectingLink,
    ConstantRatio,
    CurvedSlot,
    FixedPin,
    HandleLoad,
    MeasuredRatio,
    Rack,
    ShaftLoad,
    SlottedArm,
    TravelCurve,
)

DEG = np.pi / 180.0


def test_there_are_eight_kinds_under_their_names_in_the_study_file():
    assert set(KINDS) == {
        "handle",
        "shaft",
        "rack",
        "connecting link",
        "slotted arm",
        "curved slot",
        "fixed pin",
        "table",
    }


def test_only_the_fixed_pin_has_no_freedom():
    counts = {name: kind.mobility.count for name, kind in KINDS.items()}
    assert counts.pop("fixed pin") == 0
    assert set(counts.values()) == {1}


def test_a_connecting_link_at_right_angles_and_in_line():
    link = ConnectingLink(arm_m=0.03, link_m=0.05)
    # arm square to the slide: a 3-4-5 triangle; arm along it: arm plus link
    np.testing.assert_allclose(link.slide_m([90 * DEG, 0.0, 180 * DEG]), [0.04, 0.08, 0.02], atol=1e-15)
    np.testing.assert_allclose(
        link.slide_per_rad_m([90 * DEG, 0.0, 180 * DEG]), [-0.03, 0.0, 0.0], atol=1e-15
    )
    crossed = ConnectingLink(arm_m=0.03, link_m=0.05, branch="crossed")
    np.testing.assert_allclose(crossed.slide_m([90 * DEG, 0.0]), [-0.04, -0.02], atol=1e-15)


def test_arm_offset_and_slide_direction_turn_the_linkage_as_one():
    plain = ConnectingLink(0.04, 0.09, slide_offset_m=0.02)
    turned = ConnectingLink(
        0.04, 0.09, slide_direction_rad=50 * DEG, slide_offset_m=0.02, arm_offset_rad=70 * DEG
    )
    a = np.linspace(-1.0, 1.0, 7)
    np.testing.assert_allclose(turned.slide_m(a - 20 * DEG), plain.slide_m(a), atol=1e-15)
    arm, slide = turned.pins_m(a)
    np.testing.assert_allclose(np.linalg.norm(arm - slide, axis=1), 0.09, atol=1e-15)


@pytest.mark.parametrize("branch", ["open", "crossed"])
def test_dead_centres_are_where_the_slide_turns_back(branch):
    link = ConnectingLink(
        0.04, 0.09, slide_direction_rad=0.3, slide_offset_m=0.02, arm_offset_rad=0.7, branch=branch
    )
    dead = link.dead_centres_rad(-np.pi, np.pi)
    assert len(dead) == 2
    np.testing.assert_allclose(link.slide_per_rad_m(dead), 0.0, atol=1e-12)
    # stretched and folded: the slide pin stands at r + l and at l - r from the pivot
    reach = np.hypot(link.slide_m(dead), 0.02)
    np.testing.assert_allclose(sorted(reach), [0.05, 0.13], atol=1e-12)


def test_a_link_too_short_to_close_names_the_angle_and_the_length_needed():
    link = ConnectingLink(arm_m=0.08, link_m=0.06)
    found = link.problems(0.0, 90 * DEG)
    # r sin p reaches l at asin(60 / 80) = 48.6 degrees, and r = 80 mm at the end
    assert len(found) == 1
    assert found[0].where == "linkage.link_mm"
    assert "from lever angle 48.6 deg on" in found[0].what
    assert found[0].allowed == "above 80.0 mm"
    assert link.problems(0.0, 48 * DEG) == ()
    assert "from lever angle 60.0 deg on" in link.problems(60 * DEG, 90 * DEG)[0].what


def test_a_link_too_short_only_in_mid_stroke_is_found():
    link = ConnectingLink(arm_m=0.08, link_m=0.07, slide_offset_m=0.005)
    assert link.problems(20 * DEG, 60 * DEG) == ()
    assert "too short to close" in link.problems(60 * DEG, 120 * DEG)[0].what


def test_a_slotted_arm_is_the_tangent_of_the_complement():
    arm = SlottedArm(slide_offset_m=0.05)
    np.testing.assert_allclose(arm.slide_m([90 * DEG, 45 * DEG, 135 * DEG]), [0.0, 0.05, -0.05], atol=1e-15)
    np.testing.assert_allclose(arm.pin_on_arm_m([90 * DEG, 45 * DEG]), [0.05, 0.05 * np.sqrt(2)], atol=1e-15)
    np.testing.assert_allclose(arm.slide_per_rad_m([90 * DEG, 45 * DEG]), [-0.05, -0.1], atol=1e-15)


def test_a_slotted_arm_that_comes_parallel_to_the_slide_names_the_angle():
    found = SlottedArm(0.05, slide_direction_rad=20 * DEG).problems(60 * DEG, -10 * DEG)
    assert "parallel to the slide at lever angle 20.0 deg" in found[0].what
    assert "must not be zero" in SlottedArm(0.0).problems(0.5, 1.0)[0].what


def test_rack_shaft_and_handle_are_straight_lines():
    a = np.linspace(-0.5, 1.0, 5)
    np.testing.assert_allclose(Rack(0.02, 20 * DEG).slide_m(a), 0.02 * a)
    np.testing.assert_allclose(ShaftLoad().slide_m(a), a)
    np.testing.assert_allclose(HandleLoad(0.25).slide_m(a), 0.25 * a)


def test_a_solved_slot_holds_ratio_and_pressure_angle_and_is_a_spiral_through_its_pin():
    slot = CurvedSlot.solved(
        per_rad_m=0.03,
        start_rad=-0.5,
        end_rad=1.0,
        pressure_limit_rad=30 * DEG,
        slide_direction_rad=0.4,
        slide_offset_m=0.01,
    )
    a = np.linspace(-0.5, 1.0, 13)
    np.testing.assert_allclose(np.diff(slot.slide_m(a)), 0.03 * 0.125, atol=1e-15)
    pressure = slot.pressure_angle_rad(a)
    assert pressure.max() == pytest.approx(30 * DEG, abs=1e-12)
    assert np.all(np.diff(pressure) < 0.0)
    # the slot point turned by the lever angle is the pin's place in the station
    shape = slot.slot_shape_m(a)
    seen = (shape[:, 0] + 1j * shape[:, 1]) * np.exp(1j * a)
    pin = (slot.slide_m(a) + 0.01j) * np.exp(0.4j)
    np.testing.assert_allclose(seen, pin, atol=1e-15)


def test_the_pressure_angle_is_the_angle_between_the_slots_normal_and_the_slide():
    slot = CurvedSlot(ConstantRatio(-0.04, 0.0, 0.12), slide_direction_rad=0.3, slide_offset_m=0.02)
    a, h = np.linspace(0.0, 1.0, 6), 1e-6
    tangent = slot.slot_shape_m(a + h) - slot.slot_shape_m(a - h)
    normal = (tangent[:, 0] + 1j * tangent[:, 1]) * 1j * np.exp(1j * a) / np.exp(0.3j)
    angle = np.arctan2(np.abs(normal.imag), np.abs(normal.real))
    # central differences of the slot's shape, h = 1e-6
    np.testing.assert_allclose(slot.pressure_angle_rad(a), angle, atol=1e-8)


def test_a_slot_that_passes_abreast_of_the_pivot_is_refused_with_a_hint():
    slot = CurvedSlot(TravelCurve((0.0, 0.5, 1.0), (0.0, 0.01, 0.02)))
    found = slot.problems(0.0, 1.0)
    assert "abreast of the pivot" in found[0].what
    assert "not from the start" in found[0].suggestion


def test_a_measured_ratio_goes_through_its_points_and_nothing_is_read_beyond():
    curve = TravelCurve((0.0, 0.5, 1.0, 1.5), (0.0, 0.01, 0.015, 0.012))
    ratio = MeasuredRatio(curve)
    np.testing.assert_allclose(ratio.slide_m([0.0, 0.5, 1.0, 1.5]), [0.0, 0.01, 0.015, 0.012], atol=1e-15)
    assert ratio.dead_centres_rad(0.0, 1.5) == (1.0,)
    assert ratio.problems(0.0, 1.5) == ()
    assert "does not cover the stroke" in ratio.problems(0.0, 1.6)[0].what
    with pytest.raises(ValueError, match="outside the measured points"):
        ratio.slide_m([1.6])
    fine = ratio.slide_m(np.linspace(0.0, 1.0, 200))
    assert np.all(np.diff(fine) > 0.0)


@pytest.mark.parametrize(
    ("angles", "slide", "words"),
    [
        ((0.0,), (0.0,), "at least two rows"),
        ((0.0, 1.0, 0.5), (0.0, 0.1, 0.2), "must rise, or fall"),
        ((0.0, np.inf), (0.0, 0.1), "not a finite number"),
    ],
)
def test_bad_rows_of_a_measured_ratio_are_named(angles, slide, words):
    assert words in MeasuredRatio(TravelCurve(angles, slide)).problems(0.0, 1.0)[0].what


@pytest.mark.parametrize(
    "linkage",
    [
        ConnectingLink(0.04, 0.09, 0.3, 0.02, 0.7),
        ConnectingLink(0.04, 0.09, 0.3, 0.02, 0.7, "crossed"),
        SlottedArm(0.05, -1.4, 0.2),
        CurvedSlot(ConstantRatio(0.03, 0.0, 0.1), 0.3, 0.02),
        MeasuredRatio(TravelCurve((-1.0, 0.0, 0.5, 1.2), (0.0, 0.01, 0.02, 0.022))),
        Rack(0.02, 20 * DEG),
        HandleLoad(0.25),
        ShaftLoad(),
    ],
    ids=lambda linkage: linkage.kind,
)
def test_the_slope_is_the_slides_central_difference(linkage):
    a, h = np.linspace(-0.45, 1.05, 12), 1e-5
    slope = (linkage.slide_m(a + h) - linkage.slide_m(a - h)) / (2 * h)
    # h^2 / 6 times a third derivative of the order of 1 m/rad^3, and rounding over h
    np.testing.assert_allclose(linkage.slide_per_rad_m(a), slope, atol=1e-9)


def test_a_fixed_pin_needs_the_versine_and_uses_its_play_up():
    pin = FixedPin(arm_m=0.1, play_m=0.001, slide_direction_rad=-90 * DEG)
    answer = pin.answer(0.0, 20 * DEG)
    assert answer.mobility == 0
    # the arm starts square to the slide: r (1 - cos 20 deg) = 6.03 mm; acos(1 - 0.01) = 8.11 deg
    assert answer.sideways_travel_m == pytest.approx(0.1 * (1.0 - np.cos(20 * DEG)), rel=1e-12)
    assert answer.usable_rad == pytest.approx(np.arccos(0.99), rel=1e-12)
    assert answer.usable_from_start_rad == pytest.approx(np.arccos(0.99), rel=1e-9)
    text = " ".join(answer.sentences())
    assert "mobility count is 0" in text
    assert "6.03 mm" in text
    assert "8.1 degrees" in text


@pytest.mark.parametrize(
    ("start", "end", "expected"),
    [
        # away from square: r (sin 50 - sin a) = play, so a = asin(sin 50 deg - 0.02)
        (50.0, 20.0, 50.0 - np.rad2deg(np.arcsin(np.sin(50 * DEG) - 0.02))),
        # through square: rises by 0.0152 to the top at 90, falls to 0.02 below it at 101.5
        (80.0, 130.0, 180.0 - np.rad2deg(np.arcsin(1.0 - 0.02)) - 80.0),
        # the play is enough for all of it
        (85.0, 95.0, 10.0),
    ],
)
def test_a_fixed_pins_play_is_used_up_where_the_sideways_travel_reaches_it(start, end, expected):
    pin = FixedPin(arm_m=0.1, play_m=0.002)
    answer = pin.answer(start * DEG, end * DEG)
    assert np.rad2deg(answer.usable_from_start_rad) == pytest.approx(expected, abs=1e-6)


def test_a_fixed_pins_bad_sizes_are_problems():
    assert [p.where for p in FixedPin(0.0, -0.1).problems(0.0, 1.0)] == ["linkage.arm_mm", "linkage.play_mm"]
