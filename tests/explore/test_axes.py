"""Axes: what `--vary` and `--sobol` mean, numbered without being listed, and what they refuse."""

import numpy as np
import pytest

import ergo
from ergo.errors import StudyError
from ergo.explore.axes import placements_of
from ergo.explore.keys import placed, value_at

STUDY = ergo.read_study("gasket_punch")


def test_a_grid_runs_its_last_axis_fastest():
    asked = placements_of(STUDY, ["lever.length_mm=200:300:50", "linkage.branch=open,crossed"])
    assert asked.count == 6
    assert [tuple(asked.values(n).values()) for n in range(6)] == [
        (200.0, "open"), (200.0, "crossed"), (250.0, "open"), (250.0, "crossed"), (300.0, "open"), (300.0, "crossed"),
    ]  # fmt: skip


@pytest.mark.parametrize(("text", "values"), [
    ("lever.length_mm=120:300:60", [120.0, 180.0, 240.0, 300.0]),
    ("lever.length_mm=120:299:60", [120.0, 180.0, 240.0]),
    ("lever.length_mm=300:120:-90", [300.0, 210.0, 120.0]),
    ("linkage.pin_friction=0.1:0.4:0.1", [0.1, 0.2, 0.3, 0.4]),
    ("lever.length_mm=120,150.5", [120.0, 150.5]),
    ("operators.count=100:300:100", [100, 200, 300]),
    ("operators.hand=left,right", ["left", "right"]),
    ("grip.turns=false", [False]),
    ("lever.pivot_mm[2]=1000,1100", [1000.0, 1100.0]),
    ("zones[0].centre_mm[1]=250", [250.0]),
    ("operators.age_years[0]=20,30", [20.0, 30.0]),
])  # fmt: skip
def test_values_are_what_the_key_takes(text, values):
    found = placements_of(STUDY, [text]).axes[0].values
    assert list(found) == values
    assert [type(v) for v in found] == [type(v) for v in values]


def test_a_placement_is_a_checked_study():
    path = "zones[0].centre_mm[1]"
    study = placed(STUDY, {path: 250.0, "lever.length_mm": 300.0, "lever.pivot_mm[0]": 10.0})
    assert study.zones[0].centre_mm == (150.0, 250.0, 960.0)
    assert study.lever.pivot_mm == (10.0, 260.0, 1120.0)
    assert value_at(study.content(), path) == 250.0
    assert value_at(study.content(), "lever.nothing[3]") is None
    with pytest.raises(StudyError, match="allowed: 20 to 2000"):
        placed(STUDY, {"lever.length_mm": 5.0})
    with pytest.raises(StudyError, match="is no key"):
        placed(STUDY, {"zones[4].centre_mm[1]": 5.0})


def test_a_sobol_sample_is_the_same_every_time_and_fills_its_axes():
    texts = ["lever.length_mm=200:400", "linkage.branch=open,crossed", "operators.count=100:200"]
    one, two = placements_of(STUDY, texts, 100), placements_of(STUDY, texts, 100)
    rows = [one.values(n) for n in range(100)]
    assert rows == [two.values(n) for n in range(100)]
    lengths = np.array([r["lever.length_mm"] for r in rows])
    # A scrambled Sobol sample of 64 has one point in each 64th of an axis.
    assert sorted(((lengths[:64] - 200.0) / 200.0 * 64).astype(int)) == list(range(64))
    assert 40 <= sum(r["linkage.branch"] == "open" for r in rows) <= 60
    assert all(isinstance(r["operators.count"], int) for r in rows)


@pytest.mark.parametrize(("texts", "sobol", "said"), [
    (["lever.lenth_mm=1:2:1"], 0, r"lever\.lenth_mm: is no key of this study; did you mean lever\.length_mm\?"),
    (["lever.length_mm"], 0, "is not KEY=VALUES, got lever.length_mm"),
    (["lever.length_mm=1:2:1"], 0, "lies outside its range, got 1 .allowed: 20 to 2000"),
    (["lever.length_mm=100:inf:1"], 0, "is not a finite number"),
    (["lever.length_mm=100:200"], 0, "is no range, got 100:200"),
    (["lever.length_mm=100:200:-5"], 0, "the step does not lead"),
    (["lever.length_mm=200:100"], 8, "the first bound must be below"),
    (["lever.length_mm=long"], 0, "is not a number, got long"),
    (["lever.length_mm=100,100"], 0, "has a value twice"),
    (["lever.pivot_mm=1,2"], 0, r"one number of it: lever\.pivot_mm\[0\]="),
    (["operators.count=100.5"], 0, "takes whole numbers"),
    (["grip.turns=perhaps"], 0, "is yes or no, got perhaps"),
    (["linkage.branch=open,shut"], 0, "is not one of its choices, got shut .allowed: open, crossed"),
    (["lever.length_mm=100,200", "lever.length_mm=300"], 0, "is varied twice"),
    (["linkage.slide_offset_mm=0:1:0.00000001"], 0, "has too many values"),
    (["lever.length_mm=100:300:0.1", "lever.start_deg=-40:0:0.01", "lever.end_deg=10:80:0.01"], 0, "too many placements"),
    ([], 0, "--vary: is missing"),
    (["variants.name=a"], 0, "is no key of this study"),
])  # fmt: skip
def test_what_cannot_be_varied_is_refused_with_what_is_allowed(texts, sobol, said):
    with pytest.raises(StudyError, match=said):
        placements_of(STUDY, texts, sobol)


def test_all_wrong_axes_are_told_at_once():
    with pytest.raises(StudyError) as found:
        placements_of(STUDY, ["lever.lenth_mm=1", "lever.length_mm=long", "load.kg=3"])
    assert len(found.value.problems) == 3
