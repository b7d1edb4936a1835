"""The board with the engine itself: the number on the screen is the engine's own; how long it takes to get there."""

import importlib.util
import time
from pathlib import Path

import pytest

from ergo.evaluation.run import evaluate
from ergo.study.reader import read

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)

pytestmark = pytest.mark.browser


@pytest.fixture
def engine():
    return evaluate


@pytest.fixture
def small_study(tmp_path):
    """The gasket punch for few people and positions, so that a test need not wait."""
    source = Path(__file__).parents[2] / "datasets" / "studies" / "gasket_punch.toml"
    text = source.read_text(encoding="utf-8").replace("count = 1000", "count = 120")
    path = tmp_path / "small.toml"
    path.write_text(text.replace('title = "Gasket punch"', 'title = "Gasket punch"\npositions = 11'), encoding="utf-8")
    return path


def open_file(page, address, path):
    page.goto(address)
    page.locator("#upload input[type=file]").set_input_files(path)
    page.locator("#bench-picture svg").wait_for(timeout=90_000)
    steps.until(page, "!document.documentElement.classList.contains('stale') && !pullward.drawn.more", 90)


def test_served_share_on_the_screen_is_the_engines_own(board, new_page, small_study):
    page = new_page()
    open_file(page, board.address, small_study)
    expected = {length: evaluate(read(small_study).with_values({"lever.length_mm": length})).ratings["served"].value
                for length in (320.0, 420.0)}  # fmt: skip
    assert steps.shown(page) == f"{expected[320.0]:.1f}"
    steps.type_value(page, "lever.length_mm", "420")
    steps.until(page, "!document.documentElement.classList.contains('stale') && !pullward.drawn.more", 60)
    assert steps.shown(page) == f"{expected[420.0]:.1f}"


def test_from_release_to_picture_takes_little_more_than_the_engine(board, new_page, small_study):
    page = new_page()
    open_file(page, board.address, small_study)
    ratios = []
    for length in (330.0, 350.0, 370.0):
        began = time.perf_counter()
        evaluate(read(small_study).with_values({"lever.length_mm": length}))
        alone = time.perf_counter() - began
        took = page.evaluate(
            """length => new Promise((done) => {
              const began = performance.now();
              pullward.set('lever.length_mm', length, 'rest');
              const look = () => document.documentElement.classList.contains('stale') || pullward.unheard.length
                ? requestAnimationFrame(look) : done((performance.now() - began) / 1000);
              look();
            })""",
            length,
        )
        ratios.append((took - 0.1) / alone)
    # The aim is 1.5 times the engine's own time plus 100 ms. Two cores are shared with the browser here, whose software
    # drawing takes one of them, so the best of three has to meet the aim.
    assert min(ratios) <= 1.5, ratios
