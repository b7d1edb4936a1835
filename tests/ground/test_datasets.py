"""Shipped tables: provenance of every one, and reading, filtering, what-ifs and refusals."""

import math

import numpy as np
import pytest

from ergo import datasets
from ergo.datasets import checksum, faults, library, number, own_rows, table_keys
from ergo.errors import DataError, StudyError
from ergo.sources import STATUSES, bibliography, folder

LIBRARY = library()
PARAMETER_COLUMNS = ("name", "value", "low", "high", "unit", "source", "locator", "status", "note")


@pytest.mark.parametrize("key", table_keys())
def test_provenance_of_every_table(key):
    assert faults(key) == []


@pytest.mark.parametrize("key", table_keys())
def test_every_file_of_a_table_has_a_checksum(key):
    place = folder("datasets") / key
    files = {path.name for path in place.iterdir()} - {"meta.toml"}
    assert set(LIBRARY.table(key).meta["checksums"]) == files


@pytest.mark.parametrize("key", table_keys())
def test_every_source_of_a_table_is_in_the_bibliography(key):
    table = LIBRARY.table(key)
    named = {str(table.meta["source"]), *(table.source_of(row) for row in table.rows)}
    assert named <= set(bibliography())


@pytest.mark.parametrize("key", table_keys())
def test_a_number_read_in_no_named_source_is_not_called_seen(key):
    table = LIBRARY.table(key)
    for row in table.rows:
        if table.source_of(row) == "common_practice":
            assert table.status_of(row) == "memory", dict(row)


@pytest.mark.parametrize("key", [k for k in table_keys() if {"name", "value", "low", "high"} <= set(LIBRARY.table(k).rows[0])])
def test_parameters_lie_in_their_own_range_and_are_named_once(key):
    rows = LIBRARY.table(key).rows
    assert tuple(rows[0]) == PARAMETER_COLUMNS
    assert len({row["name"] for row in rows}) == len(rows)
    for row in LIBRARY.parameters(key).values():
        assert row.low <= row.value <= row.high, row.name
        assert row.status in STATUSES


def test_tables_have_rows_a_title_and_their_caveats():
    for key in table_keys():
        table = LIBRARY.table(key)
        assert table.rows, key
        assert table.title.strip(), key
        assert all(caveat.strip() for caveat in table.caveats), key


def test_rows_are_found_by_their_cells():
    table = LIBRARY.table("germany_2005")
    assert number(table.row(sex="male", dimension="stature")["p50"]) == 1750
    assert set(table.where(sex="female").texts("sex")) == {"female"}
    assert np.array_equal(table.where(dimension="stature").numbers("p50"), [1625.0, 1750.0])
    with pytest.raises(DataError, match="2 rows"):
        table.row(dimension="stature")


def test_an_empty_cell_is_no_number():
    assert math.isnan(number(" "))
    assert number("2.5") == 2.5


def test_an_unknown_table_is_refused_with_the_list():
    with pytest.raises(DataError, match=r"there is no shipped table named nowhere.*germany_2005") as caught:
        LIBRARY.table("nowhere")
    assert caught.value.exit_code == 3


def test_a_what_if_leaves_the_shipped_value_alone():
    changed = LIBRARY.with_value("age_strength", "men_share_at_75", 0.6)
    assert changed.values("age_strength")["men_share_at_75"] == 0.6
    assert LIBRARY.values("age_strength")["men_share_at_75"] == 0.715
    with pytest.raises(DataError, match="no parameter nobody"):
        LIBRARY.with_value("age_strength", "nobody", 1.0)


def test_a_scaled_row_is_one_until_it_is_scaled():
    assert LIBRARY.factor("germany_2005", "stature") == 1.0
    assert LIBRARY.with_factor("germany_2005", "stature", 1.1).factor("germany_2005", "stature") == 1.1


def test_a_changed_byte_is_a_fault(tmp_path, monkeypatch):
    place = tmp_path / "broken"
    place.mkdir()
    (place / "table.csv").write_text("name,value,status,source\na,1,guessed,\n")
    (place / "meta.toml").write_text('title = "Broken"\n[checksums]\n"table.csv" = "0"\n')
    monkeypatch.setattr(datasets, "folder", lambda name: tmp_path)
    table_keys.cache_clear()
    datasets._read_table.cache_clear()
    try:
        found = faults("broken")
    finally:
        monkeypatch.undo()
        table_keys.cache_clear()
        datasets._read_table.cache_clear()
    assert any("no source" in fault for fault in found)
    assert any("'guessed'" in fault for fault in found)
    assert any("checksum" in fault for fault in found)
    # SHA-256 of the bytes "abc", FIPS 180-2 appendix B.1.
    (place / "abc").write_bytes(b"abc")
    assert checksum(place / "abc") == "ba7816bf8f01cfea414140de5dae2223b00361a396177a9cb410ff61f20015ad"


def test_damaged_meta_is_told_as_missing_data(tmp_path, monkeypatch):
    place = tmp_path / "broken"
    place.mkdir()
    (place / "table.csv").write_text("name\na\n")
    (place / "meta.toml").write_text("title = \n")
    monkeypatch.setattr(datasets, "folder", lambda name: tmp_path)
    table_keys.cache_clear()
    try:
        with pytest.raises(DataError, match="table broken cannot be read"):
            LIBRARY.table("broken")
    finally:
        monkeypatch.undo()
        table_keys.cache_clear()


def test_rows_of_a_users_file_carry_their_line(tmp_path):
    own = tmp_path / "own.csv"
    own.write_text("a, b\n1 ,2\n\n3,4,5\n")
    rows = own_rows(own, ("a", "b"))
    assert [(where, dict(row)) for where, row in rows] == [
        ("own.csv:2", {"a": "1", "b": "2"}),
        ("own.csv:4", {"a": "3", "b": "4", "beyond": "5"}),
    ]
    with pytest.raises(StudyError, match=r"own.csv:1: lacks the columns c"):
        own_rows(own, ("a", "b", "c"))
