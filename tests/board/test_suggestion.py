"""Suggestions from the board: proposals as they are confirmed, stopping, an honest no, and putting one into the fields."""

import dataclasses
import time

import numpy as np
import pytest

from ergo.board.searching import free_bounds, free_of
from ergo.sources import folder
from ergo.study.reader import read
from tests.board import conftest as made
from tests.board import steps

STUDIES = folder("datasets") / "studies"


class PeopleEngine(made.MadeEngine):
    """Margins grow with the lever's length: person n has (0.8 + 0.01 n) length / `easy_mm`."""

    easy_mm = 320.0

    def __call__(self, study, *, library=None, tell=lambda share, what: None):
        results = super().__call__(study, library=library, tell=tell)
        margin = (0.8 + 0.01 * np.arange(results.crowd.served.size)) * study.lever.length_mm / self.easy_mm
        served = margin >= study.targets.margin_min
        ratings = {}
        for rating, found in results.ratings.items():
            value = 100.0 * served.mean() if rating in ("force", "served") else 100.0
            ratings[rating] = dataclasses.replace(found, value=value, met=not value < found.target)
        verdict = "meets" if all(r.met for r in ratings.values()) else "falls short"
        return dataclasses.replace(results, ratings=ratings, verdict=verdict,
                                   crowd=dataclasses.replace(results.crowd, margin=margin, served=served))  # fmt: skip


@pytest.fixture
def engine():
    return PeopleEngine()


def at_search(page, board):
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Search").click()
    page.locator("#suggest").wait_for()


def test_the_study_says_what_is_free():
    clamp = read(STUDIES / "fixture_clamp.toml")
    assert set(free_of(clamp.content())) <= set(clamp.targets.free)
    assert free_of(read(STUDIES / "gasket_punch.toml").content()) == ["lever.length_mm"]


def test_bounds_are_the_studys_or_the_sliders():
    clamp = read(STUDIES / "fixture_clamp.toml")
    path, bounds = next(iter(clamp.targets.free.items()))
    found = free_bounds(clamp, [path, "lever.mass_kg"])
    assert found[path] == bounds
    low, high = found["lever.mass_kg"]
    assert low <= clamp.lever.mass_kg < high


@pytest.mark.browser
def test_a_proposal_comes_and_is_put_into_the_fields(board, new_page):
    page = new_page()
    at_search(page, board)
    page.locator("#suggest").click()
    page.locator("#suggest-says", has_text="to meet every target").wait_for(timeout=60_000)
    row = page.locator("#suggest-table tbody tr").nth(1)
    assert "as it stands" in page.locator("#suggest-table tbody tr").first.inner_text()
    assert "320 to" in row.inner_text()
    wanted = float(row.locator(".what").first.inner_text().split(" to ")[1].split()[0])
    assert wanted > 320.0
    page.get_by_role("button", name="Put in Proposal 1").click()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    assert float(steps.box(page, "lever.length_mm").input_value().split()[0]) == wanted


@pytest.mark.browser
def test_no_change_is_enough_and_the_block_is_named(board, new_page):
    board.engine.easy_mm = 3200.0
    page = new_page()
    at_search(page, board)
    page.locator("#suggest").click()
    says = page.locator("#suggest-says", has_text="No change of these values")
    says.wait_for(timeout=60_000)
    assert "Missed by every placement tried" in says.inner_text()
    assert page.locator("#suggest-table th", has_text="Nearest miss").count() == 1


@pytest.mark.browser
def test_a_suggestion_is_stopped(board, new_page):
    page = new_page()
    at_search(page, board)
    board.engine.takes_s = 0.2
    page.locator("#suggest").click()
    steps.until(page, "!document.getElementById('suggest-stop').disabled")
    page.locator("#suggest-stop").click()
    page.locator("#suggest-says", has_text="Stopped.").wait_for()
    asked = len(board.engine.asked)
    time.sleep(0.8)
    assert len(board.engine.asked) <= asked + 1


@pytest.mark.browser
def test_nothing_chosen_is_said(board, new_page):
    page = new_page()
    at_search(page, board)
    page.evaluate("window.dash_clientside.set_props('suggest-keys', {value: []})")
    page.locator("#suggest").click()
    page.locator("#suggest-says", has_text="Nothing was tried").wait_for()
    assert "choose at least one value that may change" in page.locator("#suggest-says").inner_text()
    assert page.locator("#suggest-table").inner_text() == ""
