"""Strength by age after Danneskiold-Samsoe et al. 2009, abstract.

Men fall in a straight line from 25 years to 54-89 % at 75; women from about 40 years to 48-92 % at 75.
"""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.people.age import age_strength_share

LIBRARY = library()
MAN, WOMAN = np.array([False]), np.array([True])


@pytest.mark.parametrize(("sex", "low", "high"), [(MAN, 0.54, 0.89), (WOMAN, 0.48, 0.92)])
def test_share_at_75_years_lies_in_the_middle_of_the_published_range(sex, low, high):
    assert age_strength_share(sex, np.array([75.0]), LIBRARY)[0] == pytest.approx(0.5 * (low + high))


@pytest.mark.parametrize(("sex", "begins"), [(MAN, 25.0), (WOMAN, 40.0)])
def test_nothing_is_lost_before_the_fall_begins_and_half_of_it_half_way(sex, begins):
    young, half, old = (age_strength_share(sex, np.array([a]), LIBRARY)[0] for a in (begins, 0.5 * (begins + 75), 75.0))
    assert young == 1.0
    assert 1.0 - half == pytest.approx(0.5 * (1.0 - old))


def test_the_published_range_can_be_tried_as_a_what_if():
    weak = LIBRARY.with_value("age_strength", "men_share_at_75", 0.54)
    assert age_strength_share(MAN, np.array([75.0]), weak)[0] == pytest.approx(0.54)


@pytest.mark.parametrize("age", [15.9, 80.1])
def test_outside_the_covered_ages_is_refused(age):
    with pytest.raises(ValueError, match="not covered"):
        age_strength_share(MAN, np.array([age]), LIBRARY)
