"""The store: every step kept, read back whole, tabs and users kept apart; without and with a browser."""

import importlib.util
import json
import tomllib
from pathlib import Path

import pytest

from ergo.board.opening import open_shipped
from ergo.board.store import OtherTabError, Store, new_key

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)


@pytest.fixture
def work(tmp_path):
    made = Store(tmp_path).work(new_key())
    open_shipped(made, "gasket_punch", "tab")
    return made


def length(work):
    return work.draft.data["lever"]["length_mm"]


def test_a_work_is_read_back_as_it_was_left(tmp_path, work):
    work.apply("lever.length_mm", 410.0, tab="tab", seen=work.change)
    work.apply("lever.length_mm", 99_999.0, tab="tab", seen=work.change)
    again = Store(tmp_path).work(work.key)
    assert length(again) == 99_999.0
    assert not again.draft.sound
    assert again.draft.good.lever.length_mm == 320.0
    assert again.change == work.change
    again.undo(tab="tab", seen=again.change)
    assert again.draft.sound


def test_moving_one_slider_is_one_step_back(work):
    for value in range(330, 400, 5):
        work.apply("lever.length_mm", float(value), tab="tab", seen=work.change)
    assert len(work.steps) == 2
    work.undo(tab="tab", seen=work.change)
    assert length(work) == 320.0


def test_a_change_after_an_undo_forgets_the_steps_ahead(work):
    work.apply("lever.length_mm", 400.0, tab="tab", seen=work.change)
    work.undo(tab="tab", seen=work.change)
    work.apply("lever.end_deg", 60.0, tab="tab", seen=work.change)
    assert not work.can_redo
    assert length(work) == 320.0


def test_a_tab_that_has_not_seen_the_last_change_is_refused(work):
    seen = work.change
    work.apply("lever.length_mm", 400.0, tab="first", seen=seen)
    with pytest.raises(OtherTabError):
        work.apply("lever.end_deg", 40.0, tab="second", seen=seen)
    assert work.draft.data["lever"]["end_deg"] == 55
    work.apply("lever.end_deg", 40.0, tab="second", seen=seen, keep_mine=True)
    assert (length(work), work.draft.data["lever"]["end_deg"]) == (320.0, 40.0)
    work.undo(tab="second", seen=work.change)
    assert length(work) == 400.0


def test_a_damaged_file_is_an_empty_work_not_a_crash(tmp_path, work):
    (work.place / "work.json").write_text('{"steps": [')
    assert Store(tmp_path).work(work.key).empty


def test_a_key_that_is_no_key_reaches_no_folder(tmp_path):
    store = Store(tmp_path / "store")
    for key in ("../../etc", "", "A" * 32, "0" * 31, "0" * 31 + "/"):
        with pytest.raises(ValueError, match="no key"):
            store.work(key)


def test_nothing_but_the_owner_may_read_the_files(work):
    assert oct(work.place.stat().st_mode)[-3:] == "700"


def test_the_file_is_plain_json_that_can_be_looked_at(work):
    content = json.loads((work.place / "work.json").read_text())
    assert content["steps"][0]["data"]["study"]["title"] == "Gasket punch"


@pytest.mark.browser
def test_a_reload_finds_the_work_where_it_was(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    steps.type_value(page, "lever.length_mm", "377")
    steps.settled(page)
    page.reload()
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    assert steps.box(page, "lever.length_mm").input_value().startswith("377")
    assert steps.shown(page) == "87.7"
    page.locator("#undo").click()
    steps.settled(page)
    assert steps.box(page, "lever.length_mm").input_value().startswith("320")


@pytest.mark.browser
def test_two_tabs_do_not_overwrite_each_other_silently(board, new_page):
    first = new_page()
    steps.open_study(first, board.address)
    second = new_page(context=first.context)
    second.goto(board.address)
    second.wait_for_selector("#bench-picture svg")
    steps.settled(second)
    steps.type_value(first, "lever.length_mm", "400")
    steps.settled(first)
    steps.type_value(second, "lever.end_deg", "45")
    second.locator("#conflict", has_text="changed in another tab").wait_for()
    second.locator("#conflict-take").click()
    second.locator("#conflict", has_text="another tab").wait_for(state="hidden")
    steps.settled(second)
    assert steps.box(second, "lever.length_mm").input_value().startswith("400")
    assert steps.box(second, "lever.end_deg").input_value().startswith("55")
    steps.type_value(second, "lever.end_deg", "45")
    steps.settled(second)
    assert second.locator("#conflict").inner_text() == ""
    steps.type_value(first, "lever.length_mm", "280")
    first.locator("#conflict-keep").click()
    steps.until(first, "!document.getElementById('conflict').innerText")
    steps.settled(first)
    assert steps.shown(first) == "78.0"
    first.locator("#undo").click()
    steps.settled(first)
    assert steps.box(first, "lever.end_deg").input_value().startswith("45")


@pytest.mark.browser
def test_two_users_do_not_see_each_others_work(board, new_page):
    first, second = new_page(), new_page()
    steps.open_study(first, board.address, "Gasket punch")
    steps.open_study(second, board.address, "Arbor press")
    steps.type_value(first, "lever.length_mm", "333")
    steps.settled(first)
    second.reload()
    second.wait_for_selector("#bench-picture svg")
    steps.settled(second)
    assert second.locator("#study-title").inner_text() == "Arbor press"
    assert steps.box(second, "lever.length_mm").input_value().startswith("420")
    cookies = [page.context.cookies()[0] for page in (first, second)]
    assert cookies[0]["value"] != cookies[1]["value"]
    assert all(c["httpOnly"] and c["sameSite"] == "Strict" for c in cookies)


@pytest.mark.browser
def test_upload_and_download_give_an_equal_study(board, new_page, tmp_path):
    from ergo.study.reader import read

    source = Path(__file__).parents[2] / "datasets" / "studies" / "drill_stand.toml"
    page = new_page()
    page.goto(board.address)
    page.locator("#upload input[type=file]").set_input_files(source)
    page.wait_for_selector("#bench-picture svg")
    steps.settled(page)
    with page.expect_download() as got:
        page.get_by_role("button", name="Download study").click()
    back = tmp_path / "back.toml"
    got.value.save_as(back)
    assert got.value.suggested_filename == "drill_stand.toml"
    assert read(back).content() == read(source).content()


@pytest.mark.browser
def test_saving_writes_the_study_into_the_folder_given(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Take away").click()
    page.locator("#save-name").fill("../outside.toml")
    page.locator("#save").click()
    page.locator("#save-says", has_text="must be a plain file name").wait_for()
    page.locator("#save-name").fill("press one")
    page.locator("#save").click()
    page.locator("#save-says", has_text="Saved as press one.toml").wait_for()
    assert [p.name for p in board.folder.iterdir()] == ["press one.toml"]
    assert not (board.folder.parent / "outside.toml").exists()
    saved = tomllib.loads((board.folder / "press one.toml").read_text(encoding="utf-8"))
    assert saved["study"]["title"] == "Gasket punch"
    page.get_by_role("link", name="Open", exact=True).click()
    page.locator(".studies button", has_text="press one.toml").click()
    page.wait_for_selector("#bench-picture svg")
