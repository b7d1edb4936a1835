"""Results as tables for a spreadsheet: CSV and XLSX, the same bytes for the same results."""

import csv
import io
import zipfile
from typing import TYPE_CHECKING

from ergo.evaluation.results import Results

if TYPE_CHECKING:
    import pandas as pd

# The oldest date a zip file can hold: the clock has no place in a file that must come out the same.
STILL = (1980, 1, 1, 0, 0, 0)
FORMULA = ("=", "+", "-", "@", "\t", "\r")


def frames(results: Results) -> "dict[str, pd.DataFrame]":
    """Return every table of the results by name, units in the column names."""
    import pandas as pd

    return {
        "ratings": results.ratings_frame(),
        "stroke": results.stroke_frame(),
        "people": results.people_frame(),
        "numbers": pd.DataFrame([dict(row) for row in results.sources]),
    }


def csv_files(results: Results) -> dict[str, bytes]:
    """Return the tables as CSV files by name."""
    found = {}
    for name, frame in frames(results).items():
        out = io.StringIO()
        writer = csv.writer(out, lineterminator="\n")
        writer.writerow(frame.columns)
        for row in frame.itertuples(index=False):
            writer.writerow([_cell(v) for v in row])
        found[f"{name}.csv"] = out.getvalue().encode()
    return found


def _cell(value: object) -> object:
    """Return a cell: empty where there is no number, ten digits, and no text that a spreadsheet would run."""
    if value is None or (isinstance(value, float) and value != value):
        return ""
    if isinstance(value, str):
        return f"'{value}" if value.startswith(FORMULA) and not _number(value) else value
    return f"{value:.10g}" if isinstance(value, float) else value


def _number(text: str) -> bool:
    try:
        float(text)
    except ValueError:
        return False
    return True


def xlsx_file(results: Results) -> bytes:
    """Return the tables as one workbook, a sheet each."""
    from openpyxl import Workbook

    book = Workbook()
    book.remove(book.active)  # type: ignore[arg-type]
    for name, frame in frames(results).items():
        sheet = book.create_sheet(name)
        sheet.append(list(frame.columns))
        for row in frame.itertuples(index=False):
            sheet.append([_sheet_cell(v) for v in row])
        sheet.freeze_panes = "B2"
    out = io.BytesIO()
    book.save(out)
    return _stilled(out.getvalue())


def _sheet_cell(value: object) -> object:
    cell = _cell(value)
    if isinstance(value, float) and cell != "":
        return float(cell)  # type: ignore[arg-type]
    if isinstance(value, str) and isinstance(cell, str):
        return "".join(c for c in cell if c >= " ")
    return value.item() if hasattr(value, "item") else (None if cell == "" else cell)  # type: ignore[union-attr]


def _stilled(book: bytes) -> bytes:
    """Return a workbook without the time of its making."""
    import re

    out = io.BytesIO()
    with zipfile.ZipFile(io.BytesIO(book)) as old, zipfile.ZipFile(out, "w", zipfile.ZIP_DEFLATED) as new:
        for name in sorted(old.namelist()):
            content = old.read(name)
            if name == "docProps/core.xml":
                content = re.sub(rb"\d{4}-\d\d-\d\dT\d\d:\d\d:\d\dZ", b"1980-01-01T00:00:00Z", content)
            new.writestr(zipfile.ZipInfo(name, STILL), content, zipfile.ZIP_DEFLATED)
    return out.getvalue()
