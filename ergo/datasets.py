"""The only reader of shipped tables: one folder a table, a `table.csv` and its `meta.toml`."""

import csv
import functools
import hashlib
import io
import math
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass, field, replace
from pathlib import Path
from types import MappingProxyType
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.errors import DataError, Problem, StudyError
from ergo.sources import STATUSES, folder

LARGEST_OWN_BYTES = 1_000_000  # a population table of every dimension by sex is some 5 kB


def number(text: str) -> float:
    """Return a table cell as a number, NaN where the cell is empty."""
    return float(text) if text.strip() else math.nan


@dataclass(frozen=True)
class Parameter:
    """One number that a model uses, with the range it may lie in, its source and its status."""

    table: str
    name: str
    value: float
    low: float
    high: float
    unit: str
    source: str
    locator: str
    status: str
    note: str


@dataclass(frozen=True)
class Table:
    """A shipped table: rows of text cells by column, and what is known about them."""

    key: str
    rows: tuple[Mapping[str, str], ...]
    meta: Mapping[str, Any]

    @property
    def title(self) -> str:
        """What the table holds, in words."""
        return str(self.meta["title"])

    @property
    def caveats(self) -> tuple[str, ...]:
        """What the table does not cover."""
        return tuple(self.meta.get("caveats", ()))

    def where(self, **equals: str) -> "Table":
        """Return the rows whose named columns equal the given texts."""
        kept = tuple(r for r in self.rows if all(r[k] == v for k, v in equals.items()))
        return replace(self, rows=kept)

    def row(self, **equals: str) -> Mapping[str, str]:
        """Return the one row whose named columns equal the given texts.

        Raises
        ------
        DataError
            If no row, or more than one, does.
        """
        kept = self.where(**equals).rows
        if len(kept) != 1:
            msg = f"table {self.key}: {len(kept)} rows for {equals}, one was expected"
            raise DataError(msg)
        return kept[0]

    def texts(self, column: str) -> tuple[str, ...]:
        """Return one column as text."""
        return tuple(r[column] for r in self.rows)

    def numbers(self, column: str) -> NDArray[np.float64]:
        """Return one column as numbers (rows,), NaN where empty."""
        return np.array([number(r[column]) for r in self.rows])

    def status_of(self, row: Mapping[str, str]) -> str:
        """Return the status of one row: its own, else the table's."""
        return row.get("status") or str(self.meta["status"])

    def source_of(self, row: Mapping[str, str]) -> str:
        """Return the source key of one row: its own, else the table's."""
        return row.get("source") or str(self.meta["source"])


@dataclass(frozen=True)
class Library:
    """Every shipped table, read when first asked for, with any values changed for a what-if.

    A changed value never touches a file: `with_value` returns another library.
    """

    changes: Mapping[tuple[str, str], float] = field(default_factory=lambda: MappingProxyType({}))

    def table(self, key: str) -> Table:
        """Return a shipped table.

        Raises
        ------
        DataError
            If there is no such table or it cannot be read.
        """
        return _read_table(key)

    def parameters(self, key: str) -> dict[str, Parameter]:
        """Return a parameter table (columns name, value, low, high, unit, source, locator, status, note)."""
        found = {}
        for row in self.table(key).rows:
            found[row["name"]] = Parameter(
                table=key,
                name=row["name"],
                value=self.changes.get((key, row["name"]), number(row["value"])),
                low=number(row["low"]),
                high=number(row["high"]),
                unit=row["unit"],
                source=row["source"],
                locator=row["locator"],
                status=row["status"],
                note=row["note"],
            )
        return found

    def values(self, key: str) -> dict[str, float]:
        """Return the values alone of a parameter table, by name."""
        return {name: p.value for name, p in self.parameters(key).items()}

    def with_value(self, key: str, name: str, value: float) -> "Library":
        """Return a library in which one parameter has another value."""
        if name not in self.parameters(key):
            msg = f"table {key} has no parameter {name}"
            raise DataError(msg)
        return Library(MappingProxyType({**self.changes, (key, name): float(value)}))

    def with_factor(self, key: str, row: str, factor: float) -> "Library":
        """Return a library in which one row of a table that is no parameter table is scaled by `factor`."""
        self.table(key)
        return Library(MappingProxyType({**self.changes, (key, row): float(factor)}))

    def factor(self, key: str, row: str) -> float:
        """Return the factor by which a row is scaled, 1 where it is as shipped."""
        return self.changes.get((key, row), 1.0)


def library() -> Library:
    """Return the shipped tables as they are."""
    return Library()


@functools.cache
def table_keys() -> tuple[str, ...]:
    """Return the key of every shipped table."""
    return tuple(sorted(p.parent.name for p in folder("datasets").glob("*/meta.toml")))


@functools.cache
def _read_table(key: str) -> Table:
    place = folder("datasets") / key
    if key not in table_keys():
        msg = f"there is no shipped table named {key}; there are: {', '.join(table_keys())}"
        raise DataError(msg)
    try:
        meta = tomllib.loads((place / "meta.toml").read_text(encoding="utf-8"))
        with (place / "table.csv").open(encoding="utf-8", newline="") as lines:
            rows = tuple(MappingProxyType(dict(r)) for r in csv.DictReader(lines))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError, csv.Error) as error:
        msg = f"table {key} cannot be read: {error}"
        raise DataError(msg) from error
    return Table(key=key, rows=rows, meta=MappingProxyType(meta))


def own_rows(path: Path, columns: tuple[str, ...]) -> tuple[tuple[str, Mapping[str, str]], ...]:
    """Return the rows of a user's own CSV file, each with its place (`file:line`).

    Raises
    ------
    StudyError
        If the file is missing, too large, no text, no CSV, empty, or without one of `columns`.
    """
    expected = f"a CSV file with the columns {', '.join(columns)}"
    try:
        size = path.stat().st_size
        if size > LARGEST_OWN_BYTES:
            got, allowed = f"{size / 1e6:.1f} MB", f"up to {LARGEST_OWN_BYTES / 1e6:g} MB"
            raise StudyError([Problem(path.name, "is too large for a table", got, allowed)])
        reader = csv.DictReader(io.StringIO(path.read_text(encoding="utf-8-sig")), strict=True)
        named = [name.strip() for name in reader.fieldnames or ()]
        reader.fieldnames = named
        rows = tuple((f"{path.name}:{reader.line_num}", _cells(row)) for row in reader)
    except FileNotFoundError as error:
        raise StudyError([Problem(path.name, "there is no such file", str(path), expected)]) from error
    except UnicodeDecodeError as error:
        raise StudyError([Problem(path.name, "is not UTF-8 text", "", expected)]) from error
    except (OSError, csv.Error) as error:
        raise StudyError([Problem(path.name, f"cannot be read: {error}", "", expected)]) from error
    missing = [name for name in columns if name not in named]
    if missing:
        got = ", ".join(named)[:80] or "an empty file"
        raise StudyError([Problem(f"{path.name}:1", f"lacks the columns {', '.join(missing)}", got, expected)])
    if not rows:
        raise StudyError([Problem(path.name, "has no rows", "", expected)])
    return rows


def _cells(row: "Mapping[str | None, Any]") -> Mapping[str, str]:
    """Return a row's cells without blanks; what stands beyond the named columns goes under the name `beyond`."""
    cells = {name: (cell or "").strip() for name, cell in row.items() if name is not None}
    beyond = row.get(None)
    return MappingProxyType({**cells, "beyond": ", ".join(beyond)} if beyond else cells)


def checksum(path: Path) -> str:
    """Return the SHA-256 of a file's bytes."""
    return hashlib.sha256(path.read_bytes()).hexdigest()


def faults(key: str) -> list[str]:
    """Return what is wrong with a table's provenance: a status, a source or a checksum missing or wrong."""
    table = _read_table(key)
    needed = ("title", "source", "checksums")
    found = [f"{key}: meta.toml has no {name}" for name in needed if name not in table.meta]
    for n, row in enumerate(table.rows, 2):
        status = row.get("status") or str(table.meta.get("status", ""))
        if status not in STATUSES:
            found.append(f"{key} line {n}: status {status!r} is none of {', '.join(STATUSES)}")
        if not (row.get("source") or table.meta.get("source")):
            found.append(f"{key} line {n}: no source")
    for name, expected in table.meta.get("checksums", {}).items():
        if checksum(folder("datasets") / key / name) != expected:
            found.append(f"{key}: {name} does not have the checksum that meta.toml states")
    return found
