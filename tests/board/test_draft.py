"""Fields and drafts without a browser: the reader decides, every key has a control, nothing is made up."""

import tomllib
from pathlib import Path

import pytest

from ergo.board.controls import control_paths, field_values, inner_paths, read_value, window
from ergo.board.draft import draft_of, problems_by_field, set_at, steps, value_at
from ergo.board.layouts.values import drawer
from ergo.study.model import schema
from ergo.study.reader import build
from ergo.study.template import template

STUDIES = sorted((Path(__file__).parents[2] / "datasets" / "studies").glob("*.toml"))


@pytest.fixture
def data():
    return tomllib.loads(template())


@pytest.fixture
def draft(data, tmp_path):
    return draft_of(data, tmp_path, "study.toml")


def test_a_new_study_is_sound(draft):
    assert draft.sound
    assert draft.good is not None


def test_paths_reach_into_lists_and_points(draft):
    made = set_at(draft.data, "lever.pivot_mm[1]", 222.0)
    assert made["lever"]["pivot_mm"][1] == 222.0
    assert draft.data["lever"]["pivot_mm"][1] != 222.0
    assert steps("zones[1].centre_mm[2]") == ["zones", 1, "centre_mm", 2]
    assert value_at({"zones": [{"name": "a"}]}, "zones[0].name") == "a"
    assert value_at({"zones": []}, "zones[0].name") is None


@pytest.mark.parametrize("path", ["lever.pivot_mm[9]", "study.title.x", "zones[4].name"])
def test_a_path_that_leads_nowhere_is_refused(draft, path):
    with pytest.raises(KeyError):
        set_at(draft.data, path, 1.0)


def test_an_unsound_draft_keeps_the_last_sound_study(draft, tmp_path):
    bad = draft_of(set_at(draft.data, "lever.length_mm", -5), tmp_path, "study.toml", draft.good)
    assert not bad.sound
    assert bad.good is draft.good
    assert problems_by_field(bad.problems) == {"lever.length_mm": "is outside its range, got -5 (allowed: 20 to 2000 mm)"}


def test_problems_of_a_points_numbers_stand_at_the_point(draft, tmp_path):
    bad = draft_of(set_at(draft.data, "lever.pivot_mm[0]", 90_000), tmp_path, "study.toml", draft.good)
    assert list(problems_by_field(bad.problems)) == ["lever.pivot_mm"]


def test_another_kind_keeps_what_both_kinds_know_and_invents_nothing(draft, tmp_path):
    data = set_at(set_at(draft.data, "linkage.kind", "rack"), "linkage.pinion_radius_mm", 30.0)
    data = set_at(data, "linkage.pin_friction", 0.2)
    other = set_at(data, "linkage.kind", "connecting link")
    assert other["linkage"]["pin_friction"] == 0.2
    assert "pinion_radius_mm" not in other["linkage"]
    told = problems_by_field(draft_of(other, tmp_path, "study.toml").problems)
    assert set(told) == {"linkage.arm_mm", "linkage.link_mm"}
    assert all(text.startswith("is missing") for text in told.values())


def test_every_key_of_the_study_file_has_a_control():
    asked = {(r["section"], r["of_kind"], r["name"]) for r in schema() if r["path"] != "variants.set"}
    found = set()
    kinds = {"linkage": "kind", "load": "kind", "zones": "shape"}
    for section, of_kind, _ in asked:
        part = {kinds[section]: of_kind} if section in kinds else {}
        data = {section: [part] if section in ("zones", "touch_points", "variants") else part}
        found |= {(row["section"], row["of_kind"], row["name"]) for row in control_paths(data).values()}
    assert found == asked


@pytest.mark.parametrize("path", STUDIES, ids=lambda p: p.stem)
def test_what_the_fields_show_reads_back_as_the_same_study(path):
    study = build(tomllib.loads(path.read_text(encoding="utf-8")), path.parent, path.name)
    data = study.content()
    rows = control_paths(data)
    for name, row in rows.items():
        for inner in inner_paths(name, row, data):
            sent = read_value(field_values(data)[inner], row)
            if sent is not None and value_at(data, inner) is not None:
                data = set_at(data, inner, sent)
    assert build(data, path.parent, path.name).content() == study.content()


@pytest.mark.parametrize("path", STUDIES, ids=lambda p: p.stem)
def test_every_shipped_study_opens_in_the_drawer(path):
    draft = draft_of(tomllib.loads(path.read_text(encoding="utf-8")), path.parent, path.name)
    assert draft.problems == ()
    assert len(drawer(draft)) >= 10


def test_a_sliders_window_holds_the_value_and_stays_in_range():
    for row in schema():
        if row["kind"] not in ("number", "whole") or row["low"] is None:
            continue
        for share in (0.0, 0.01, 0.3, 1.0):
            value = row["low"] + share * (row["high"] - row["low"])
            low, high, step = window(row, value)
            assert row["low"] <= low <= value <= high <= row["high"], row["path"]
            assert 0 < step <= high - low, row["path"]


def test_numbers_as_text_and_nonsense_go_to_the_reader_as_they_are(data):
    rows = control_paths(data)
    length, count = rows["lever.length_mm"], rows["operators.count"]
    assert read_value("12.5", length) == 12.5
    assert read_value("abc", length) == "abc"
    assert read_value("", length) is None
    assert read_value(400.0, count) == 400
    assert isinstance(read_value(400.0, count), int)
    assert read_value("0.2, 0.4", rows["grip.twist_at"]) == [0.2, 0.4]
    assert read_value("lever.length_mm 120 to 300; lever.end_deg 10 to 40", rows["targets.free"]) == {
        "lever.length_mm": [120.0, 300.0], "lever.end_deg": [10.0, 40.0]}  # fmt: skip
