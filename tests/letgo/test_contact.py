"""Blows: spring and mass in round numbers, who gives way, limits, and what is not covered."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.errors import DataError
from ergo.letgo.contact import REGIONS, Region, parameter_names, strike

LIB = library()
CHEST = Region("chest", 25e3, 40.0, 140.0, 280.0, "memory")


def test_a_fixed_region_of_round_numbers():
    # 2.5 kg on 25 N/mm at 1 m/s: sqrt(25000 x 2.5) = 250 N, 1.25 J
    hit = strike(CHEST, 1.0, 2.5, region_is_held=True)
    assert hit.peak_n == pytest.approx(250.0, rel=1e-12)
    assert hit.energy_j == pytest.approx(1.25, rel=1e-12)
    assert hit.within


def test_a_region_that_gives_way_takes_part_with_its_mass():
    # 10 kg against 40 kg: reduced mass 8 kg
    hit = strike(CHEST, 0.5, 10.0)
    assert hit.peak_n == pytest.approx(0.5 * np.sqrt(25e3 * 8.0), rel=1e-12)
    assert hit.energy_j == pytest.approx(0.5 * 8.0 * 0.25, rel=1e-12)
    assert strike(CHEST, 0.5, np.inf).energy_j == pytest.approx(0.5 * 40.0 * 0.25, rel=1e-12)


def test_peak_force_and_energy_belong_together():
    # a spring pressed by E peaks at sqrt(2 E k)
    hit = strike(CHEST, [0.2, 0.7], [3.0, 8.0])
    assert hit.peak_n == pytest.approx(np.sqrt(2.0 * hit.energy_j * 25e3), rel=1e-12)


@pytest.mark.parametrize(("speed", "pressed", "within"), [(1.1, 100.0, True), (1.2, 0.0, False), (0.1, 141.0, False)])
def test_a_blow_and_a_lasting_press_each_have_their_limit(speed, pressed, within):
    # 2.5 kg held: 250 N a metre per second, against 280 N; pressing against 140 N
    assert strike(CHEST, speed, 2.5, pressed, region_is_held=True).within == within


def test_nothing_met_is_not_covered():
    hit = strike(CHEST, [np.nan, 0.1], 2.0)
    assert hit.covered.tolist() == [False, True]
    assert hit.within.tolist() == [False, True]


def test_the_front_of_the_neck_has_no_limit_and_says_so():
    neck = Region.from_library(LIB, "neck_front")
    hit = strike(neck, 0.01, 1.0)
    assert not hit.covered
    assert not hit.within
    assert any("must not happen" in caution for caution in hit.cautions)


def test_the_face_has_no_allowance_for_a_blow():
    face = Region.from_library(LIB, "face")
    assert face.transient_n == face.quasi_static_n
    assert any("not allowed at all" in caution for caution in strike(face, 0.1, 1.0).cautions)


@pytest.mark.parametrize("name", list(REGIONS))
def test_every_region_reads_and_is_recalled_in_part(name):
    region = Region.from_library(LIB, name)
    assert region.spring_n_per_m >= 10e3
    assert region.status == "memory"
    assert any("recalled" in caution for caution in strike(region, 0.1, 1.0).cautions)
    for table, row in parameter_names(name):
        assert row in LIB.parameters(table)


def test_an_unknown_region_and_a_missing_row_are_one_sentence():
    with pytest.raises(DataError, match="no region knuckle"):
        Region.from_library(LIB, "knuckle")
    gone = LIB.with_value("body_contact_iso_ts_15066_2016", "face.spring_n_per_mm", float("nan"))
    with pytest.raises(DataError, match=r"no value or range for face\.spring_n_per_mm, so contact with the face"):
        Region.from_library(gone, "face")
