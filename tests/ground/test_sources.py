"""The bibliography: every source is used and can be cited, statuses keep their order."""

import re
import tomllib
from pathlib import Path

import pytest

from ergo import sources
from ergo.errors import DataError
from ergo.sources import STATUSES, Source, bibliography, cite, folder, weakest


def test_every_source_is_used():
    # By a row or the head of a table, or, for an equation, by the docstring of the method that has it from there.
    texts = [path.read_text(encoding="utf-8") for path in folder("datasets").glob("*/*") if path.suffix in (".csv", ".toml")]
    texts += [path.read_text(encoding="utf-8") for path in Path(sources.__file__).parent.rglob("*.py")]
    words = set(re.findall(r"[a-z0-9_]+", "\n".join(texts)))
    assert set(bibliography()) - words == set()


def test_every_entry_has_a_title_and_only_known_fields():
    entries = tomllib.loads((folder("datasets") / "sources.toml").read_text(encoding="utf-8"))
    known = {"title", "authors", "year", "publisher", "edition", "doi", "note"}
    for key, entry in entries.items():
        assert entry["title"].strip(), key
        assert set(entry) <= known, key
        assert key == key.lower(), key


def test_a_source_is_cited_with_its_place():
    assert cite("din_33402_2", "table 1") == "din_33402_2, table 1"
    assert cite("din_33402_2") == "din_33402_2"
    with pytest.raises(DataError, match="nobody_1900"):
        cite("nobody_1900")


def test_an_entry_reads_as_one_line():
    source = Source("x_1990", "On levers", authors="Doe J", year="1990", publisher="A press", doi="10.1/2")
    assert source.entry() == "Doe J (1990). On levers. A press. doi:10.1/2"
    assert Source("y", "On handles").entry() == "On handles."


@pytest.mark.parametrize(
    ("statuses", "expected"),
    [
        (["seen", "seen"], "seen"),
        (["computed", "memory", "seen"], "memory"),
        (["derived", "computed"], "derived"),
        ([], "memory"),
    ],
)
def test_the_weakest_status_decides(statuses, expected):
    assert weakest(statuses) == expected


def test_statuses_run_from_the_best_to_the_weakest():
    assert STATUSES == ("seen", "computed", "derived", "memory")
    assert set(sources.STATUS_MEANING) == set(STATUSES)


def test_a_folder_that_did_not_come_along_is_told():
    with pytest.raises(DataError, match="did not come with this installation"):
        folder("nothing_of_the_kind")
