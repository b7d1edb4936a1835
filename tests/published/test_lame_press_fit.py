"""Lame's thick-walled cylinders: a worked press fit, and the textbook form for one metal, solid shaft."""

import numpy as np
import pytest

from ergo.load.press_fit import Metal, PressFit

STEEL = Metal(206e9, 0.3)


def fit(**changes):
    given = {
        "shaft_m": 0.006,
        "hub_m": 0.020,
        "length_m": 0.010,
        "interference_m": 10e-6,
        "shaft": STEEL,
        "hub": STEEL,
        "friction": 0.12,
    }
    return PressFit(**{**given, **changes})


def test_worked_example_of_a_6_mm_pin_in_a_20_mm_hub():
    # derived example: 10 um on 6 mm, E 206 GPa, mu 0.12: 156 MPa and 3.5 kN, printed to that many figures
    assert fit().pressure_pa() == pytest.approx(156e6, abs=0.5e6)
    assert fit().force_n(np.array([0.010]))[0] == pytest.approx(3.5e3, abs=50.0)


@pytest.mark.parametrize(("d", "big"), [(6.0, 20.0), (25.0, 40.0), (10.0, 10.5)])
def test_one_material_and_a_solid_shaft_reduce_to_the_textbook_form(d, big):
    # p = E delta (D^2 - d^2) / (2 d D^2): Poisson's ratio drops out
    ours = fit(shaft_m=d * 1e-3, hub_m=big * 1e-3).pressure_pa()
    assert ours == pytest.approx(206e9 * 10e-6 * (big**2 - d**2) / (2 * d * big**2) * 1e3, rel=1e-12)


def test_displacements_of_both_parts_add_up_to_the_interference():
    # radial displacements of Lame's solution written out for a hollow brass shaft in a cast iron hub
    shaft, hub = Metal(105e9, 0.34), Metal(100e9, 0.26)
    part = fit(shaft_m=0.02, hub_m=0.045, shaft=shaft, hub=hub, shaft_bore_m=0.008, interference_m=25e-6)
    p, r, out, bore = part.pressure_pa(), 0.01, 0.0225, 0.004
    hoop_hub = p * (out**2 + r**2) / (out**2 - r**2)
    hoop_shaft = -p * (r**2 + bore**2) / (r**2 - bore**2)
    opens = r / hub.modulus_pa * (hoop_hub - hub.poisson * -p)
    shrinks = r / shaft.modulus_pa * (hoop_shaft - shaft.poisson * -p)
    assert 2.0 * (opens - shrinks) == pytest.approx(25e-6, rel=1e-12)
    assert part.hub_stress_pa() == pytest.approx(hoop_hub, rel=1e-12)
