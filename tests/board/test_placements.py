"""Placements: kept with notes, compared on the same people, put back; in the browser and without one."""

import importlib.util
from pathlib import Path

import numpy as np
import pytest

from ergo.board.kept import changes, difference_of, served_of
from tests.rating.paired_score import Z, score_interval

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)


def summary(served, people="a"):
    flags = np.array(served, dtype=bool)
    return {"people": people, "count": flags.size, "served": np.packbits(flags).tobytes().hex()}


def test_served_flags_come_back_as_they_went():
    flags = np.random.default_rng(3).random(77) < 0.4
    assert np.array_equal(served_of(summary(flags)), flags)


def test_paired_difference_is_that_of_compare():
    # Of ten people two are won and one is lost.
    first = summary([1, 1, 1, 1, 0, 0, 0, 1, 1, 1])
    second = summary([1, 1, 1, 0, 1, 1, 0, 1, 1, 1])
    found, span = difference_of(first, second), score_interval(2, 1, 10)
    assert (found.points, found.low, found.high) == pytest.approx((10.0, 100 * span[0], 100 * span[1]), abs=1e-6)
    assert not found.clear


def test_where_nobody_differs_a_difference_is_still_possible():
    same = summary([1] * 100)
    found = difference_of(same, same)
    assert found.points == 0.0
    assert found.low == pytest.approx(-100 * Z**2 / (100 + Z**2), abs=1e-6)


def test_no_paired_difference_between_other_people():
    assert difference_of(summary([1, 0]), summary([1, 0], people="b")) is None


def test_changes_name_the_keys_that_differ():
    first = {"lever": {"length_mm": 300.0, "axis": "sideways"}, "study": {"title": "A"}}
    second = {"lever": {"length_mm": 260.0, "axis": "sideways"}, "study": {"title": "B"}, "screw": {"lead_mm": 2.0}}
    assert changes(first, second) == {"lever.length_mm": 260.0, "screw.lead_mm": 2.0}


@pytest.mark.browser
def test_keep_compare_and_put_back(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.locator("#keep-now").click()
    page.locator("#state-line", has_text="kept as placement 1").wait_for()
    steps.type_value(page, "lever.length_mm", "400")
    steps.settled(page)
    page.get_by_role("link", name="Placements tried").click()
    page.locator("#keep-note").fill("longer lever")
    page.locator("#keep").click()
    row = page.locator("table.kept tbody tr", has_text="longer lever")
    row.wait_for()
    assert "lever.length_mm 400" in row.inner_text()
    assert "90.0" in row.inner_text()
    assert "+0.0 points" in row.inner_text()
    page.locator("#trade .main-svg").first.wait_for()
    page.get_by_role("button", name="Put back: placement 1").click()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    assert steps.box(page, "lever.length_mm").input_value().startswith("320")
    assert steps.shown(page) == "82.0"
    page.locator("#undo").click()
    steps.settled(page)
    assert steps.shown(page) == "90.0"


@pytest.mark.browser
def test_a_kept_placement_becomes_a_variant_of_the_study(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    steps.type_value(page, "lever.length_mm", "400")
    steps.settled(page)
    page.get_by_role("link", name="Placements tried").click()
    page.locator("#keep-note").fill("long")
    page.locator("#keep").click()
    page.locator("table.kept tbody tr", has_text="long").wait_for()
    page.get_by_role("link", name="Bench", exact=True).click()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    page.locator("#undo").click()
    steps.settled(page)
    page.get_by_role("link", name="Placements tried").click()
    page.get_by_role("button", name="Write as variant: long").click()
    page.locator("#keep-says", has_text="variant long").wait_for()
    page.get_by_role("link", name="Bench", exact=True).click()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    page.locator("#variant").click()
    page.get_by_role("option", name="long", exact=True).click()
    steps.until(page, "document.querySelector('[data-rating=served] .number').innerText === '90.0'")
    assert steps.box(page, "lever.length_mm").input_value().startswith("320")
