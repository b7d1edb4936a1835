"""Virtual operators: the same people for the same seed, sane bodies, honest refusals."""

import dataclasses

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from ergo.datasets import library
from ergo.errors import DataError, StudyError
from ergo.people.operators import draw
from ergo.people.percentiles import percentiles, tables
from ergo.people.populations import population_keys

LIBRARY = library()
POPULATIONS = ("us_army_2012", "us_adults_2015", "germany_2005", "great_britain", "japan", "china_1988", "hong_kong")


def test_the_seven_shipped_populations_are_there():
    assert set(population_keys(LIBRARY)) == set(POPULATIONS)
    assert all(row["caveats"] for row in tables(LIBRARY))


@given(seed=st.integers(0, 2**31 - 1), count=st.integers(50, 300), share=st.floats(0, 1),
       name=st.sampled_from(POPULATIONS))  # fmt: skip
@settings(max_examples=25, deadline=None)
def test_same_seed_same_people_and_the_share_of_women_is_met(seed, count, share, name):
    first, again = (draw(LIBRARY, name, women_share=share, count=count, seed=seed) for _ in range(2))
    for field in dataclasses.fields(first):
        assert np.array_equal(getattr(first, field.name), getattr(again, field.name))
    assert first.women.sum() == round(share * count)
    for field in dataclasses.fields(first):
        value = getattr(first, field.name)
        if isinstance(value, np.ndarray) and value.dtype == float and not field.name.endswith("_z"):
            assert np.all(value > 0.0), field.name
    assert np.all(first.acromion_height_m > first.hip_height_m)
    assert np.all(first.elbow_height_m < first.acromion_height_m)


def test_the_hand_changes_nobody():
    right, left = (draw(LIBRARY, "germany_2005", women_share=0.5, count=100, seed=2, hand=h) for h in ("right", "left"))
    assert np.array_equal(right.upper_arm_m, left.upper_arm_m)


def test_shoes_and_gloves_add_what_they_say():
    bare = draw(LIBRARY, "us_army_2012", women_share=0.5, count=100, seed=2)
    clad = draw(LIBRARY, "us_army_2012", women_share=0.5, count=100, seed=2, shoes_mm=30, glove="heavy")
    assert np.allclose(clad.acromion_height_m - bare.acromion_height_m, 0.030)
    assert np.allclose(clad.hand_breadth_m - bare.hand_breadth_m, 0.020)  # the heavy glove's row, MIL-STD-1472 (memory)


def test_percentiles_rise_and_name_the_derived_links():
    found = percentiles(LIBRARY, "great_britain")
    for sex in ("women", "men"):
        for name in ("shoulder_height_standing_mm", "shoulder_height_seated_mm", "elbow_height_standing_mm",
                     "upper_arm_link_mm", "forearm_grip_link_mm", "forward_grip_reach_mm"):  # fmt: skip
            assert name in found[sex]
        for marks in found[sex].values():
            values = [marks[m] for m in ("p01", "p05", "p50", "p95", "p99")]
            assert values == sorted(values)
    assert set(found["statuses"]) == set(found["men"])


def test_common_strength_factor_follows_body_mass():
    people = draw(LIBRARY, "us_adults_2015", women_share=0.0, count=4000, seed=1)
    r = np.corrcoef(np.log(people.mass_kg), people.strength_common_z)[0, 1]
    # The row says 0.53 (from r2 of 25 and 31 %); 4000 people estimate a correlation to about 0.012.
    assert abs(r - 0.53) < 0.04


def test_an_unknown_population_is_named_with_the_nearest():
    with pytest.raises(DataError, match="did you mean germany_2005"):
        draw(LIBRARY, "germany_2006", women_share=0.5, count=50, seed=1)


def test_a_users_table_of_stature_and_mass_is_enough(tmp_path):
    own = tmp_path / "own.csv"
    own.write_text(
        "sex,dimension,unit,mean,sd\nfemale,stature,mm,1600,60\nfemale,body_mass,kg,65,11\n"
        "male,stature,mm,1720,65\nmale,body_mass,kg,75,12\n"
    )
    people = draw(LIBRARY, own, women_share=0.5, count=4000, seed=1)
    # Means of 2000 people: standard error 1.5 mm.
    assert abs(people.stature_m[people.women].mean() - 1.600) < 0.006
    assert abs(people.mass_kg[~people.women].mean() - 75.0) < 1.0
    assert abs(people.stature_m[~people.women].std() - 0.065) < 0.004


def test_every_fault_of_a_users_table_is_told_at_once(tmp_path):
    own = tmp_path / "own.csv"
    own.write_text("sex,dimension,unit,mean,sd\nwoman,stature,mm,1600,60\nmale,statur,mm,1720,65\nmale,stature,cm,172,x\n")
    with pytest.raises(StudyError) as caught:
        draw(LIBRARY, own, women_share=0.5, count=50, seed=1)
    text = str(caught.value)
    for part in ("own.csv:2 sex", "own.csv:3 dimension", "own.csv:4 unit", "own.csv:4 sd", "has no body_mass for male"):
        assert part in text
