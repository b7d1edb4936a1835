"""The second and third opinion: which of standard and strengths is stricter, and how much of a disagreement is said."""

import functools
import re

import numpy as np
import pytest

from ergo.cli.studies import shipped_studies
from ergo.evaluation.run import evaluate
from ergo.study.reader import read

FEW = {"operators.count": 60, "study.positions": 5}


@functools.cache
def judged(*changes):
    return evaluate(read(shipped_studies()["fixture_clamp"]).with_values({**FEW, **dict(changes)}))


def sentence(results, start):
    return next(text for text in results.reasons if text.startswith(start))


def test_the_standard_is_held_against_the_weaker_operators():
    results = judged()
    said = sentence(results, "EN 1005-3 (professional use)")
    limit, at, need, times, given = (float(re.search(pattern, said).group(1)) for pattern in (
        r"hand force to (\d+) N", r"at (\d+) % of", r"; (\d+) N needed", r"is ([\d.]+) times", r"against (\d+) N"))  # fmt: skip
    p = int(np.argmin(np.abs(results.stroke.stroke - at / 100)))
    assert limit == pytest.approx(results.stroke.en_1005_3_n[p], abs=0.5)
    assert need == pytest.approx(results.stroke.demand_n[p], abs=0.5)
    # Printed to one decimal.
    assert times == pytest.approx(results.stroke.demand_n[p] / results.stroke.en_1005_3_n[p], abs=0.051)
    assert ("The standard is stricter there" in said) == (limit < given)
    weak = results.stroke.allowed_n
    assert weak["women_p05"][p] - 1 <= given <= weak["men_p50"][p] + 1


def test_strengths_are_called_stricter_where_they_are():
    # A stroke that is held for half an hour a go leaves less of the strength than the standard takes off.
    results = judged(("duty.hold_s", 1800.0), ("duty.strokes_per_minute", 0.03))
    # Holding for half an hour in every 33 minutes is a duty cycle of 0.9: a fortieth of the strength is left.
    assert results.details["repetition"]["duty_cycle"] == pytest.approx(0.03 * (1800.0 + 1.0) / 60.0)
    assert "The strengths above are stricter there" in sentence(results, "EN 1005-3 (professional use)")
    assert "The standard is stricter there" in sentence(judged(), "EN 1005-3 (professional use)")


def test_the_standards_share_rises_with_the_load():
    light, heavy = judged(("load.preload_n", 40.0)), judged(("load.preload_n", 400.0))
    times = [float(re.search(r"is ([\d.]+) times", sentence(r, "EN 1005-3 (prof")).group(1)) for r in (light, heavy)]
    assert times[1] > 2.0 * times[0]


def test_a_women_only_crew_gets_no_second_opinion_of_men():
    results = judged(("operators.women_share", 1.0))
    assert not [text for text in results.reasons if "handbook table" in text]
