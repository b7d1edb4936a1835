"""Turning a handle about its own axis: which gives out first."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.letgo import twist as t

LIB = library()


def turn(needed=4.0, angle=0.5, forearm=6.0, grip=8.0, now=0.2, end=1.2):
    return t.twist([needed], [angle], [[forearm]], [[grip]], [[now]], end)


@pytest.mark.parametrize(
    ("changes", "first"),
    [
        ({}, t.NOTHING),
        ({"needed": 7.0}, t.FOREARM),
        ({"needed": 5.0, "grip": 4.5}, t.GRIP),
        ({"angle": 1.1}, t.RANGE),
        ({"angle": 1.1, "needed": 7.0}, t.RANGE),
        ({"forearm": np.nan}, t.NOT_COVERED),
    ],
)
def test_which_comes_first(changes, first):
    found = turn(**changes)
    assert found.first[0, 0] == first
    assert found.able[0, 0] == (first == t.NOTHING)


def test_margin_is_the_lesser_torque_over_the_needed_one():
    found = turn(grip=5.0)
    assert found.torque_nm[0, 0] == 5.0
    assert found.margin[0, 0] == pytest.approx(1.25)
    assert found.turn_left_rad[0, 0] == pytest.approx(1.0)
    assert turn(needed=0.0).margin[0, 0] == np.inf


def test_shares_count_covered_operators():
    forearm = np.array([[6.0], [3.0], [np.nan], [6.0]])
    found = t.twist([4.0], [0.5], forearm, np.full((4, 1), 8.0), np.full((4, 1), 0.2), 1.2)
    shares = found.shares()
    assert shares[t.LIMIT_WORDS[t.NOTHING]] == pytest.approx([2 / 3])
    assert shares[t.LIMIT_WORDS[t.FOREARM]] == pytest.approx([1 / 3])
    assert found.shares([True, False, True, True])[t.LIMIT_WORDS[t.NOTHING]] == pytest.approx([1.0])


def test_grip_torque_of_two_flat_jaws():
    # palm and fingers each press with the grip force: friction 0.5, 200 N on each side of a 40 mm bar
    torque = t.grip_torque_nm([200.0], 0.5, 0.04, LIB.with_value(t.TABLE, "normal_over_grip", 2.0))
    assert torque == pytest.approx([2 * 0.5 * 200.0 * 0.02])
