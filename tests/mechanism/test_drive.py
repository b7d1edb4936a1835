"""The drive: virtual work, signs, dead centres, efficiency, self-locking, and what is refused."""

import numpy as np
import pytest
from scipy.integrate import quad

from ergo.errors import NothingMovesError, StudyError
from ergo.frames import GRAVITY_M_S2
from ergo.mechanism.drive import drive, slide_travel_m, travel_sense
from ergo.mechanism.friction import PinAndGuide
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import (
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
STROKE = np.linspace(0.0, 1.0, 15)
LINKAGES = [
    HandleLoad(0.25),
    ShaftLoad(),
    Rack(0.02, 20 * DEG),
    ConnectingLink(0.04, 0.09, 170 * DEG, 0.02, 95 * DEG),
    ConnectingLink(0.04, 0.09, 170 * DEG, 0.02, 95 * DEG, "crossed"),
    SlottedArm(0.05, -80 * DEG, 10 * DEG),
    CurvedSlot(ConstantRatio(0.03, 0.0, 0.12), 40 * DEG, 0.02),
    CurvedSlot(TravelCurve((-1.0, -0.3, 0.2, 0.6, 1.3), (0.1, 0.11, 0.13, 0.16, 0.18)), 0.3, 0.01),
    MeasuredRatio(TravelCurve((-1.0, 0.0, 0.5, 1.3), (0.0, 0.01, 0.02, 0.022))),
]
KIND = pytest.mark.parametrize("linkage", LINKAGES, ids=lambda linkage: linkage.kind)


def lever(start=-0.5, end=1.0, **more):
    return Lever((0.0, 0.3, 0.9), "sideways", 0.25, start, end, **more)


def spring(slide):
    return 300.0 + 20000.0 * slide


def run(lv, linkage, load=spring, friction=None, stroke=STROKE):
    args = () if friction is None else (friction,)
    return drive(handle_path(lv, Grip(), stroke), lv, linkage, load, *args)


@KIND
@pytest.mark.parametrize("ends", [(-0.5, 1.0), (1.0, -0.5)])
def test_virtual_work_by_central_differences(linkage, ends):
    lv, h = lever(*ends), 1e-5
    inner = 0.01 + 0.98 * STROKE
    here, ahead, behind = (run(lv, linkage, stroke=inner + step) for step in (0.0, h, -h))
    work_in = here.demand_n * (ahead.hand_travel_m - behind.hand_travel_m)
    work_out = here.load_n * (ahead.slide_m - behind.slide_m)
    # work over a step of 2e-5 of the stroke: 1e-9 of the largest such step, for rounding and h^2
    np.testing.assert_allclose(work_in, work_out, atol=1e-9 * np.abs(work_out).max(), rtol=1e-9)


@KIND
@pytest.mark.parametrize("ends", [(-0.5, 1.0), (1.0, -0.5)])
def test_work_over_the_whole_stroke_is_the_loads(linkage, ends):
    lv = lever(*ends)
    breaks = [(a - ends[0]) / (ends[1] - ends[0]) for a in (-0.3, 0.0, 0.2, 0.5, 0.6)]

    def hand_power(stroke):
        d = run(lv, linkage, stroke=np.array([stroke]))
        return d.demand_n[0] * 0.25 * 1.5

    work_in = quad(hand_power, 0.0, 1.0, points=breaks, epsabs=1e-12, epsrel=1e-12, limit=200)[0]
    travel = run(lv, linkage).slide_m[-1]
    # a spring load depends on the travel alone, so its work is exact; 1e-9 is the quadrature's own
    assert work_in == pytest.approx(300.0 * travel + 10000.0 * travel**2, rel=1e-9)


@KIND
def test_without_friction_demand_is_ratio_times_load_plus_weight(linkage):
    d = run(lever(mass_kg=1.1, return_spring_nm_per_rad=0.7), linkage)
    np.testing.assert_array_equal(d.friction_n, 0.0)
    np.testing.assert_array_equal(d.efficiency, 1.0)
    np.testing.assert_array_equal(d.demand_n, d.ratio * d.load_n + d.weight_n)
    assert not d.self_locking
    assert not d.wedged


@KIND
@pytest.mark.parametrize("ends", [(-0.5, 1.0), (1.0, -0.5)])
def test_the_free_bodies_agree_with_virtual_work_where_friction_is_next_to_nothing(linkage, ends):
    lv = lever(*ends, mass_kg=1.1, return_spring_nm_per_rad=0.7)
    plain = run(lv, linkage)
    nearly = run(lv, linkage, friction=PinAndGuide(0.01, 1e-12, 1e-12, 0.05, 0.01))
    # the two ways share no formula; what is left is rounding and 1e-12 of friction
    np.testing.assert_allclose(nearly.demand_n, plain.demand_n, rtol=1e-9, atol=1e-9)


def test_weight_and_return_spring_at_the_hand():
    d = run(
        lever(start=0.0, end=np.pi / 2, mass_kg=2.0, return_spring_nm_per_rad=1.5),
        ShaftLoad(),
        lambda s: 0 * s,
    )
    # upright: no torque. Level, toward the operator: the weight at half length helps by m g / 2
    assert d.weight_n[0] == pytest.approx(0.0, abs=1e-12)
    assert d.weight_n[-1] == pytest.approx(-GRAVITY_M_S2 + 1.5 * np.pi / 2 / 0.25, rel=1e-12)
    assert d.demand_n[-1] == pytest.approx(d.weight_n[-1])


def test_a_lever_that_falls_by_itself_has_a_demand_below_zero():
    d = run(lever(start=0.2, end=1.2, mass_kg=2.0), ShaftLoad(), lambda s: 0 * s)
    assert np.all(d.demand_n < 0.0)


@KIND
def test_slide_travel_counts_from_zero_in_the_sense_of_the_stroke(linkage):
    for ends in ((-0.5, 1.0), (1.0, -0.5)):
        d = run(lever(*ends), linkage)
        assert d.slide_m[0] == 0.0
        assert d.slide_m[-1] > 0.0
        np.testing.assert_array_equal(slide_travel_m(lever(*ends), linkage, d.lever_rad), d.slide_m)
        assert travel_sense(lever(*ends), linkage) == -travel_sense(lever(*ends[::-1]), linkage)


def test_beyond_a_dead_centre_the_load_drives_the_handle_on():
    link = ConnectingLink(0.04, 0.09, 0.0, 0.0)
    # arm in line with the slide at lever angle 0: the slide goes out, then comes back a little
    d = run(lever(-1.0, 0.3), link, load=lambda s: np.full(s.shape, 500.0), friction=PinAndGuide(0.005, 0.1))
    assert d.dead_centre_rad == (0.0,)
    assert d.ratio[0] > 0.0 > d.ratio[-1]
    assert d.demand_n[0] > 0.0 > d.demand_n[-1]
    assert "dead centre at lever angle 0.0 deg" in d.notes[0]
    assert np.all(d.friction_n > 0.0)


def test_self_locking_near_a_dead_centre_and_by_a_stiff_pivot():
    link = ConnectingLink(0.04, 0.09, 0.0, 0.0)
    toggle = run(
        lever(-1.0, -0.02), link, load=lambda s: np.full(s.shape, 500.0), friction=PinAndGuide(0.006, 0.15)
    )
    assert toggle.self_locking
    assert not toggle.self_locking_at[0]
    assert toggle.self_locking_at[-1]
    assert toggle.back_efficiency[-1] <= 0.0 < toggle.back_efficiency[0]
    assert "the load alone cannot move the handle back" in toggle.notes[-1]
    # at the limit the line of force touches the pins' friction circles
    assert toggle.efficiency[-1] < 0.5


def test_a_load_at_the_handle_itself_leaves_the_pivot_free():
    lv = Lever((0, 0, 0.9), "upright", 0.3, 0.0, 1.0)
    d = run(lv, HandleLoad(0.3), lambda s: 100.0 + 0.0 * s, PinAndGuide(0.01, 0.2))
    # load and hand act on one point against each other: nothing is left for the pivot pin to rub with
    np.testing.assert_allclose(d.pin_force_n, 0.0, atol=1e-7)
    np.testing.assert_allclose(d.efficiency, 1.0, rtol=1e-9)


def test_a_fixed_pin_moves_nothing_and_says_why():
    with pytest.raises(NothingMovesError, match="mobility count is 0"):
        run(lever(), FixedPin(0.05, 0.001))


def test_linkage_and_friction_problems_come_together():
    friction = PinAndGuide(pin_friction=-0.1, slide_overhang_m=0.02)
    with pytest.raises(StudyError) as caught:
        run(lever(0.0, 1.5), ConnectingLink(0.08, 0.05), friction=friction)
    assert [p.where for p in caught.value.problems] == [
        "linkage.link_mm",
        "linkage.pin_friction",
        "linkage.slide_bearing_mm",
    ]


def test_a_pivot_whose_friction_is_longer_than_the_lever_is_refused():
    with pytest.raises(StudyError, match="longer than the lever"):
        run(lever(), ShaftLoad(), friction=PinAndGuide(0.5, 0.6))


def test_hand_mass_is_the_levers():
    assert run(lever(mass_kg=1.5), ShaftLoad()).hand_mass_kg == pytest.approx(0.5, rel=1e-14)
