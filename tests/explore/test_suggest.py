"""Suggestions on people whose margins follow a formula, so that the smallest change is known."""

from dataclasses import replace

import numpy as np
import pytest

import ergo
from ergo.cli.main import main
from ergo.errors import StudyError
from ergo.explore.free import free_keys, round_step
from ergo.explore.suggest import suggest

STUDY = ergo.read_study("gasket_punch").with_values({"operators.count": 60, "study.positions": 5})
FREE = {"lever.length_mm": (200.0, 440.0), "lever.pivot_mm[2]": (900.0, 1300.0)}


@pytest.fixture(scope="module")
def pattern():
    """One real result whose ratings and people are then replaced."""
    return ergo.evaluate(STUDY)


def judge_of(pattern, margin_of):
    """A judge: person n of the pattern has margin (0.8 + 0.01 n) times `margin_of(length, height)`."""

    def judge(study):
        margin = (0.8 + 0.01 * np.arange(60)) * margin_of(study.lever.length_mm, study.lever.pivot_mm[2])
        served = margin >= study.targets.margin_min
        ratings = {}
        for name, rating in pattern.ratings.items():
            value = 100.0 * served.mean() if name in ("force", "served") else 100.0
            ratings[name] = replace(rating, value=value, met=value >= rating.target)
        met = all(rating.met for rating in ratings.values())
        return replace(pattern, ratings=ratings, verdict="meets" if met else "falls short",
                       crowd=replace(pattern.crowd, margin=margin, served=served))  # fmt: skip

    return judge


def longer_is_easier(length, height):
    return length / 320.0


def test_the_smallest_change_is_found(pattern):
    """Of 60 people at least 57 must be served: (0.8 + 0.03) length / 320 >= margin, so the length follows."""
    study = STUDY.with_values({"targets.margin_min": 1.0})
    needed = 320.0 / (0.8 + 0.01 * 3)
    found = suggest(study, free=FREE, trials=80, judge=judge_of(pattern, longer_is_easier), look=None)
    best = found.proposals[0]
    assert best.meets
    assert best.changed == ["lever.length_mm"]
    assert needed <= best.values["lever.length_mm"] <= needed + 5.0
    assert best.cost == pytest.approx((best.values["lever.length_mm"] - 320.0) / 240.0)


def test_proposals_stay_inside_the_bounds_and_apart(pattern):
    study = STUDY.with_values({"targets.margin_min": 1.0})
    judge = judge_of(pattern, lambda length, height: (length / 320.0) * (1120.0 / height) ** 2)
    found = suggest(study, free=FREE, trials=120, judge=judge, look=None)
    assert len(found.proposals) >= 2
    spans = {path: high - low for path, (low, high) in FREE.items()}
    for n, proposal in enumerate(found.proposals):
        assert all(FREE[path][0] <= value <= FREE[path][1] for path, value in proposal.values.items())
        for other in found.proposals[:n]:
            assert max(abs(proposal.values[p] - other.values[p]) / spans[p] for p in FREE) >= 0.15 - 1e-9
    assert [p.cost for p in found.proposals] == sorted(p.cost for p in found.proposals)


def test_what_meets_its_targets_is_left_as_it_is(pattern):
    found = suggest(STUDY, free=FREE, trials=40, judge=judge_of(pattern, lambda length, height: 3.0), look=None)
    assert found.meets_already
    assert found.proposals == ()


def test_no_change_in_bounds_is_enough_and_the_block_is_named(pattern):
    found = suggest(STUDY, free=FREE, trials=60, judge=judge_of(pattern, lambda length, height: 0.2 * length / 320.0), look=None)
    assert found.proposals == ()
    assert {name for name, _, _ in found.blocked} == {"force", "served"}
    assert found.nearest is not None
    assert not found.nearest.meets


def test_the_same_seed_gives_the_same_answer(pattern):
    study = STUDY.with_values({"targets.margin_min": 1.0})
    answers = [suggest(study, free=FREE, trials=60, judge=judge_of(pattern, longer_is_easier), look=None).to_dict() for _ in range(2)]
    assert answers[0] == answers[1]


def test_it_can_be_stopped_from_its_progress(pattern):
    def stop(share, what):
        raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        suggest(STUDY, free=FREE, trials=60, judge=judge_of(pattern, longer_is_easier), look=None, tell=stop)


def test_progress_never_goes_back_and_each_key_says_its_part_of_the_cost(pattern):
    shares = []
    study = STUDY.with_values({"targets.margin_min": 1.0})
    found = suggest(study, free=FREE, trials=60, judge=judge_of(pattern, longer_is_easier), look=None,
                    tell=lambda share, what: shares.append(share))  # fmt: skip
    assert shares == sorted(shares)
    assert shares[0] == 0.0
    assert shares[-1] <= 1.0
    for row in found.proposals[0].to_dict()["changes"]:
        low, high = FREE[row["key"]]
        assert row["cost"] == pytest.approx(abs(row["to"] - row["from"]) / (high - low))


@pytest.mark.parametrize(("step", "expected"), [(2.4, 2.0), (0.7, 0.5), (10.0, 10.0), (1.0, 1.0), (0.049, 0.02)])
def test_steps_are_those_of_drawings(step, expected):
    assert round_step(step) == pytest.approx(expected)


@pytest.mark.parametrize(
    ("free", "words"),
    [({}, "targets.free: names no key that may change"),
     ({"lever.lenght_mm": (1.0, 2.0)}, "did you mean"),
     ({"lever.length_mm": (400.0, 200.0)}, "leaves no room"),
     ({"lever.length_mm": (1.0, 9000.0)}, "reaches outside the key's range"),
     ({"lever.pivot_mm": (1.0, 2.0)}, "is more than one number"),
     ({"study.title": (1.0, 2.0)}, "is not a number that this study has")],
)  # fmt: skip
def test_keys_that_cannot_be_free(free, words):
    with pytest.raises(StudyError, match=words):
        free_keys(STUDY, free)


def test_the_command_says_what_is_missing(capsys):
    assert main(["suggest", "gasket_punch", "--free", "lever.length_mm"]) == 2
    assert "--free: is not KEY=LOW:HIGH" in capsys.readouterr().err
    assert main(["suggest", "pull_twin"]) == 2
    assert "targets.free: names no key that may change" in capsys.readouterr().err
    assert main(["suggest", "fixture_clamp", "--trials", "3"]) == 2
    assert "--trials: is too few to find anything, got 3" in capsys.readouterr().err
