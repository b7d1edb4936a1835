"""Virtual operators: what is worn, which hand, how strength and age are drawn."""

from itertools import pairwise

import numpy as np
import pytest
from scipy import stats

from ergo.datasets import library
from ergo.people.operators import draw
from ergo.people.sampling import sobol_points

LIBRARY = library()
ARMY = {"library": LIBRARY, "population": "us_army_2012", "women_share": 0.5, "seed": 2}


def test_the_hand_changes_nobody():
    right, left = (draw(**ARMY, count=100, hand=h) for h in ("right", "left"))
    assert (right.hand, left.hand) == ("right", "left")
    assert np.array_equal(right.upper_arm_m, left.upper_arm_m)
    assert np.array_equal(right.strength_joint_z, left.strength_joint_z)


def test_shoes_raise_what_stands_on_them_and_nothing_else():
    bare, shod = (draw(**ARMY, count=100, shoes_mm=s) for s in (0, 30))
    for name in ("acromion_height_m", "elbow_height_m", "eye_height_m", "hip_height_m", "ankle_height_m",
                 "knee_height_seated_m", "popliteal_height_m", "stature_shod_m"):  # fmt: skip
        assert getattr(shod, name) - getattr(bare, name) == pytest.approx(np.full(100, 0.030)), name
    for name in ("stature_m", "acromion_above_seat_m", "eye_above_seat_m", "upper_arm_m", "forearm_grip_m"):
        assert np.array_equal(getattr(shod, name), getattr(bare, name)), name
    assert np.array_equal(bare.stature_m, bare.stature_shod_m)
    assert np.all(shod.foot_length_m > bare.foot_length_m)


def test_gloves_add_what_their_rows_say():
    bare, thin, heavy = (draw(**ARMY, count=100, glove=g) for g in ("none", "thin", "heavy"))
    # Heavy: clearance for a gloved hand 135 mm against 115 mm bare (MIL-STD-1472, recalled).
    assert heavy.hand_breadth_m - bare.hand_breadth_m == pytest.approx(np.full(100, 0.020))
    assert np.all(bare.hand_depth_m < thin.hand_depth_m)
    assert np.all(thin.hand_depth_m < heavy.hand_depth_m)
    assert np.array_equal(bare.hand_length_m, heavy.hand_length_m)


def test_ages_are_even_over_the_band_and_change_no_body():
    young, all_ages = (draw(**ARMY, count=2000, age_years=band) for band in ((20.0, 30.0), (18.0, 64.0)))
    assert np.array_equal(young.stature_m, all_ages.stature_m)
    assert 20.0 <= young.age_years.min() <= young.age_years.max() <= 30.0
    spread = stats.kstest((all_ages.age_years - 18.0) / 46.0, "uniform")
    # Sobol points are evener than chance: the largest departure of 2 x 1000 points stays under 1 %.
    assert spread.statistic < 0.01


def test_strength_deviates_are_standard_normals_and_independent():
    people = draw(LIBRARY, "us_adults_2015", women_share=0.0, count=4096, seed=1)
    z = people.strength_joint_z
    assert z.shape == (4096, 16)
    # Scrambled Sobol points in 49 dimensions: moments well inside the 3 / sqrt(4096) = 0.047 of chance.
    assert z.mean(axis=0) == pytest.approx(np.zeros(16), abs=0.02)
    assert z.std(axis=0) == pytest.approx(np.ones(16), abs=0.02)
    both = np.corrcoef(np.column_stack([z, people.strength_common_z, np.log(people.mass_kg), people.age_years]).T)
    off = both[:16, 16:]
    assert np.abs(off).max() < 0.05
    assert np.abs(both[:16, :16] - np.eye(16)).max() < 0.06


@pytest.mark.parametrize("share", [0.0, 0.53])
def test_the_common_factor_follows_mass_as_its_row_says(share):
    changed = LIBRARY.with_value("body_model_parameters", "common_factor_mass_correlation", share)
    people = draw(changed, "us_army_2012", women_share=0.0, count=4096, seed=1)
    got = np.corrcoef(np.log(people.mass_kg), people.strength_common_z)[0, 1]
    assert got == pytest.approx(share, abs=0.03)  # chance alone: 1 / sqrt(4096) = 0.016
    assert people.strength_common_z.std() == pytest.approx(1.0, abs=0.02)


def test_more_operators_are_the_same_ones_and_further_ones():
    few, many = (draw(LIBRARY, "us_army_2012", women_share=0.0, count=n, seed=3) for n in (64, 256))
    assert np.array_equal(few.stature_m, many.stature_m[:64])


def test_body_heights_are_in_order():
    for name in ("us_army_2012", "us_adults_2015", "germany_2005", "great_britain", "japan", "china_1988", "hong_kong"):
        people = draw(LIBRARY, name, women_share=0.5, count=4096, seed=4)
        rising = (people.ankle_height_m, people.hip_height_m, people.acromion_height_m, people.eye_height_m,
                  people.stature_m)  # fmt: skip
        for lower, upper in pairwise(rising):
            assert np.all(lower < upper), name
        assert np.all(people.elbow_height_m < people.acromion_height_m), name
        assert np.all(people.forward_grip_reach_m < people.stature_m), name
        assert np.all(people.wrist_grip_m < people.forearm_grip_m), name


def test_points_lie_inside_the_open_cube():
    points = sobol_points(1024, 9, 0)
    assert points.min() > 0.0
    assert points.max() < 1.0
    assert sobol_points(0, 9, 0).shape == (0, points.shape[1])
    # Every coordinate halves evenly: 512 of 1024 on each side, which independent draws would miss by some 16.
    assert np.array_equal((points < 0.5).sum(axis=0), np.full(points.shape[1], 512))


@pytest.mark.parametrize("wrong", [{"hand": "both"}, {"glove": "mitten"}, {"women_share": 1.2}, {"count": 0}])
def test_what_cannot_be_drawn_is_refused(wrong):
    with pytest.raises(ValueError, match="hand one of"):
        draw(LIBRARY, "japan", **{"women_share": 0.5, "count": 10, "seed": 1, **wrong})
