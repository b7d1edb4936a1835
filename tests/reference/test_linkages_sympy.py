"""Positions and slopes of the linkages against SymPy: loop closure solved and differentiated at 40 digits."""

import numpy as np
import pytest
import sympy

from ergo.mechanism.linkage import ConnectingLink, SlottedArm

ANGLES = [sympy.Rational(k, 10) for k in range(-4, 10, 3)]
P, X = sympy.symbols("p x")


def solved(closure, angle, near):
    """Slide coordinate and slope at an angle: a root near a place, and implicit differentiation."""
    place = sympy.nsolve(closure.subs(P, angle), X, near, prec=40)
    slope = -(sympy.diff(closure, P) / sympy.diff(closure, X)).subs({X: place}).subs(P, angle)
    return float(place), float(sympy.N(slope, 40))


@pytest.mark.parametrize("branch", ["open", "crossed"])
def test_connecting_link_closes_its_triangle(branch):
    r, length, h = (sympy.Rational(n, 1000) for n in (45, 110, 15))
    d, offset = sympy.Rational(5, 10), sympy.Rational(12, 10)
    link = ConnectingLink(0.045, 0.11, 0.5, 0.015, 1.2, branch)
    arm = sympy.Matrix([r * sympy.cos(P + offset), r * sympy.sin(P + offset)])
    slide = sympy.Matrix([X * sympy.cos(d) - h * sympy.sin(d), X * sympy.sin(d) + h * sympy.cos(d)])
    closure = (slide - arm).dot(slide - arm) - length**2
    for angle in ANGLES:
        near = float((arm.dot(sympy.Matrix([sympy.cos(d), sympy.sin(d)]))).subs(P, angle))
        place, slope = solved(closure, angle, near + (0.1 if branch == "open" else -0.1))
        a = np.array([float(angle)])
        # double precision against 40 digits
        assert link.slide_m(a)[0] == pytest.approx(place, abs=1e-15)
        assert link.slide_per_rad_m(a)[0] == pytest.approx(slope, abs=1e-14)


def test_slotted_arm_keeps_its_pin_in_line_with_the_pivot():
    h, d, offset = sympy.Rational(60, 1000), sympy.Rational(-14, 10), sympy.Rational(2, 10)
    arm = SlottedArm(0.06, -1.4, 0.2)
    slide = sympy.Matrix([X * sympy.cos(d) - h * sympy.sin(d), X * sympy.sin(d) + h * sympy.cos(d)])
    closure = slide[0] * sympy.sin(P + offset) - slide[1] * sympy.cos(P + offset)
    for angle in ANGLES:
        place, slope = solved(closure, angle, 0.0)
        a = np.array([float(angle)])
        assert arm.slide_m(a)[0] == pytest.approx(place, abs=1e-15)
        assert arm.slide_per_rad_m(a)[0] == pytest.approx(slope, abs=1e-14)
