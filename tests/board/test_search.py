"""Sweeps from the board: rows as they come, stopping, and putting a placement into the fields."""

import importlib.util
import threading
import time
from pathlib import Path

import pytest

from ergo.board.jobs import Jobs
from ergo.board.searching import best, values_between

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)


def test_values_between_two_ends_are_even():
    assert values_between(120.0, 300.0, 4) == [120.0, 180.0, 240.0, 300.0]
    assert len(values_between(0.0, 1.0, 10_000)) == 60
    assert values_between(5.0, 7.0, 0) == [5.0, 7.0]


def test_best_rows_are_those_that_meet_else_those_that_serve_most():
    rows = [{"value": 1, "problem": "no"}] + [
        {"verdict": v, "ratings": {"served": {"value": s}}} for v, s in (("falls short", 70.0), ("falls short", 91.0))
    ]
    assert list(best(rows)) == [2]
    assert list(best([*rows, {"verdict": "meets", "ratings": {"served": {"value": 96.0}}}])) == [3]


def test_a_job_is_seen_and_stopped_by_its_owner_only():
    jobs, going = Jobs(), threading.Event()

    def work(job):
        going.set()
        while True:
            job.tell(0.5, "half way")
            time.sleep(0.005)

    job = jobs.start("anna", "sweep", work)
    assert going.wait(5)
    assert jobs.of("bert", job.key) is None
    jobs.of("anna", job.key).stop()
    assert job.done.wait(5)
    assert job.trouble == "Stopped."


def test_a_new_job_of_the_same_kind_stops_the_old_one():
    jobs = Jobs()

    def work(job):
        while True:
            job.tell(0.0, "at it")
            time.sleep(0.005)

    first = jobs.start("anna", "sweep", work)
    second = jobs.start("anna", "sweep", work)
    assert first.done.wait(5)
    assert not second.done.is_set()
    second.stop()
    assert second.done.wait(5)


def test_a_job_that_fails_says_why():
    job = Jobs().start("anna", "sweep", lambda j: 1 / 0)
    assert job.done.wait(5)
    assert "division by zero" in job.trouble


@pytest.mark.browser
def test_a_sweep_runs_and_a_placement_is_put_into_the_fields(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Search").click()
    steps.until(page, "document.getElementById('sweep-low') && document.getElementById('sweep-low').value === '120'")
    page.locator("#sweep").click()
    page.locator("#sweep-says", has_text="Done: 9 placements").wait_for()
    rows = page.locator("#sweep-table tbody tr")
    assert rows.count() == 9
    # 120 to 520 in eight steps of 50; the made engine serves 50 + length / 10, so the longest serves most.
    assert [rows.nth(n).locator("td").first.inner_text() for n in (0, 1, 8)] == ["120", "170", "520"]
    assert page.locator("#sweep-table tr.reference td").first.inner_text() == "520"
    page.get_by_role("button", name="Put in 470").click()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    assert steps.box(page, "lever.length_mm").input_value().startswith("470")
    assert steps.shown(page) == "97.0"


@pytest.mark.browser
def test_a_sweep_is_stopped_and_what_was_judged_stays(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Search").click()
    steps.until(page, "document.getElementById('sweep-low') && document.getElementById('sweep-low').value === '120'")
    board.engine.takes_s = 0.3
    page.locator("#sweep-steps").fill("40")
    page.locator("#sweep").click()
    steps.until(page, "document.querySelectorAll('#sweep-table tbody tr').length >= 2")
    page.locator("#sweep-stop").click()
    page.locator("#sweep-says", has_text="Stopped.").wait_for()
    count = page.locator("#sweep-table tbody tr").count()
    assert 2 <= count < 40
    asked = len(board.engine.asked)
    time.sleep(0.8)
    assert len(board.engine.asked) == asked


@pytest.mark.browser
def test_a_placement_that_is_no_study_says_so_in_its_row(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Search").click()
    steps.until(page, "document.getElementById('sweep-low') && document.getElementById('sweep-low').value === '120'")
    page.locator("#sweep-low").fill("0")
    page.locator("#sweep-steps").fill("3")
    page.locator("#sweep-steps").press("Tab")
    page.locator("#sweep").click()
    page.locator("#sweep-says", has_text="Done: 3 placements").wait_for()
    assert "is outside its range, got 0" in page.locator("#sweep-table tbody tr").first.inner_text()


@pytest.mark.browser
def test_what_would_flip_the_verdict_is_looked_for_and_told(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("navigation").get_by_role("link", name="Sources").click()
    page.locator("#flips").click()
    told = page.locator("#flips-says li")
    told.first.wait_for(timeout=60_000)
    # The made engine serves everybody at one end of one recalled row, and answers alike for all others.
    assert told.all_inner_texts() == ["breakaway_ball_share (grip_on_handle, memory) at 0.7 would change: served met."]
