"""The main task in a real browser: open, drag, read, correct, go back."""

import importlib.util
import re
import tomllib
from pathlib import Path

import pytest

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)

pytestmark = pytest.mark.browser


def served(length_mm):
    """The hand-made engine's straight line, worked out here again."""
    return f"{min(100.0, 50.0 + 0.1 * length_mm):.1f}"


def test_open_shows_drawing_chart_and_ratings_without_scrolling(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    for name in ("#bench-picture svg", "#chart-picture svg", "#corner-picture svg"):
        box = page.locator(name).bounding_box()
        assert box["y"] >= 0
        assert box["y"] + box["height"] <= 800
    assert steps.shown(page) == served(320)
    assert page.evaluate("document.documentElement.scrollHeight") <= 800


def test_dragging_the_length_slider_changes_the_served_share(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    thumb = steps.box(page, "lever.length_mm", "slider").locator("[role=slider]")
    at = thumb.bounding_box()
    page.mouse.move(at["x"] + 5, at["y"] + 9)
    page.mouse.down()
    page.mouse.move(at["x"] + 30, at["y"] + 9, steps=8)
    steps.until(page, "/^\\d+ of 1000 operators/.test(pullward.drawn.said)")
    page.mouse.move(at["x"] + 45, at["y"] + 9, steps=4)
    page.mouse.up()
    steps.settled(page)
    length = float(thumb.get_attribute("aria-valuenow"))
    assert length > 330
    assert steps.shown(page) == served(length)
    assert steps.box(page, "lever.length_mm").input_value().startswith(f"{length:g}")
    while_moving = [count for asked, count in board.engine.asked if asked not in (300, 320, length)]
    # While the thumb moves 500 people are judged; where it rests a while, thumb still held, everybody is.
    assert 500 in while_moving
    assert set(while_moving) <= {500, 1000}
    assert board.engine.asked[-1] == (length, 1000)


def test_dragging_a_dimension_line_changes_the_length(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    words = page.locator("g.dimension[data-key='lever.length_mm'] text")
    at = words.bounding_box()
    x, y = at["x"] + at["width"] / 2, at["y"] + at["height"] / 2
    page.mouse.move(x, y)
    page.mouse.down()
    page.mouse.move(x + 8, y - 40, steps=6)
    page.mouse.up()
    steps.settled(page)
    length = float(re.match(r"[\d.]+", steps.box(page, "lever.length_mm").input_value()).group())
    assert length > 340
    assert steps.shown(page) == served(length)
    assert f"length {length:.0f}" in page.locator("g.dimension[data-key='lever.length_mm']").text_content()


def test_an_invalid_value_keeps_the_picture_and_says_the_readers_sentence(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    before = page.locator("#bench-picture").inner_html()
    steps.type_value(page, "lever.length_mm", "9000")
    page.locator("text=is outside its range, got 9000 (allowed: 20 to 2000 mm)").first.wait_for()
    assert steps.box(page, "lever.length_mm").get_attribute("aria-invalid") == "true"
    assert page.locator("#bench-picture").inner_html() == before
    page.locator("#undo").click()
    steps.settled(page)
    assert steps.box(page, "lever.length_mm").input_value().startswith("320")
    assert page.locator("text=is outside its range").count() == 0
    assert steps.shown(page) == served(320)


def test_undo_and_redo_walk_through_every_change(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    for length in (300, 280):
        steps.type_value(page, "lever.length_mm", str(length))
        steps.settled(page)
        steps.type_value(page, "lever.end_deg", str(length // 5))
        steps.settled(page)
    for expected in ("280", "300", "300", "320"):
        page.locator("#undo").click()
        steps.settled(page)
        assert steps.box(page, "lever.length_mm").input_value().startswith(expected)
    page.locator("#redo").click()
    steps.settled(page)
    assert steps.shown(page) == served(300)


def test_another_linkage_asks_for_its_own_values(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    steps.show_section(page, "linkage")
    kind = steps.box(page, "linkage.kind")
    kind.click()
    page.get_by_role("option", name="rack").click()
    page.locator("text=is missing (allowed: 1 to 500 mm)").first.wait_for()
    steps.type_value(page, "linkage.pinion_radius_mm", "25")
    page.locator("#values-problems", has_text="variants[1] 'other_angle'").wait_for()
    steps.show_section(page, "variants")
    page.get_by_role("button", name="Take out other_angle").click()
    steps.until(page, "!document.documentElement.classList.contains('unsound')")
    steps.settled(page)
    assert board.engine.asked[-1][0] == 320
    with page.expect_download() as got:
        page.get_by_role("button", name="Download study").click()
    text = Path(got.value.path()).read_text(encoding="utf-8")
    assert tomllib.loads(text)["linkage"]["pinion_radius_mm"] == 25
    assert "arm_mm" not in text


def test_the_rest_after_200_rapid_changes_is_the_right_picture(board, new_page):
    board.engine.takes_s = 0.02
    page = new_page()
    steps.open_study(page, board.address)
    thumb = steps.box(page, "lever.length_mm", "slider").locator("[role=slider]")
    thumb.focus()
    for _ in range(100):
        page.keyboard.press("ArrowRight")
    for _ in range(90):
        page.keyboard.press("ArrowLeft")
    for _ in range(10):
        page.keyboard.press("ArrowRight")
    steps.settled(page)
    assert thumb.get_attribute("aria-valuenow") == "340"
    steps.settled(page)
    assert steps.shown(page) == served(340)
    assert "length 340" in page.locator("g.dimension[data-key='lever.length_mm']").text_content()
    assert len(board.engine.asked) < 200


def test_stale_numbers_are_greyed_at_once(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    board.engine.takes_s = 1.0
    took = page.evaluate(
        """() => new Promise((done) => {
          const began = performance.now();
          new MutationObserver(() => {
            if (document.documentElement.classList.contains('stale')) done(performance.now() - began);
          }).observe(document.documentElement, {attributes: true});
          pullward.set('lever.length_mm', 333, 'rest');
        })"""
    )
    assert took < 50
    assert float(page.locator("#bench-picture svg").evaluate("e => getComputedStyle(e).opacity")) < 0.6
    steps.settled(page)
    assert steps.shown(page) == served(333)
