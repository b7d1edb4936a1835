"""What is taken away: drawings, tables, the report; read back by something else than the board."""

import csv
import importlib.util
import io
import json
import struct
import xml.etree.ElementTree as ElementTree
from pathlib import Path

import pandas as pd
import pytest

from ergo.board.callbacks.take_away import workbook
from ergo.board.layouts.take_away import DRAWINGS

spec = importlib.util.spec_from_file_location("steps", Path(__file__).with_name("steps.py"))
steps = importlib.util.module_from_spec(spec)
spec.loader.exec_module(steps)


def test_the_workbook_holds_every_table(engine):
    results = engine.made.made()
    sheets = pd.read_excel(io.BytesIO(workbook(results)), sheet_name=None)
    assert set(sheets) == {"stroke", "ratings", "people", "sources", "cautions"}
    assert sheets["stroke"]["demand_n"].tolist() == pytest.approx(results.stroke.demand_n.tolist())
    assert sheets["people"]["stature_mm"].tolist() == results.crowd.stature_mm.tolist()


def taken(page, click):
    with page.expect_download() as got:
        click()
    return got.value.suggested_filename, Path(got.value.path()).read_bytes()


@pytest.mark.browser
def test_every_drawing_and_table_is_taken_away(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Take away").click()
    page.locator("#export-says").wait_for(state="attached")
    for name, words in DRAWINGS.items():
        file, content = taken(page, lambda w=words: page.get_by_role("button", name=f"SVG, {w}").click())
        assert file == f"gasket_punch_{name}.svg"
        assert ElementTree.fromstring(content).tag.endswith("svg")
        assert b"var(--" not in content
    file, content = taken(page, lambda: page.get_by_role("button", name="PNG, Stroke chart").click())
    assert content[:8] == b"\x89PNG\r\n\x1a\n"
    assert struct.unpack(">II", content[16:24]) == (3 * 680, 3 * 330)
    file, content = taken(page, lambda: page.get_by_role("button", name="CSV, One row an operator").click())
    assert len(list(csv.DictReader(io.StringIO(content.decode())))) == 8
    file, content = taken(page, lambda: page.get_by_role("button", name="Results as JSON").click())
    assert json.loads(content)["ratings"]["served"]["value"] == 82.0


@pytest.mark.browser
def test_the_report_is_made_in_the_background(board, new_page):
    page = new_page()
    steps.open_study(page, board.address)
    page.get_by_role("link", name="Take away").click()
    file, content = taken(page, lambda: page.get_by_role("button", name="Make the report").click())
    assert file == "gasket_punch_report.pdf"
    assert content.startswith(b"%PDF")
    page.locator("#report-says", has_text="in your downloads").wait_for()
