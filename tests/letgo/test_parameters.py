"""The rows behind a let-go: all there, spread evenly, held when changed, and with their provenance."""

import numpy as np
import pytest

from ergo.datasets import faults, library
from ergo.errors import DataError
from ergo.letgo import body, contact, feel, hand, structure, twist
from ergo.letgo.parameters import rows
from ergo.sources import bibliography

LIB = library()
TABLES = (
    hand.TABLE, body.TABLE, contact.TABLE, feel.TABLE, twist.TABLE, structure.TABLE, structure.MATERIALS,
    structure.THREADS, "letgo_bands",
)  # fmt: skip
USED = [
    *hand.parameter_names(), *body.parameter_names(), *feel.parameter_names(), *twist.parameter_names(),
    *contact.parameter_names("face"), *structure.parameter_names("C45+N", "cut thread", "M10"),
]  # fmt: skip


@pytest.mark.parametrize("key", TABLES)
def test_every_row_has_source_status_and_a_range_round_its_value(key):
    assert faults(key) == []
    for row in LIB.parameters(key).values():
        assert row.source in bibliography()
        assert row.low <= row.value <= row.high
        assert row.unit
        if row.source == "common_practice" and not row.locator:
            assert row.status == "memory"
            assert "no source" in row.note


@pytest.mark.parametrize(("table", "name"), USED)
def test_parameter_names_lead_to_rows(table, name):
    assert name in LIB.parameters(table)


def test_a_hypercube_takes_every_slice_once():
    found = rows(LIB, hand.TABLE, hand.NAMES, "a test")
    spread = found.scenarios(count=11, seed=3)
    for name, row in found.rows.items():
        assert spread[name][0] == row.value
        slices = np.floor((spread[name][1:] - row.low) / (row.high - row.low) * 10.0)
        assert sorted(slices) == list(range(10))


def test_one_set_is_the_shipped_one_and_seeds_differ():
    found = rows(LIB, hand.TABLE, hand.NAMES, "a test")
    assert {n: v.tolist() for n, v in found.scenarios(1).items()} == {n: [v] for n, v in found.values().items()}
    assert not np.array_equal(found.scenarios(8, 1)["watched_s"], found.scenarios(8, 2)["watched_s"])


class UpsideDown(type(LIB)):
    """A library with a range the wrong way round."""

    def parameters(self, key):
        found = super().parameters(key)
        row = found["relaxation_s"]
        return {**found, "relaxation_s": type(row)(**{**vars(row), "low": row.high, "high": row.low})}


def test_a_range_upside_down_is_refused():
    with pytest.raises(DataError, match="low lies above high for relaxation_s"):
        rows(UpsideDown(), hand.TABLE, hand.NAMES, "a test")
