"""Constant, spring, table and let-go: values at hand-worked places, and what is not covered."""

import numpy as np
import pytest

from ergo.load.constant import ConstantLoad
from ergo.load.lets_go import LetsGo
from ergo.load.spring import SpringLoad
from ergo.load.table import TableLoad

SLIDE = np.array([0.0, 0.005, 0.010])


def test_constant_and_spring():
    np.testing.assert_array_equal(ConstantLoad(250.0).force_n(SLIDE), [250.0] * 3)
    np.testing.assert_allclose(SpringLoad(100.0, 20e3).force_n(SLIDE), [100.0, 200.0, 300.0])


def test_a_table_is_straight_between_its_rows_and_refuses_the_rest():
    load = TableLoad((0.0, 0.004, 0.010), (100.0, 500.0, 200.0))
    np.testing.assert_allclose(load.force_n(SLIDE), [100.0, 450.0, 200.0])
    assert load.problems() == ()
    assert load.reach_problems(SLIDE) == ()
    found = load.reach_problems(np.array([0.0, 0.012]))
    assert "travel from 0.00 to 12.00 mm" in found[0].got
    assert found[0].allowed == "0 to 10 mm"
    with pytest.raises(ValueError, match="nothing is read beyond its rows"):
        load.force_n(np.array([-0.001]))


@pytest.mark.parametrize(
    ("load", "words"),
    [
        (ConstantLoad(np.nan), "finite number"),
        (SpringLoad(-1.0, 10.0), "not below zero"),
        (SpringLoad(1.0, np.inf), "finite number"),
        (TableLoad((0.0,), (1.0,)), "at least two rows"),
        (TableLoad((0.0, 0.0), (1.0, 2.0)), "must rise"),
        (TableLoad((0.0, 0.1), (1.0, np.nan)), "not a finite number"),
    ],
)
def test_bad_loads_are_problems(load, words):
    assert words in load.problems()[0].what


def test_beyond_its_let_go_a_load_is_gone_and_its_table_is_not_asked():
    load = LetsGo(TableLoad((0.0, 0.006), (100.0, 400.0)), 0.005)
    np.testing.assert_allclose(load.force_n(SLIDE), [100.0, 350.0, 0.0])
    np.testing.assert_array_equal(load.force_n(np.array([0.0051, 0.0059])), 0.0)
    assert load.reach_problems(SLIDE) == ()
    assert LetsGo(ConstantLoad(5.0), -0.001).problems()[0].where == "load.lets_go_at"
    np.testing.assert_array_equal(LetsGo(ConstantLoad(5.0), -0.001).force_n(SLIDE), 0.0)
