"""Press fit: growth with the engaged length, shipped metals, ranges, statuses."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.load.press_fit import PressFit, materials


def fit(**changes):
    given = {
        "shaft_m": 0.012,
        "hub_m": 0.030,
        "length_m": 0.010,
        "interference_m": 20e-6,
        "material_shaft": "steel",
        "material_hub": "aluminium alloy",
        "friction": 0.12,
    }
    return PressFit.from_library(library(), **{**given, **changes})


def test_force_grows_with_the_engaged_length_up_to_the_fits_length():
    force = fit().force_n(np.array([0.0, 0.0025, 0.005, 0.010, 0.015]))
    np.testing.assert_allclose(force / force[3], [0.0, 0.25, 0.5, 1.0, 1.0], rtol=1e-12)
    late = fit(engages_at_m=0.004).force_n(np.array([0.004, 0.009, 0.020]))
    np.testing.assert_allclose(late / force[3], [0.0, 0.5, 1.0], atol=1e-12)


def test_a_softer_hub_and_a_hollow_shaft_press_less():
    steel = fit(material_hub="steel").pressure_pa()
    assert fit().pressure_pa() < steel
    assert fit(material_hub="steel", shaft_bore_m=0.006).pressure_pa() < steel


@pytest.mark.parametrize(
    ("change", "where"),
    [
        ({"hub_m": 0.012}, "load.hub_mm"),
        ({"shaft_m": 0.0}, "load.shaft_mm"),
        ({"length_m": -0.01}, "load.length_mm"),
        ({"interference_m": -1e-6}, "load.interference_um"),
        ({"friction": np.nan}, "load.friction"),
        ({"shaft_bore_m": 0.012}, "load.shaft_bore_mm"),
    ],
)
def test_a_fit_that_cannot_be_is_a_problem(change, where):
    assert where in [p.where for p in fit(**change).problems()]


def test_the_rows_it_rests_on_are_named_with_their_status():
    assert fit().status == "memory"
    assert [row.name for row in fit().parameters] == [
        "steel: modulus",
        "steel: poisson",
        "aluminium alloy: modulus",
        "aluminium alloy: poisson",
    ]
    assert "steel" in materials(library())
    with pytest.raises(ValueError, match="is none of"):
        fit(material_hub="jelly")
