"""Comparing on the same people: paired differences checked by hand, no winner inside the noise."""

from types import SimpleNamespace

import numpy as np
import pytest
from scipy import stats

import ergo
from ergo.explore.compare import compare, named


def study(seed):
    return ergo.read_study("gasket_punch").with_values({"operators.count": 60, "operators.seed": seed, "study.positions": 5})


def fake(served_by_name):
    answers = iter(served_by_name)

    def judge(_study):
        served = np.array(next(answers))
        rating = SimpleNamespace(value=100 * served.mean(), low=0.0, high=100.0)
        names = ("direction", "reach", "force", "posture", "clearance", "let_go", "served")
        return SimpleNamespace(
            crowd=SimpleNamespace(served=served), ratings=dict.fromkeys(names, rating), verdict="meets",
            stroke=SimpleNamespace(demand_n=np.array([1.0, np.inf])),
        )  # fmt: skip

    return judge


def test_paired_difference_is_the_paired_t_interval_of_a_large_sample():
    rng = np.random.default_rng(1)
    a, b = rng.random(4000) < 0.6, rng.random(4000) < 0.7
    found = compare({"a": study(1), "b": study(1)}, judge=fake([a, b])).differences[0]
    other = stats.ttest_rel(b.astype(float), a.astype(float)).confidence_interval(0.95)
    # normal against Student's t at 3999 degrees of freedom: 0.02 % of the half width
    assert (found.low, found.high) == pytest.approx((100 * other.low, 100 * other.high), abs=0.01)
    assert found.clear
    assert "serves" in found.sentence("a")


def test_no_winner_inside_the_noise():
    same = np.arange(100) < 50
    found = compare({"a": study(1), "b": study(1)}, judge=fake([same, same]))
    assert found.best()["served"] == ""
    assert "serve the same people as far as this draw can tell" in found.sentences()[0]


def test_everybody_is_judged_on_the_first_studys_people():
    seeds = []

    def judge(asked):
        seeds.append((asked.operators.seed, asked.operators.count))
        return fake([np.ones(60, bool)])(asked)

    compare({"a": study(1), "b": study(9)}, judge=judge)
    assert seeds == [(1, 60), (1, 60)]


def test_a_study_brings_its_variants():
    assert list(named([("punch", study(1))], with_variants=True)) == ["punch", "punch: longer", "punch: other_angle"]


def test_the_real_engine_pairs_people():
    found = compare(named([("punch", study(1))], with_variants=True))
    assert len(found.differences) == 2
    assert all(d.low <= d.points <= d.high for d in found.differences)
    assert found.results["punch: longer"].stroke.demand_n.max() < found.results["punch"].stroke.demand_n.max()
