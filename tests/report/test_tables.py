"""CSV and XLSX, read back by pandas."""

import io
from dataclasses import replace

import numpy as np
import pandas as pd
import pytest

from ergo.report.tables import csv_files, xlsx_file


def test_the_workbook_reads_back_as_the_results(short):
    sheets = pd.read_excel(io.BytesIO(xlsx_file(short)), sheet_name=None)
    assert set(sheets) == {"ratings", "stroke", "people", "numbers"}
    stroke = sheets["stroke"]
    assert stroke["demand_n"].to_numpy() == pytest.approx(short.stroke.demand_n)
    assert stroke[["handle_mm_x", "handle_mm_y", "handle_mm_z"]].to_numpy() == pytest.approx(short.stroke.handle_mm)
    assert np.isnan(stroke["table_n"].to_numpy()[-1])
    assert dict(zip(sheets["ratings"]["rating"], sheets["ratings"]["value"], strict=True))["force"] == 71.3


def test_csv_reads_back_as_the_results(short):
    people = pd.read_csv(io.BytesIO(csv_files(short)["people.csv"]))
    assert people["stature_mm"].to_numpy() == pytest.approx(short.crowd.stature_mm)
    assert list(people["limit"]) == list(short.crowd.limit)


def test_every_number_of_the_stroke_has_its_unit_in_the_column_name(short):
    columns = pd.read_csv(io.BytesIO(csv_files(short)["stroke.csv"])).columns
    assert {"demand_n", "slide_mm", "lever_deg", "capability_n_women_p05", "overrun_mm_p50"} <= set(columns)


def test_no_cell_is_a_formula(short):
    """A zone named like a formula must not run in the reader's spreadsheet."""
    evil = "=HYPERLINK(1)"
    rating = replace(short.ratings["clearance"], cause=evil)
    made = replace(short, ratings={**short.ratings, "clearance": rating})
    assert f"'{evil}" in csv_files(made)["ratings.csv"].decode()
    sheet = pd.read_excel(io.BytesIO(xlsx_file(made)), sheet_name="ratings")
    assert f"'{evil}" in set(sheet["cause"])


def test_the_same_results_give_the_same_workbook(short):
    assert xlsx_file(short) == xlsx_file(short)
