"""Reading a sweep's store, running or finished, as a table; and writing that table."""

import contextlib
import io
import sqlite3
from collections.abc import Iterator
from pathlib import Path
from typing import TYPE_CHECKING, Any

from ergo.errors import DataError
from ergo.explore.outcome import COLUMNS
from ergo.explore.store import Head, check_kind, check_rows, columns, in_words, read_head

if TYPE_CHECKING:
    import pandas as pd

ROWS_AT_ONCE = 10_000


@contextlib.contextmanager
def _reading(path: Path) -> Iterator[sqlite3.Connection]:
    if not path.is_file():
        msg = f"{path}: there is no such store"
        raise DataError(msg)
    where = path.resolve().as_uri()
    with in_words(path, None):
        connection = _opened(where)
    with contextlib.closing(connection):
        yield connection


def _opened(where: str) -> sqlite3.Connection:
    """Open for reading: so that the journal is tidied away, else untouched, else the file alone without its journal."""
    trouble: sqlite3.OperationalError | None = None
    for mode in ("mode=rw", "mode=ro", "mode=ro&immutable=1"):
        connection = sqlite3.connect(f"{where}?{mode}", uri=True)
        try:
            connection.execute("SELECT count(*) FROM sqlite_master").fetchone()
        except sqlite3.OperationalError as error:
            connection.close()
            trouble = error
        else:
            return connection
    raise trouble or sqlite3.OperationalError(where)


def read_store(path: Path) -> "tuple[Head, pd.DataFrame]":
    """Return what a store says of itself, and its placements as a table.

    Parameters
    ----------
    path : Path
        The store; it may be in use.

    Returns
    -------
    head, frame
        One row a placement in the order of numbers: `placement`, the varied keys by path, the outcome's columns.

    Raises
    ------
    DataError
        If it is missing, no store, damaged, or from a newer version.
    """
    import pandas as pd

    with _reading(path) as connection:
        check_kind(connection, path)
        head = read_head(connection, path)
        check_rows(connection, path, head.paths)
        with in_words(path, None):
            found = connection.execute("SELECT * FROM placements ORDER BY placement")
            # Cells of Python take ten times the room of a frame's: only some rows at once are such cells.
            pieces = [_frame(cells, head.paths) for cells in iter(lambda: found.fetchmany(ROWS_AT_ONCE), [])]
    return head, pd.concat(pieces, ignore_index=True) if pieces else _frame([], head.paths)


def _frame(cells: list[tuple[Any, ...]], paths: tuple[str, ...]) -> "pd.DataFrame":
    import pandas as pd

    frame = pd.DataFrame(cells, columns=columns(paths)).drop(columns=["mark"])
    numeric = [name for name, kind in COLUMNS.items() if kind == "REAL"]
    words = [name for name, kind in COLUMNS.items() if kind == "TEXT"] + ["rests_on"]
    frame[numeric] = frame[numeric].astype("float64")
    frame[words] = frame[words].astype("string")
    return frame


def table_bytes(frame: "pd.DataFrame", kind: str) -> bytes:
    """Return a table as a file's bytes: `csv` or `parquet`."""
    if kind == "csv":
        return frame.to_csv(index=False).encode("utf-8")
    content = io.BytesIO()
    frame.to_parquet(content, index=False)
    return content.getvalue()
