"""EN 1005-3:2002+A1:2008 (numbers from memory): the worked readings of the reference notes, section 3.1."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.strength.en_1005_3_2002 import en_1005_3_2002

ONE, NONE = np.ones(1), np.zeros(1)


def limit(pull=NONE, up=NONE, inward=NONE, **changes):
    asked = {"standing": True, "trunk_support": False, "action_s": 2.0, "actions_per_minute": 10.0, "hours": 4.0, **changes}
    return en_1005_3_2002(pull, up, inward, library=library(), **asked)


def test_standing_pull_of_a_drill_press():
    found = limit(pull=ONE)
    assert found.velocity * found.frequency * found.duration == pytest.approx(0.2)
    assert found.reduced_n[0] == pytest.approx(29.0)
    assert found.zone(np.array([14.5])) == ["recommended"]
    assert found.zone(np.array([15.0])) == ["not recommended"]
    assert found.zone(np.array([21.0])) == ["to be avoided"]


def test_sitting_pull_with_support():
    assert limit(pull=ONE, standing=False, trunk_support=True).reduced_n[0] == pytest.approx(45.0)


@pytest.mark.parametrize(("seconds", "rate", "multiplier"), [(2, 0.1, 1.0), (2, 1, 0.8), (2, 20, 0.5), (2, 21, 0.3), (4, 0.1, 0.6),
                                                             (4, 1, 0.4), (4, 10, 0.2)])  # fmt: skip
def test_frequency_multipliers(seconds, rate, multiplier):
    assert limit(pull=ONE, action_s=seconds, actions_per_minute=rate).frequency == multiplier


def test_what_the_standard_does_not_cover_is_said():
    found = limit(pull=ONE, action_s=4, actions_per_minute=30)
    assert np.isnan(found.reduced_n[0])
    assert "not covered" in found.reason
    assert np.isnan(limit(pull=ONE, hours=9).reduced_n[0])


def test_single_directions_meet_their_rows():
    for part, sign, newtons in (("up", 1, 50), ("up", -1, 75), ("inward", 1, 75), ("inward", -1, 55)):
        assert limit(**{part: sign * ONE}).basic_n[0] == pytest.approx(newtons)
