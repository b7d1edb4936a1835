"""ISO/TS 15066:2016, annex A: the energies of its table A.4 from its springs and force limits.

The energies are recalled, as most of the limits are; that they fit one another supports the set, not a cell.
"""

import pytest

from ergo.datasets import library
from ergo.letgo.contact import Region, strike

LIB = library()


@pytest.mark.parametrize(
    ("region", "energy", "rel"),
    # E = F^2 / 2 k. Printed to two figures, so up to 3 %. The recalled energies of neck, hand and lower leg lie 6
    # to 8 % under what their springs and forces give; which number is off is not known, so they are held to 9 %.
    [
        ("back_shoulders", 2.5, 0.03),
        ("chest", 1.6, 0.03),
        ("abdomen", 2.4, 0.03),
        ("pelvis", 2.6, 0.03),
        ("upper_arm_elbow", 1.5, 0.03),
        ("lower_arm_wrist", 1.3, 0.03),
        ("thigh_knee", 1.9, 0.03),
        ("neck_sides", 0.84, 0.09),
        ("hand_fingers", 0.49, 0.09),
        ("lower_leg", 0.52, 0.09),
    ],
)
def test_table_a4_energy_at_the_transient_limit(region, energy, rel):
    part = Region.from_library(LIB, region)
    speed = part.transient_n / (part.spring_n_per_m * part.mass_kg) ** 0.5
    blow = strike(part, speed, float("inf"))
    assert blow.peak_n == pytest.approx(part.transient_n, rel=1e-12)
    assert blow.energy_j == pytest.approx(energy, rel=rel)


@pytest.mark.parametrize(
    ("region", "spring"),
    # spring constants as quoted on a page that was read
    [("skull_forehead", 150), ("face", 75), ("neck_sides", 50), ("neck_front", 10), ("back_shoulders", 35),
     ("chest", 25), ("abdomen", 10)],
)  # fmt: skip
def test_spring_constants_that_were_read(region, spring):
    row = LIB.parameters("body_contact_iso_ts_15066_2016")[f"{region}.spring_n_per_mm"]
    assert (row.value, row.status) == (spring, "seen")
