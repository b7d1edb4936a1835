"""ISO 898-1 stress areas and ISO 724 diameters of the coarse metric threads (printed values recalled)."""

import pytest

from ergo.datasets import library
from ergo.letgo.structure import stress_area_m2, stress_diameter_m

LIB = library()


@pytest.mark.parametrize(
    ("thread", "area_mm2", "half_unit"),
    # ISO 898-1, nominal stress area; printed to three figures, so half a unit of the last one
    [("M3", 5.03, 0.005), ("M4", 8.78, 0.005), ("M5", 14.2, 0.05), ("M6", 20.1, 0.05), ("M8", 36.6, 0.05),
     ("M10", 58.0, 0.05), ("M12", 84.3, 0.05), ("M14", 115, 0.5), ("M16", 157, 0.5), ("M18", 192, 0.5),
     ("M20", 245, 0.5), ("M22", 303, 0.5), ("M24", 353, 0.5)],
)  # fmt: skip
def test_nominal_stress_area(thread, area_mm2, half_unit):
    assert stress_area_m2(LIB, thread) * 1e6 == pytest.approx(area_mm2, abs=half_unit)


@pytest.mark.parametrize(
    ("thread", "pitch_diameter", "root_diameter"),
    # ISO 724: pitch diameter; root diameter d3 = d1 - H/6, as ISO 898-1 takes it; both to 0.001 mm
    [("M6", 5.350, 4.773), ("M8", 7.188, 6.466), ("M10", 9.026, 8.160), ("M12", 10.863, 9.853), ("M16", 14.701, 13.546),
     ("M20", 18.376, 16.933)],
)  # fmt: skip
def test_stress_diameter_is_the_mean_of_pitch_and_root_diameter(thread, pitch_diameter, root_diameter):
    assert stress_diameter_m(LIB, thread) * 1e3 == pytest.approx((pitch_diameter + root_diameter) / 2, abs=0.001)
