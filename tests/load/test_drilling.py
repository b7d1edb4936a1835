"""Drilling: interpolation, ranges, wear, torque, and a row changed for a what-if."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.load.drilling import MATERIALS, Drilling, materials, wear_grades


def drill(diameter_mm=8.0, feed_mm=0.1, material="steel 200 HB", **more):
    lib = more.pop("lib", library())
    return Drilling.from_library(
        lib, diameter_m=diameter_mm * 1e-3, feed_m_per_rev=feed_mm * 1e-3, material=material, **more
    )


def test_straight_lines_between_printed_rows():
    low, high, middle = drill(feed_mm=0.1), drill(feed_mm=0.12), drill(feed_mm=0.11)
    assert middle.thrust_n() == pytest.approx((low.thrust_n() + high.thrust_n()) / 2, rel=1e-12)


@pytest.mark.parametrize(
    ("diameter", "feed", "where", "allowed"),
    [
        (1.5, 0.1, "load.diameter_mm", "1.6 to 16 mm"),
        (16.5, 0.1, "load.diameter_mm", "1.6 to 16 mm"),
        (8.0, 0.005, "load.feed_mm_per_rev", "0.01 to 0.5 mm per turn"),
        (8.0, 0.6, "load.feed_mm_per_rev", "0.01 to 0.5 mm per turn"),
    ],
)
def test_outside_the_printed_rows_it_is_not_covered(diameter, feed, where, allowed):
    out = drill(diameter, feed)
    (found,) = out.problems()
    assert (found.where, found.allowed) == (where, allowed)
    assert found.what.startswith("not covered")
    with pytest.raises(ValueError, match="not covered"):
        out.force_n(np.zeros(3))


def test_wear_scales_thrust_and_torque_alike():
    sharp, dull, given = drill(), drill(wear="dull"), drill(wear=1.5)
    assert dull.thrust_n() == pytest.approx(1.5 * sharp.thrust_n())
    assert given.torque_nm() == pytest.approx(1.5 * sharp.torque_nm())
    assert wear_grades(library()) == {"sharp": 1.0, "normal": 1.3, "dull": 1.5}
    assert drill(wear=0.5).problems()[0].where == "load.wear"


def test_torque_by_hand():
    # 8 mm, 0.10 mm per turn: 0.000025 x 24000 x 0.158 x 8^1.8 x 1.085
    assert drill().torque_nm() == pytest.approx(0.6 * 0.158 * 42.2243 * 1.085, rel=1e-5)


def test_a_material_row_can_be_changed_for_a_what_if():
    changed = drill(lib=library().with_value(MATERIALS, "steel 200 HB", 12000.0))
    assert changed.thrust_n() == pytest.approx(drill().thrust_n() / 2, rel=1e-12)
    assert {row.name for row in changed.parameters} >= {
        "steel 200 HB",
        "standard.b",
        "standard.j",
        "wear.sharp",
    }


@pytest.mark.parametrize("wrong", [{"material": "butter"}, {"point": "blunt"}, {"wear": "rusty"}])
def test_unknown_names_list_the_known_ones(wrong):
    with pytest.raises(ValueError, match="is none of"):
        drill(**wrong)


def test_the_thrust_is_the_same_all_along_the_travel():
    np.testing.assert_array_equal(drill().force_n(np.linspace(0, 0.02, 4)), drill().thrust_n())
    assert len(materials(library())) == 6
