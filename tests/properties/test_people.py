"""What holds of drawn people for any seed, count, share and population."""

import dataclasses

import numpy as np
from hypothesis import given, settings
from hypothesis import strategies as st

from ergo.datasets import library
from ergo.people.age import age_strength_share
from ergo.people.operators import draw
from ergo.people.populations import population_keys

LIBRARY = library()
NAMES = population_keys(LIBRARY)


@given(seed=st.integers(0, 2**31 - 1), count=st.integers(1, 300), share=st.floats(0, 1), name=st.sampled_from(NAMES))
@settings(max_examples=30)
def test_same_seed_same_bytes_and_sane_people(seed, count, share, name):
    first, again = (draw(LIBRARY, name, women_share=share, count=count, seed=seed) for _ in range(2))
    assert first.women.sum() == round(share * count)
    for field in dataclasses.fields(first):
        value, twin = getattr(first, field.name), getattr(again, field.name)
        if not isinstance(value, np.ndarray):
            assert value == twin
            continue
        assert value.tobytes() == twin.tobytes()
        assert len(value) == count
        assert np.all(np.isfinite(value))
        if value.dtype == float and not field.name.endswith("_z"):
            assert np.all(value > 0.0), field.name
    # Links of a living body: upper arm 0.12 to 0.20 of stature, elbow to grip 0.13 to 0.25.
    assert np.all((first.upper_arm_m > 0.12 * first.stature_m) & (first.upper_arm_m < 0.20 * first.stature_m))
    assert np.all((first.forearm_grip_m > 0.13 * first.stature_m) & (first.forearm_grip_m < 0.25 * first.stature_m))


@given(seed=st.integers(0, 10_000), share=st.floats(0.1, 0.9))
@settings(max_examples=15)
def test_the_mix_of_sexes_changes_no_woman_and_no_man(seed, share):
    mixed = draw(LIBRARY, "us_adults_2015", women_share=share, count=120, seed=seed)
    women = draw(LIBRARY, "us_adults_2015", women_share=1.0, count=120, seed=seed)
    men = draw(LIBRARY, "us_adults_2015", women_share=0.0, count=120, seed=seed)
    n = int(mixed.women.sum())
    assert np.array_equal(mixed.mass_kg[:n], women.mass_kg[:n])
    assert np.array_equal(mixed.mass_kg[n:], men.mass_kg[: 120 - n])


@given(ages=st.lists(st.floats(16, 80), min_size=2, max_size=20), woman=st.booleans())
def test_strength_never_rises_with_age(ages, woman):
    years = np.sort(np.array(ages))
    left = age_strength_share(np.full(years.size, woman), years, LIBRARY)
    assert np.all(np.diff(left) <= 1e-12)
    assert np.all((left > 0.0) & (left <= 1.0))
