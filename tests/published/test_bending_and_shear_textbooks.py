"""Worked examples of bending and pin shear, recalled from their textbooks and tables.

Beer and Johnston, Mechanics of Materials: chapter 1, boom and rod under 30 kN; chapter 4, bar bent to yield.
EN 10210-2: elastic section modulus of circular hollow sections.
"""

import math

import pytest

from ergo.letgo.structure import (
    Finish,
    Material,
    bent,
    rectangle_modulus_m3,
    round_modulus_m3,
    sheared,
    tube_modulus_m3,
)

STEEL = Material("steel", 250e6, 250e6 / math.sqrt(3.0), "memory")
PLAIN = Finish("plain", 1.0, "memory")
PIN_M2 = math.pi / 4.0 * 0.025**2


@pytest.mark.parametrize(
    ("force", "planes", "printed_mpa", "half_unit"),
    # pin C of 25 mm in single shear under 50 kN: 102 MPa; pin A in double shear under 40 kN: 40.7 MPa
    [(50e3, 1, 102.0, 0.5), (40e3, 2, 40.7, 0.05)],
)
def test_beer_johnston_pins_of_boom_and_rod(force, planes, printed_mpa, half_unit):
    part = sheared("pin", force, PIN_M2, planes, STEEL, PLAIN)
    assert part.stress_pa / 1e6 == pytest.approx(printed_mpa, abs=half_unit)


def test_beer_johnston_bar_bent_to_yield():
    # 0.8 x 2.5 in, 36 ksi: 30 kip in, printed to that; in SI 20.32 x 63.5 mm, 248.2 MPa, 3.39 kN m
    modulus = rectangle_modulus_m3(2.5 * 0.0254, 0.8 * 0.0254)
    moment = 36e3 * 6894.757 * modulus
    assert moment / (4.4482216 * 0.0254 * 1e3) == pytest.approx(30.0, abs=0.05)
    part = bent("bar", moment / 0.5, 0.5, modulus, STEEL, PLAIN)
    assert part.stress_pa == pytest.approx(36e3 * 6894.757, rel=1e-9)


@pytest.mark.parametrize(("outer", "wall", "printed_cm3"), [(33.7, 3.2, 2.14), (48.3, 3.2, 4.80), (60.3, 4.0, 9.34)])
def test_en_10210_2_hollow_sections(outer, wall, printed_cm3):
    # printed to 0.01 cm3
    found = tube_modulus_m3(outer * 1e-3, (outer - 2 * wall) * 1e-3) * 1e6
    assert found == pytest.approx(printed_cm3, abs=0.006)


def test_round_bar_against_the_parallel_axis_integral():
    # W = I / (d/2) with I = pi d^4 / 64
    assert round_modulus_m3(0.018) == pytest.approx(math.pi * 0.018**4 / 64.0 / 0.009, rel=1e-12)
