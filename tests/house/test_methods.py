"""Every method of the physics rooms stands in the list of methods, with a source, a range and a check that exists."""

import ast
from pathlib import Path

import pytest

from ergo.datasets import library
from ergo.sources import STATUSES, bibliography

CHECKOUT = Path(__file__).resolve().parents[2]
ROOMS = ("people", "arm", "strength", "mechanism", "load", "letgo", "rating")
ROWS = library().table("methods").rows
LISTED = {(row["room"], row["file"]) for row in ROWS}
# Files that pack, read, report or compile what the methods use, and hold no method of their own.
NO_METHOD = {
    ("arm", "compiled.py"): "where compiled kernels are kept",
    ("arm", "crowd_search.py"): "the kernel of scouts.py",
    ("arm", "outlines.py"): "the kernel of posture.py",
    ("letgo", "parameters.py"): "reads rows",
    ("mechanism", "linkage.py"): "the face of the linkages",
    ("people", "own_table.py"): "reads a user's table",
    ("people", "percentiles.py"): "reports what the populations hold",
    ("rating", "reasons.py"): "sentences",
}
UNCHECKED = "none"


def public(path):
    tree = ast.parse(path.read_text(encoding="utf-8"))
    kinds = (ast.FunctionDef, ast.ClassDef)
    return [node for node in tree.body if isinstance(node, kinds) and not node.name.startswith("_")]


PHYSICS = [(room, path.name) for room in ROOMS for path in sorted((CHECKOUT / "ergo" / room).glob("*.py")) if public(path)]


@pytest.mark.parametrize(("room", "file"), PHYSICS)
def test_every_physics_file_is_listed(room, file):
    assert ((room, file) in LISTED) != ((room, file) in NO_METHOD)


@pytest.mark.parametrize("row", ROWS, ids=lambda row: row["method"])
def test_a_row_is_whole(row):
    assert (row["room"], row["file"]) in PHYSICS
    assert row["source"] in bibliography()
    assert row["status"] in STATUSES
    assert row["range"].strip()
    assert row["locator"].strip()
    if row["published_check"] != UNCHECKED:
        assert row["published_check"].startswith("tests/")
        text = (CHECKOUT / row["published_check"]).read_text(encoding="utf-8")
        assert "def test_" in text


def test_a_method_stands_once():
    names = [row["method"] for row in ROWS]
    assert len(set(names)) == len(names)


def test_the_unchecked_are_known():
    unchecked = {row["file"] for row in ROWS if row["published_check"] == UNCHECKED}
    assert unchecked <= {"joints.py", "posture.py", "reach.py"}
