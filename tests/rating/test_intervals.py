"""Stated 95 % intervals cover what they say, over repeated draws."""

import numpy as np
import pytest
from scipy import stats

from ergo.rating.intervals import mean_interval, paired_interval, share_interval, wilson
from tests.rating.paired_score import score_interval


@pytest.mark.parametrize(("p_women", "p_men", "share"), [(0.5, 0.9, 0.5), (0.8, 0.95, 0.3), (0.1, 0.6, 0.7), (0.9, 0.9, 0.0)])
def test_share_intervals_cover_92_to_98_of_a_hundred(p_women, p_men, share):
    rng, n, hits = np.random.default_rng(4), 600, 0
    women = np.arange(n) < round(share * n)
    truth = women.mean() * p_women + (1 - women.mean()) * p_men
    for _ in range(2000):
        _, low, high = share_interval(rng.random(n) < np.where(women, p_women, p_men), women)
        hits += low <= truth <= high
    assert 0.92 <= hits / 2000 <= 0.98


def test_wilson_against_scipy():
    for k, n in ((0, 20), (7, 30), (299, 300), (50, 50)):
        other = stats.binomtest(k, n).proportion_ci(method="wilson")
        assert wilson(k / n, n) == pytest.approx((other.low, other.high), abs=1e-12)


def test_mean_intervals_cover_92_to_98_of_a_hundred():
    rng, hits = np.random.default_rng(5), 0
    women = np.arange(400) < 160
    truth = 0.4 * 50 + 0.6 * 70
    for _ in range(2000):
        values = np.where(women, rng.normal(50, 20, 400), rng.normal(70, 5, 400))
        _, low, high = mean_interval(values, women)
        hits += low <= truth <= high
    assert 0.92 <= hits / 2000 <= 0.98


@pytest.mark.parametrize(("alone", "base_alone", "people"), [(6, 0, 200), (30, 10, 200), (1, 0, 500), (3, 9, 40), (2, 1, 10), (40, 40, 90)])
def test_paired_interval_against_the_likelihood_by_scipy(alone, base_alone, people):
    counts = [alone, base_alone, people - alone - base_alone]
    found = paired_interval(np.repeat([True, False, True], counts), np.repeat([False, True, True], counts))
    low, high = score_interval(alone, base_alone, people)
    # The oracle's likelihood is searched to about 1e-8 of a share.
    assert found == pytest.approx(((alone - base_alone) / people, low, high), abs=1e-6)
