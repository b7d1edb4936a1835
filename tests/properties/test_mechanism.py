"""Properties of levers, linkages and friction over random mechanisms."""

import numpy as np
from hypothesis import assume, given
from hypothesis import strategies as st

from ergo.mechanism.drive import drive
from ergo.mechanism.friction import PinAndGuide
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import ConnectingLink, CurvedSlot, HandleLoad, Rack, ShaftLoad, SlottedArm

STROKE = np.linspace(0.0, 1.0, 9)
ANGLE = st.floats(-3.0, 3.0)


def between(low, high):
    return st.floats(low, high, allow_nan=False)


@st.composite
def levers(draw, axis=None):
    start = draw(between(-1.5, 1.5))
    sweep = draw(between(0.1, 1.5)) * draw(st.sampled_from([1.0, -1.0]))
    return Lever(
        pivot_m=(draw(between(-0.5, 0.5)), draw(between(0.0, 0.8)), draw(between(0.5, 1.5))),
        axis=axis or draw(st.sampled_from(["sideways", "fore-aft", "upright", (1.0, 0.5, -0.2)])),
        length_m=draw(between(0.1, 0.6)),
        start_rad=start,
        end_rad=start + sweep,
        mass_kg=draw(between(0.0, 3.0)),
        balance_m=draw(st.one_of(st.none(), between(-0.1, 0.4))),
        return_spring_nm_per_rad=draw(between(0.0, 3.0)),
    )


@st.composite
def frictions(draw):
    return PinAndGuide(
        draw(between(0.0, 0.01)),
        draw(between(0.0, 0.3)),
        draw(between(0.0, 0.3)),
        draw(between(0.03, 0.1)),
        draw(between(0.0, 0.03)),
    )


@st.composite
def machines(draw):
    """A lever with a linkage that makes its stroke."""
    lever = draw(levers())
    kind = draw(st.sampled_from(["link", "slot", "curve", "rack", "shaft", "handle"]))
    if kind == "link":
        arm = draw(between(0.02, 0.1))
        offset, length = draw(between(-0.05, 0.05)), draw(between(0.03, 0.3))
        linkage = ConnectingLink(
            arm, length, draw(ANGLE), offset, draw(ANGLE), draw(st.sampled_from(["open", "crossed"]))
        )
    elif kind == "slot":
        offset = draw(between(0.02, 0.1)) * draw(st.sampled_from([1.0, -1.0]))
        linkage = SlottedArm(offset, draw(ANGLE), draw(ANGLE))
    elif kind == "curve":
        linkage = CurvedSlot.solved(
            per_rad_m=draw(between(0.005, 0.06)) * draw(st.sampled_from([1.0, -1.0])),
            start_rad=lever.start_rad,
            end_rad=lever.end_rad,
            pressure_limit_rad=draw(between(0.2, 0.7)),
            slide_direction_rad=draw(ANGLE),
            slide_offset_m=draw(between(-0.03, 0.03)),
        )
    else:
        linkage = {"rack": Rack(0.02, 0.35), "shaft": ShaftLoad(), "handle": HandleLoad(lever.length_m)}[kind]
    assume(not linkage.problems(lever.start_rad, lever.end_rad))
    return lever, linkage


def run(lever, linkage, load_n, friction=None):
    more = () if friction is None else (friction,)
    return drive(
        handle_path(lever, Grip(), STROKE), lever, linkage, lambda s: np.full(s.shape, load_n), *more
    )


@given(
    levers(axis="fore-aft"),
    st.sampled_from(["ball", "bar", "crossbar"]),
    between(-0.5, 0.5),
    between(0.0, 0.1),
)
def test_a_mirrored_lever_has_a_mirrored_path(lever, kind, tilt, offset):
    mirrored = Lever(
        pivot_m=(-lever.pivot_m[0], *lever.pivot_m[1:]),
        axis="fore-aft",
        length_m=lever.length_m,
        start_rad=-lever.start_rad,
        end_rad=-lever.end_rad,
        mass_kg=lever.mass_kg,
        balance_m=lever.balance_m,
    )
    one = handle_path(lever, Grip(kind, tilt if kind == "bar" else 0.0, offset), STROKE)
    two = handle_path(mirrored, Grip(kind, -tilt if kind == "bar" else 0.0, offset), STROKE)
    mirror = np.array([-1.0, 1.0, 1.0])
    np.testing.assert_allclose(two.grip_m, one.grip_m * mirror, atol=1e-12)
    np.testing.assert_allclose(two.work_dir, one.work_dir * mirror, atol=1e-12)
    np.testing.assert_allclose(two.grip_axis, one.grip_axis * mirror, atol=1e-12)
    np.testing.assert_allclose(two.hand_travel_m, one.hand_travel_m, atol=1e-12)


@given(machines(), between(10.0, 5000.0), between(0.1, 10.0))
def test_the_loads_share_of_the_demand_scales_with_the_load(machine, load_n, factor):
    lever, linkage = machine
    one, two = run(lever, linkage, load_n), run(lever, linkage, load_n * factor)
    share = one.demand_n - one.weight_n
    size = 1.0 + np.abs(two.demand_n).max()
    np.testing.assert_allclose(two.demand_n - two.weight_n, factor * share, rtol=1e-9, atol=1e-9 * size)


@given(machines(), frictions(), st.one_of(st.just(0.0), between(0.001, 5000.0)))
def test_friction_never_lowers_the_demand_and_efficiency_stays_within_one(machine, friction, load_n):
    lever, linkage = machine
    plain, rubbed = run(lever, linkage, load_n), run(lever, linkage, load_n, friction)
    slack = 1e-9 * (1.0 + np.abs(plain.demand_n))
    assert np.all(rubbed.demand_n >= plain.demand_n - slack)
    assert np.all(rubbed.efficiency <= 1.0 + 1e-9)
    assert np.all(rubbed.back_efficiency <= 1.0 + 1e-9)
    assert not np.isnan(rubbed.demand_n).any()


@given(machines(), frictions(), between(1.0, 5000.0))
def test_more_friction_in_the_guide_never_helps(machine, friction, load_n):
    lever, linkage = machine
    more = PinAndGuide(
        friction.pin_radius_m,
        friction.pin_friction,
        1.5 * friction.slide_friction,
        friction.slide_bearing_m,
        friction.slide_overhang_m,
    )
    one, two = run(lever, linkage, load_n, friction), run(lever, linkage, load_n, more)
    free = np.isfinite(two.demand_n) & (one.ratio > 0.0)
    assert np.all(
        two.demand_n[free] >= one.demand_n[free] * (1 - 1e-9) - 1e-9 * (1 + np.abs(one.demand_n[free]))
    )
    assert np.all(two.wedged_at | ~one.wedged_at)


@given(
    between(0.02, 0.1),
    between(0.03, 0.3),
    ANGLE,
    between(-0.05, 0.05),
    ANGLE,
    st.sampled_from(["open", "crossed"]),
)
def test_both_branches_close_wherever_the_linkage_says_it_does(arm, length, direction, offset, turn, branch):
    link = ConnectingLink(arm, length, direction, offset, turn, branch)
    assume(not link.problems(-1.0, 1.0))
    a = np.linspace(-1.0, 1.0, 41)
    arm_pin, slide_pin = link.pins_m(a)
    np.testing.assert_allclose(np.linalg.norm(slide_pin - arm_pin, axis=1), length, rtol=1e-9)
    ahead = (slide_pin - arm_pin) @ np.array([np.cos(direction), np.sin(direction)])
    assert np.all(ahead > 0.0 if branch == "open" else ahead < 0.0)


@given(between(0.02, 0.1), between(0.02, 0.12), between(-0.05, 0.05), ANGLE)
def test_a_link_that_is_said_not_to_close_opens_first_at_the_named_angle(arm, length, offset, turn):
    link = ConnectingLink(arm, length, 0.0, offset, turn)
    found = link.problems(-1.0, 1.0)
    a = np.linspace(-1.0, 1.0, 4001)
    short = np.abs(offset - arm * np.sin(a + turn)) >= length
    if not found:
        assert not short.any()
        return
    assume(short.any())
    named = float(found[0].what.split("lever angle ")[1].split(" deg")[0])
    # printed to a tenth of a degree, and the grid has steps of 0.03 degrees
    assert abs(named - np.rad2deg(a[short.argmax()])) < 0.09


@given(machines(), between(10.0, 2000.0))
def test_virtual_work_holds_for_every_machine(machine, load_n):
    lever, linkage = machine
    d = run(lever, linkage, load_n)
    slope, h = linkage.slide_per_rad_m(d.lever_rad), 1e-6
    inner = np.clip(d.lever_rad, min(d.lever_rad) + 2 * h, max(d.lever_rad) - 2 * h)
    step = (linkage.slide_m(inner + h) - linkage.slide_m(inner - h)) / (2 * h)
    away = (np.abs(slope) < 1.0) & (inner == d.lever_rad)
    # central differences near a square link, where the third derivative grows, are good to about 1e-6
    np.testing.assert_allclose(slope[away], step[away], atol=1e-6)
    np.testing.assert_allclose(
        np.abs((d.demand_n - d.weight_n) * lever.length_m), np.abs(load_n * slope), rtol=1e-12, atol=1e-9
    )
