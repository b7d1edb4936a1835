"""The strong end: parts in round numbers, the weak one named, and what is refused."""

import math

import pytest

from ergo.datasets import library
from ergo.errors import DataError
from ergo.letgo import structure as s

LIB = library()
STEEL = s.Material("steel", 300e6, 300e6 * 0.577, "memory")
PLAIN = s.Finish("plain", 1.0, "memory")


def test_a_flat_lever_of_round_numbers():
    # 400 N at 0.3 m on 10 x 20 mm: 120 N m over 667 mm3 is 180 MPa
    part = s.bent("lever root", 400.0, 0.3, s.rectangle_modulus_m3(0.020, 0.010), STEEL, PLAIN)
    assert part.stress_pa == pytest.approx(180e6, rel=1e-12)
    assert part.safety == pytest.approx(300.0 / 180.0, rel=1e-12)


def test_double_shear_halves_and_a_notch_multiplies():
    single = s.sheared("pin", 1000.0, 20e-6, 1, STEEL, PLAIN)
    double = s.sheared("pin", -1000.0, 20e-6, 2, STEEL, PLAIN)
    assert single.stress_pa == pytest.approx(50e6)
    assert double.stress_pa == pytest.approx(25e6)
    cut = s.sheared("pin", 1000.0, 20e-6, 1, STEEL, s.Finish("cut thread", 2.8, "memory"))
    assert single.safety / cut.safety == pytest.approx(2.8)


def test_a_thread_in_the_shear_plane_is_weaker_than_the_plain_shank_beside_it():
    shank = s.sheared("pin", 2000.0, math.pi / 4 * 0.010**2, 1, STEEL, PLAIN)
    finish = s.Finish.from_library(LIB, "cut thread")
    thread = s.sheared("threaded pin", 2000.0, s.stress_area_m2(LIB, "M10"), 1, STEEL, finish)
    verdict = s.strong_end(800.0, [shank, thread], LIB)
    assert verdict.weak is thread
    assert verdict.safety == thread.safety < shank.safety / 2.8


def test_the_sentence_names_force_part_and_safety():
    weak = s.bent("lever root", 600.0, 0.3, s.round_modulus_m3(0.016), STEEL, PLAIN)
    verdict = s.strong_end(600.0, [weak, s.sheared("pivot pin", 2000.0, 78e-6, 2, STEEL, PLAIN)], LIB)
    stress = 600.0 * 0.3 * 32 / (math.pi * 0.016**3)
    assert verdict.sentence() == (
        f"At 600 N the weak part is the lever root, in bending, with a safety of {300e6 / stress:.2f} against yield, "
        "which is too little for the 2 asked."
    )
    assert not verdict.enough


def test_shear_yield_is_von_mises():
    steel = s.Material.from_library(LIB, "C45+N")
    assert steel.shear_yield_pa / steel.yield_pa == pytest.approx(1 / math.sqrt(3), rel=1e-3)
    assert steel.status == "memory"


def test_an_unloaded_part_is_safe_for_good():
    assert s.sheared("pin", 0.0, 20e-6, 1, STEEL, PLAIN).safety == math.inf


def test_a_tube_without_a_bore_is_a_bar_and_a_bore_too_large_is_refused():
    assert s.tube_modulus_m3(0.02, 0.0) == pytest.approx(s.round_modulus_m3(0.02), rel=1e-12)
    with pytest.raises(ValueError, match="bore must lie between"):
        s.tube_modulus_m3(0.02, 0.02)


def test_what_is_not_in_the_tables_is_one_sentence():
    for wrong in (
        lambda: s.Material.from_library(LIB, "unobtainium"),
        lambda: s.Finish.from_library(LIB, "rough"),
        lambda: s.stress_area_m2(LIB, "M7"),
    ):
        with pytest.raises(DataError) as caught:
            wrong()
        assert "\n" not in str(caught.value)
    with pytest.raises(ValueError, match="at least one part"):
        s.strong_end(100.0, [], LIB)


@pytest.mark.parametrize("finish", list(s.FINISHES))
@pytest.mark.parametrize("material", ["S235JR", "class 8.8"])
def test_every_finish_and_material_leads_to_rows(finish, material):
    for table, name in s.parameter_names(material, finish, "M8"):
        assert name in LIB.parameters(table)
    assert s.Finish.from_library(LIB, finish).notch >= 1.0
    assert material in s.materials(LIB)
    assert "M8" in s.threads(LIB)


def test_a_changed_row_changes_the_part():
    strong = s.Material.from_library(LIB.with_value(s.MATERIALS, "S235JR", 355.0), "S235JR")
    assert strong.yield_pa == pytest.approx(355e6)
