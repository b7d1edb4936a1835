"""Feel of lever and screw: shares in round numbers, what blunts, and what is not felt."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.errors import DataError
from ergo.letgo.feel import Touch, screw_hand_force_n, screw_noticed, smallest_noticed

LIB = library()
TOUCH = Touch.from_library(LIB)


def test_a_lever_without_friction_or_weight_passes_the_share_of_touch_itself():
    found = smallest_noticed([50.0], 0.0, 0.0, [500.0], TOUCH)
    assert found.load_share == pytest.approx([1.0])
    assert found.smallest_share == pytest.approx([0.07])
    assert found.smallest_n == pytest.approx([35.0])
    assert found.felt.all()


def test_friction_and_weight_blunt_it():
    # half the hand force is friction and weight: twice the change is needed
    found = smallest_noticed([80.0], [25.0], [15.0], [400.0], TOUCH)
    assert found.load_share == pytest.approx([0.5])
    assert found.smallest_n == pytest.approx([0.14 * 400.0])


def test_positions_where_the_load_is_gone_or_almost_all_is_friction_are_not_felt():
    found = smallest_noticed([20.0, 20.0, 40.0], [20.0, 19.0, 0.0], 0.0, [0.0, 50.0, 300.0], TOUCH)
    assert found.felt.tolist() == [False, False, True]
    assert found.smallest_n[0] == np.inf
    assert found.reasons(TOUCH)[0].startswith("no change")
    assert found.reasons(TOUCH)[2] == ""


def test_forces_outside_the_range_of_touch_are_not_covered():
    found = smallest_noticed([1.0, 30.0, 500.0], 0.0, 0.0, [10.0, 300.0, 5000.0], TOUCH)
    assert found.covered.tolist() == [False, True, False]
    assert "not covered: touch was measured from 2.5 to 410 N" in found.reasons(TOUCH)[0]


def test_screw_hand_force_does_the_work_of_the_load():
    # one turn: hand force x 2 pi R x efficiency = load x lead
    force = screw_hand_force_n([600.0], 0.004, 0.05, 0.4)
    assert force * 2 * np.pi * 0.05 * 0.4 == pytest.approx([600.0 * 0.004])


def test_a_self_locking_screw_gives_no_cue_and_a_ball_screw_nearly_all():
    locked = screw_noticed([600.0, 900.0], 0.004, 0.05, 0.4, TOUCH)
    assert not locked.felt.any()
    assert (locked.smallest_n == np.inf).all()
    ball = screw_noticed([600.0], 0.02, 0.05, 0.9, TOUCH)
    assert ball.load_share == pytest.approx([2.0 - 1.0 / 0.9])
    lever = smallest_noticed([60.0], 0.0, 0.0, [600.0], TOUCH)
    assert ball.smallest_n > lever.smallest_n


def test_driving_back_efficiency_is_that_of_the_wedge():
    # lead angle a, friction angle f: forward tan a / tan(a + f), back tan(a - f) / tan a; equal to 2 - 1/e for
    # small angles
    a, f = 0.02, 0.006
    forward, back = np.tan(a) / np.tan(a + f), np.tan(a - f) / np.tan(a)
    found = screw_noticed([100.0], 0.005, 0.05, forward, TOUCH)
    assert found.load_share == pytest.approx([back], abs=2e-4)


def test_a_missing_row_is_one_sentence():
    with pytest.raises(DataError, match="no value or range for force_weber, so what the hand still feels"):
        Touch.from_library(LIB.with_value("letgo_feel", "force_weber", float("nan")))
