"""A sweep's exports, read back by programs of others: the same cells as in the SQLite file."""

import math
import sqlite3

import duckdb
import pandas as pd
import pytest

import ergo
from ergo.cli.writing import write_whole
from ergo.explore.axes import placements_of
from ergo.explore.outcome import COLUMNS, refused
from ergo.explore.reading import read_store, table_bytes
from ergo.explore.sweep import sweep
from tests.explore.fast_judge import judge

VARIED = ["lever.length_mm=20:620:7", "linkage.branch=open,crossed", "grip.length_mm=90,120.5"]


def judge_with_gaps(study):
    """As the stand-in, with words that need quoting, a rating that is not covered, and short levers that are refused."""
    if study.lever.length_mm < 60.0:
        return refused('the pin of the "short" crank, at the lever, misses its bar')
    found = judge(study) | {"missed": "served, let-go", "cause": 'reach, the "far" end'}
    return found | {"letting_go": None, "feel_n": None} if study.lever.length_mm > 400.0 else found


@pytest.fixture(scope="module")
def swept(tmp_path_factory):
    """The folder of a sweep's store and both exports, and the cells as SQLite itself gives them."""
    folder = tmp_path_factory.mktemp("exports")
    study = ergo.read_study("gasket_punch")
    sweep(study, placements_of(study, VARIED), folder / "s.db", workers=0, judge=judge_with_gaps)
    frame = read_store(folder / "s.db")[1]
    for kind in ("csv", "parquet"):
        write_whole(str(folder / f"s.{kind}"), table_bytes(frame, kind))
    connection = sqlite3.connect(folder / "s.db")
    names = [c[1] for c in connection.execute("PRAGMA table_info(placements)")][:-1]
    quoted = ", ".join(f'"{name}"' for name in names)
    cells = connection.execute(f"SELECT {quoted} FROM placements ORDER BY placement").fetchall()
    connection.close()
    return folder, names, cells


def plain(cells):
    """Cells with one kind of nothing."""
    return [tuple(None if c is None or c is pd.NA or (isinstance(c, float) and math.isnan(c)) else c for c in row)
            for row in cells]  # fmt: skip


def test_the_sweep_holds_numbers_words_and_gaps(swept):
    _, names, cells = swept
    assert names == ["placement", "lever.length_mm", "linkage.branch", "grip.length_mm", *COLUMNS, "rests_on"]
    assert len(cells) == 86 * 2 * 2
    verdicts = [row[names.index("verdict")] for row in cells]
    assert 0 < verdicts.count("no placement") < len(cells)
    assert any(c is None for row in cells for c in row)


def test_parquet_read_by_pandas(swept):
    folder, names, cells = swept
    frame = pd.read_parquet(folder / "s.parquet")
    assert list(frame.columns) == names
    assert plain(frame.itertuples(index=False, name=None)) == cells


@pytest.mark.parametrize("kind", ["parquet", "csv"])
def test_read_by_duckdb(swept, kind):
    folder, names, cells = swept
    reader = f"read_{kind}('{folder / f's.{kind}'}')"
    with duckdb.connect() as connection:
        found = connection.execute(f"SELECT * FROM {reader} ORDER BY placement")
        assert [column[0] for column in found.description] == names
        assert plain(found.fetchall()) == emptied(cells, kind)
        count = connection.execute(f"SELECT count(*) FROM {reader} WHERE verdict = 'meets'").fetchone()
    assert count == (sum(row[names.index("verdict")] == "meets" for row in cells),)


def test_csv_read_by_pandas(swept):
    folder, names, cells = swept
    # This engine reads every digit in all versions of pandas.
    frame = pd.read_csv(folder / "s.csv", engine="python")
    assert list(frame.columns) == names
    assert plain(frame.itertuples(index=False, name=None)) == emptied(cells, "csv")


def emptied(cells, kind):
    """The cells as a CSV can hold them: empty words are nothing there."""
    return [tuple(None if c == "" and kind == "csv" else c for c in row) for row in cells]
