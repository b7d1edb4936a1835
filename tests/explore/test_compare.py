"""Comparing on the same people: paired differences checked by hand, no winner inside the noise."""

from types import SimpleNamespace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy import stats

import ergo
from ergo.explore.compare import compare, named
from ergo.rating.intervals import Z, paired_interval


def study(seed):
    return ergo.read_study("gasket_punch").with_values({"operators.count": 60, "operators.seed": seed, "study.positions": 5})


def fake(served_by_name):
    answers = iter(served_by_name)

    def judge(_study):
        served = np.array(next(answers))
        rating = SimpleNamespace(value=100 * served.mean(), low=0.0, high=100.0, met=True, target=95.0, worst_stroke=0.5, cause="grip")
        names = ("direction", "reach", "force", "posture", "clearance", "let_go", "served")
        return SimpleNamespace(
            crowd=SimpleNamespace(served=served), ratings=dict.fromkeys(names, rating), verdict="meets",
            stroke=SimpleNamespace(
                demand_n=np.array([1.0, np.inf, 7.0]), handle_mm=np.array([[0, 0, 0], [3, 4, 0], [3, 4, 5.0]]),
                ratio=np.array([0.2, -0.3, 0.1]), feel_n=np.array([np.nan, 2.0, 1.0]), gap_mm=np.full(3, np.inf),
            ),
        )  # fmt: skip

    return judge


def test_paired_difference_is_the_paired_t_interval_of_a_large_sample():
    rng = np.random.default_rng(1)
    a, b = rng.random(4000) < 0.6, rng.random(4000) < 0.7
    found = compare({"a": study(1), "b": study(1)}, judge=fake([a, b])).differences[0]
    other = stats.ttest_rel(b.astype(float), a.astype(float)).confidence_interval(0.95)
    # The score interval and Student's t at 3999 degrees of freedom differ by terms of 1/n: under 0.05 points of 2.9.
    assert (found.low, found.high) == pytest.approx((100 * other.low, 100 * other.high), abs=0.05)
    assert found.points == pytest.approx(100.0 * (b.mean() - a.mean()))
    assert found.clear
    assert "serves" in found.sentence("a")


@given(st.integers(0, 60), st.integers(0, 60), st.integers(1, 300))
def test_zero_lies_inside_exactly_when_mcnemar_does_not_reject(alone, base_alone, alike):
    """At no difference the score statistic is McNemar's (b - c) / sqrt(b + c)."""
    other = np.repeat([True, False, True], [alone, base_alone, alike])
    base = np.repeat([False, True, True], [alone, base_alone, alike])
    _, low, high = paired_interval(other, base)
    turned = paired_interval(base, other)
    assert (low, high) == pytest.approx((-turned[2], -turned[1]), abs=1e-12)
    statistic = abs(alone - base_alone) / max(alone + base_alone, 1) ** 0.5
    if abs(statistic - Z) > 1e-6:
        assert (low <= 0.0 <= high) == (statistic <= Z)


@pytest.mark.parametrize(("alone", "base_alone", "people"), [(0.03, 0.01, 200), (0.2, 0.1, 80), (0.002, 0.0, 500), (0.4, 0.4, 60)])
def test_paired_intervals_cover_92_to_98_of_a_hundred_in_the_mean_and_never_much_less(alone, base_alone, people):
    rng, hits, count = np.random.default_rng(8), 0, 2000
    draws = rng.multinomial(people, [alone, base_alone, 1.0 - alone - base_alone], count)
    for b, c, rest in draws:
        other, base = np.repeat([True, False, True], [b, c, rest]), np.repeat([False, True, True], [b, c, rest])
        _, low, high = paired_interval(other, base)
        hits += low <= alone - base_alone <= high
    # Where one person in five hundred differs the count is so coarse that the interval must cover more than it says.
    assert 0.92 <= hits / count <= (0.98 if people * (alone + base_alone) > 5 else 1.0)


def test_equal_people_leave_room_for_a_difference_that_was_not_drawn():
    same = np.ones(100, bool)
    mean, low, high = paired_interval(same, same)
    # z^2 / (n + z^2), as Wilson's interval has it for none of n.
    assert (mean, low, high) == pytest.approx((0.0, -Z**2 / (100 + Z**2), Z**2 / (100 + Z**2)), abs=1e-9)


def test_a_row_tells_force_travel_and_tool_movement():
    row = compare({"a": study(1), "b": study(1)}, judge=fake([np.ones(60, bool)] * 2)).rows()[1]
    assert (row["name"], row["largest_demand_n"], row["hand_travel_mm"]) == ("b", 7.0, 10.0)
    assert (row["tool_mm_per_hand_mm"], row["feel_n"], row["gap_mm"]) == (0.3, 2.0, None)


def test_no_winner_inside_the_noise():
    same = np.arange(100) < 50
    found = compare({"a": study(1), "b": study(1)}, judge=fake([same, same]))
    assert found.best()["served"] == ""
    assert "serve the same people as far as this draw can tell" in found.sentences()[0]


def test_everybody_is_judged_on_the_first_studys_people():
    seeds = []

    def judge(asked):
        seeds.append((asked.operators.seed, asked.operators.count, asked.operators.hand))
        return fake([np.ones(60, bool)])(asked)

    left_handed = study(9).with_values({"operators.hand": "left"})
    found = compare({"a": study(1), "b": left_handed}, judge=judge)
    assert seeds == [(1, 60, "right"), (1, 60, "left")]
    assert found.notes == ("b is judged on the people of a: its own seed is set aside.",)


def test_a_study_brings_its_variants():
    assert list(named([("punch", study(1))], with_variants=True)) == ["punch", "punch: longer", "punch: other_angle"]


def test_the_real_engine_pairs_people():
    found = compare(named([("punch", study(1))], with_variants=True))
    assert len(found.differences) == 2
    assert all(d.low <= d.points <= d.high for d in found.differences)
    assert found.results["punch: longer"].stroke.demand_n.max() < found.results["punch"].stroke.demand_n.max()
