"""Machinery's Handbook 31, pages 1152-1153: twist-drill thrust.

The pages' factor columns and formulas were read; the worked thrusts were derived from them by hand, to whole
newtons. Kd is recalled, not read, so what is checked here is the method, not the material.
"""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.load.drilling import CURVES, Drilling

FEEDS = (0.05, 0.10, 0.15, 0.20)
WORKED = [
    (6.4, "steel 200 HB", (860, 1342, 1780, 2190)),
    (8.0, "steel 200 HB", (1104, 1679, 2203, 2692)),
    (6.4, "aluminium alloy", (251, 391, 519, 639)),
]


def drill(diameter_mm, feed_mm, material, **more):
    return Drilling.from_library(
        library(), diameter_m=diameter_mm * 1e-3, feed_m_per_rev=feed_mm * 1e-3, material=material, **more
    )


@pytest.mark.parametrize(("diameter", "material", "thrusts"), WORKED)
def test_worked_thrusts_of_a_standard_point(diameter, material, thrusts):
    ours = [drill(diameter, feed, material).thrust_n() for feed in FEEDS]
    # the worked values are whole newtons: half of one, and a little for how they were rounded
    np.testing.assert_allclose(ours, thrusts, atol=0.6)


def test_page_1152_split_point_by_hand():
    # 6.4 mm, 0.10 mm per turn, steel: 24000 (0.05 x 0.158 x 4.42 x 1.1 + 0.007 x 40.96 x 0.001)
    assert drill(6.4, 0.10, "steel 200 HB", point="split").thrust_n() == pytest.approx(928.7, abs=0.1)


def test_page_1153_columns_are_the_published_power_of_0_8_but_for_one_misfit():
    table = library().table(CURVES)
    for factor in ("feed_factor", "thrust_factor"):
        rows = table.where(factor=factor)
        expected = rows.numbers("at") ** 0.8
        off = np.abs(rows.numbers("value") / expected - 1.0)
        misfit = [row["at"] for row, share in zip(rows.rows, off, strict=True) if share > 0.011]
        # printed to three figures: up to 1 % on the smallest feed factor, 0.025
        assert misfit == (["8.8"] if factor == "thrust_factor" else [])


def test_the_odd_value_at_8_8_mm_is_kept_as_printed_and_noted():
    row = library().table(CURVES).row(factor="thrust_factor", at="8.8")
    assert row["value"] == "5.96"
    assert "kept as printed" in row["note"]


def test_every_printed_factor_is_seen_and_every_kd_is_memory():
    curves = library().table(CURVES)
    assert {curves.status_of(row) for row in curves.rows} == {"seen"}
    assert drill(8.0, 0.1, "steel 200 HB").status == "memory"
