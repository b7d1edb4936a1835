"""Friction against free-body equations written out body by body and solved by SciPy's and SymPy's solvers.

Every body has its own three equations, with pin forces, guide reactions and the hand force unknown; friction
torques are radius x coefficient x resultant pin force against the relative turning, taken from finite
differences of the positions. Nothing of the product's own closed forms is used but the positions.
"""

import numpy as np
import pytest
import sympy
from scipy.optimize import root

from ergo.mechanism.drive import drive
from ergo.mechanism.friction import PinAndGuide
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import ConnectingLink, ConstantRatio, CurvedSlot, Rack, ShaftLoad, SlottedArm

DEG = np.pi / 180.0
STROKE = np.linspace(0.0, 1.0, 7)
LOAD_N = 800.0
FRICTION = PinAndGuide(0.008, 0.15, 0.12, 0.06, 0.015)
GUIDE_ONLY = PinAndGuide(slide_friction=0.12, slide_bearing_m=0.06)
PINS_ONLY = PinAndGuide(pin_radius_m=0.008, pin_friction=0.15, slide_bearing_m=0.06)


def cross(a, b):
    return a[0] * b[1] - a[1] * b[0]


def at(angle, length=1.0):
    return length * np.array([np.cos(angle), np.sin(angle)])


def constant(slide):
    return np.full(slide.shape, LOAD_N)


class Cut:
    """The cut-free lever and slide that every linkage shares, in the lever's plane."""

    def __init__(self, lever, linkage, friction, angle):
        self.lever, self.linkage, self.friction, self.angle = lever, linkage, friction, angle
        self.way = np.sign(lever.end_rad - lever.start_rad)
        d = getattr(linkage, "slide_direction_rad", 0.0)
        self.along, self.across = at(d), at(d + np.pi / 2)
        ends = linkage.slide_m(np.array([lever.start_rad, lever.end_rad]))
        self.load = -np.sign(ends[1] - ends[0]) * LOAD_N
        self.h = 1e-7 * self.way
        self.slide_speed = float(linkage.slide_m(angle + self.h) - linkage.slide_m(angle - self.h))
        self.weight = lever.weight_in_plane_n()

    def pin_torque(self, force, relative_turn):
        f = self.friction
        return -f.pin_radius_m * f.pin_friction * np.hypot(*force) * np.sign(relative_turn)

    def lever_equations(self, hand, pivot, contact, contact_at, extra_torque):
        """Two forces and the moment about the pivot; `contact` is what the linkage puts on the lever."""
        u = at(self.angle)
        push = hand * self.way * np.array([-u[1], u[0]])
        forces = push + pivot + contact + self.weight
        moment = cross(self.lever.length_m * u, push) + cross(self.lever.balance_point_m * u, self.weight)
        moment += cross(contact_at, contact) + self.pin_torque(pivot, self.way) + extra_torque
        moment -= self.lever.return_spring_nm_per_rad * (self.angle - self.lever.start_rad)
        return [*forces, moment]

    def slide_equations(self, force, first, last):
        """Along, across, and the moment about mid-guide: drive at the overhang, side force mid-guide."""
        f = self.friction
        drive_n, side_n = force @ self.along, force @ self.across
        rub = -np.sign(self.slide_speed) * f.slide_friction * (abs(first) + abs(last))
        moment = (last - first) * f.slide_bearing_m / 2 - f.slide_overhang_m * drive_n
        return [drive_n + self.load + rub, side_n + first + last, moment]


def solve(equations, count, hand_guess):
    rng = np.random.default_rng(3)
    for _ in range(40):
        start = np.full(count, 1.0) * LOAD_N * rng.normal(size=count)
        start[0] = hand_guess
        answer = root(equations, start, method="hybr", tol=1e-13)
        if np.abs(equations(answer.x)).max() < 1e-7:
            return answer.x
    pytest.fail("the free-body equations found no solution in 40 starts")
    return None


def lever(start=-30.0, end=60.0):
    return Lever((0, 0, 0.9), "sideways", 0.25, start * DEG, end * DEG, 0.9, 0.1, 0.6)


@pytest.mark.parametrize("friction", [FRICTION, GUIDE_ONLY, PINS_ONLY], ids=["both", "guide", "pins"])
@pytest.mark.parametrize("branch", ["open", "crossed"])
@pytest.mark.parametrize("ends", [(-30, 55), (55, -30)])
def test_connecting_link(branch, ends, friction):
    lv = lever(*ends)
    link = ConnectingLink(0.05, 0.12, 175.0 * DEG, 0.015, 80.0 * DEG, branch)
    ours = drive(handle_path(lv, Grip(), STROKE), lv, link, constant, friction)
    for k, angle in enumerate(ours.lever_rad):
        cut = Cut(lv, link, friction, angle)
        pins = [np.array(link.pins_m(np.array([a])))[:, 0] for a in (angle - cut.h, angle, angle + cut.h)]
        run = [slide - arm for arm, slide in pins]
        link_turn = cross(run[1], run[2] - run[0]) / (2 * abs(cut.h)) / 0.12**2

        def equations(x, cut=cut, run=run, pins=pins, link_turn=link_turn):
            hand, pivot, at_arm, at_slide = x[0], x[1:3], x[3:5], x[5:7]
            arm_torque = cut.pin_torque(at_arm, link_turn - cut.way)
            slide_torque = cut.pin_torque(at_slide, link_turn)
            on_link = at_arm - at_slide
            moment = cross(run[1], -at_slide) + arm_torque + slide_torque
            return np.array(
                [
                    *cut.lever_equations(hand, pivot, -at_arm, pins[1][0], -arm_torque),
                    *on_link,
                    moment,
                    *cut.slide_equations(at_slide, x[7], x[8]),
                ]
            )

        x = solve(equations, 9, 0.9 * ours.demand_n[k])
        # both solve the same equations; the tolerance is the solver's
        assert x[0] == pytest.approx(ours.demand_n[k], rel=1e-7)
        assert np.hypot(*x[1:3]) == pytest.approx(ours.pin_force_n[k], rel=1e-7)
        assert np.hypot(*x[3:5]) == pytest.approx(ours.link_pin_force_n[k], rel=1e-7)
        assert abs(x[5:7] @ cut.across) == pytest.approx(ours.side_force_n[k], rel=1e-6, abs=1e-6)


@pytest.mark.parametrize("ends", [(-30, 55), (55, -30)])
@pytest.mark.parametrize(
    "linkage",
    [
        SlottedArm(0.07, -60.0 * DEG, 20.0 * DEG),
        CurvedSlot(ConstantRatio(0.03, 0.0, 0.11), 200.0 * DEG, 0.02),
        CurvedSlot(ConstantRatio(-0.03, 0.0, 0.15), 30.0 * DEG, -0.02),
    ],
    ids=["slotted arm", "slot outward", "slot inward"],
)
def test_pin_in_a_slot(linkage, ends):
    lv = lever(*ends)
    ours = drive(handle_path(lv, Grip(), STROKE), lv, linkage, constant, FRICTION)
    for k, angle in enumerate(ours.lever_rad):
        cut = Cut(lv, linkage, FRICTION, angle)

        def pin_at(a, cut=cut):
            return float(linkage.slide_m(a)) * cut.along + linkage.slide_offset_m * cut.across

        # the pin's way over the turning lever, by turning the later and earlier places back
        back = [np.array([[np.cos(t), np.sin(t)], [-np.sin(t), np.cos(t)]]) for t in (cut.h, -cut.h)]
        sliding = back[0] @ pin_at(angle + cut.h) - back[1] @ pin_at(angle - cut.h)
        tangent = sliding / np.hypot(*sliding)
        normal = np.array([-tangent[1], tangent[0]])

        pin = pin_at(angle)

        def equations(x, cut=cut, normal=normal, tangent=tangent, pin=pin):
            hand, pivot, pressed = x[0], x[1:3], x[3]
            on_slide = pressed * normal - FRICTION.pin_friction * abs(pressed) * tangent
            return np.array(
                [
                    *cut.lever_equations(hand, pivot, -on_slide, pin, 0.0),
                    *cut.slide_equations(on_slide, x[4], x[5]),
                ]
            )

        x = solve(equations, 6, 0.9 * ours.demand_n[k])
        # the slot's tangent comes from central differences, good to about 1e-8
        assert x[0] == pytest.approx(ours.demand_n[k], rel=1e-6)
        assert np.hypot(*x[1:3]) == pytest.approx(ours.pin_force_n[k], rel=1e-6)


def test_a_shaft_and_its_pivot_pin_by_sympy():
    lv = Lever((0, 0, 0.9), "upright", 0.2, 0.3, 1.2)
    ours = drive(
        handle_path(lv, Grip(), STROKE), lv, ShaftLoad(), lambda s: np.full(s.shape, 12.0), PINS_ONLY
    )
    # no weight in the plane: the pin carries the hand force alone, D L = M + mu r D
    hand = sympy.symbols("D", positive=True)
    exact = sympy.solve(hand * sympy.Rational(1, 5) - 12 - sympy.Rational(12, 10000) * hand, hand)[0]
    np.testing.assert_allclose(ours.demand_n, float(exact), rtol=1e-13)
    np.testing.assert_allclose(ours.efficiency, 1.0 - 0.0012 / 0.2, rtol=1e-12)


def test_a_racks_guide_and_pin_by_sympy():
    lv = Lever((0, 0, 0.9), "upright", 0.2, 0.3, 1.2)
    rack = Rack(0.02, 20.0 * DEG)
    ours = drive(handle_path(lv, Grip(), STROKE), lv, rack, constant, FRICTION)
    tooth, hand = sympy.symbols("G D", positive=True)
    alpha, mu = sympy.pi / 9, sympy.Rational(12, 100)
    # end reactions: the larger of the side force and 2 a / L x drive = 0.5 G cos(alpha)
    slide = tooth * sympy.cos(alpha) - mu * tooth * sympy.cos(alpha) / 2 - 800
    force = sympy.solve(slide, tooth)[0]
    radius = sympy.Rational(12, 10000)
    turn = hand / 5 - force * sympy.cos(alpha) * sympy.Rational(2, 100) - radius * (hand + force)
    np.testing.assert_allclose(ours.demand_n, float(sympy.solve(turn, hand)[0]), rtol=1e-12)


def test_the_slide_wedges_where_two_mu_a_over_l_reaches_one():
    lv = lever()
    rack = Rack(0.02, 0.0)
    drive_n, load, share = sympy.symbols("P F k", positive=True)
    # drive at the overhang: P = F + (2 mu a / L) P
    exact = sympy.lambdify((load, share), sympy.solve(drive_n - load - share * drive_n, drive_n)[0])
    for share_now in (0.5, 0.9, 0.999):
        guide = PinAndGuide(slide_friction=share_now / 2.0, slide_bearing_m=0.05, slide_overhang_m=0.05)
        ours = drive(handle_path(lv, Grip(), STROKE), lv, rack, constant, guide)
        assert not ours.wedged
        np.testing.assert_allclose(
            ours.demand_n - ours.weight_n, exact(LOAD_N, share_now) * 0.02 / 0.25, rtol=1e-9
        )
    for share_now in (1.0, 1.2):
        guide = PinAndGuide(slide_friction=share_now / 2.0, slide_bearing_m=0.05, slide_overhang_m=0.05)
        ours = drive(handle_path(lv, Grip(), STROKE), lv, rack, constant, guide)
        assert ours.wedged
        assert np.isinf(ours.demand_n).all()
        assert "the slide wedges at stroke 0.00 to 1.00" in " ".join(ours.notes)
