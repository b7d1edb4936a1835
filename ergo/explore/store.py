"""The file of a sweep: SQLite, one row a placement, written by one process, safe against kill, full disk and damage."""

import contextlib
import hashlib
import json
import sqlite3
from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from ergo import __version__
from ergo.errors import DataError
from ergo.explore.fingerprint import changed_words, joined
from ergo.explore.lock import Lock
from ergo.explore.outcome import COLUMNS, Outcome

APPLICATION = 0x50575357  # "PWSW", so that no other SQLite file is taken for a sweep
FORMAT = 1
_MANY = 2000


@dataclass(frozen=True)
class Head:
    """What a store says of itself: fingerprint parts, the varied keys, how many placements, and the study as text."""

    parts: Mapping[str, str]
    paths: tuple[str, ...]
    count: int
    title: str
    placements: str
    study: str

    def rows(self) -> list[tuple[str, str]]:
        """Return the head as rows of the table `head`."""
        named = {"paths": json.dumps(self.paths), "count": str(self.count), "title": self.title,
                 "placements": self.placements, "study": self.study, "pullward": __version__}  # fmt: skip
        return sorted((named | {f"hash.{name}": value for name, value in self.parts.items()}).items())


@dataclass(frozen=True)
class Row:
    """One placement judged: its number, its values by path, and its outcome by column."""

    number: int
    values: Mapping[str, Any]
    outcome: Outcome


class Store:
    """An open store; `done` (count,) says which placements it holds. Close it, or use it as a context."""

    def __init__(self, path: Path, head: Head, connection: sqlite3.Connection, lock: Lock) -> None:
        self.path, self.head, self._connection, self._lock = path, head, connection, lock
        self._hash = joined(head.parts)
        self.done = np.zeros(head.count, dtype=bool)

    def __enter__(self) -> "Store":
        return self

    def __exit__(self, *_: object) -> None:
        self.close()

    @property
    def kept(self) -> int:
        """How many placements the store holds."""
        return int(self.done.sum())

    def add(self, rows: Iterable[Row]) -> None:
        """Keep placements, all of them or none; one that is there already stays as it is.

        Raises
        ------
        DataError
            In words, if the file cannot be written; what was kept before stays.
        """
        names = columns(self.head.paths)
        marks = ", ".join("?" * len(names))
        made = [row_cells(row, self.head.paths, self._hash) for row in rows]
        with in_words(self.path, self.kept), self._connection:
            self._connection.executemany(f"INSERT OR IGNORE INTO placements VALUES ({marks})", made)
        self.done[[cells[0] for cells in made]] = True

    def frame_rows(self) -> Iterator[tuple[Any, ...]]:
        """Yield every row in the order of placements, as cells in the order of `columns`."""
        with in_words(self.path, self.kept):
            yield from self._connection.execute("SELECT * FROM placements ORDER BY placement")

    def close(self) -> None:
        """Fold the journal into the file and let others at it."""
        with contextlib.suppress(sqlite3.Error):
            self._connection.execute("PRAGMA wal_checkpoint(TRUNCATE)")
        self._connection.close()
        self._lock.release()


def columns(paths: Iterable[str]) -> list[str]:
    """Return the columns of the table `placements`: number, varied keys, outcome, hash of what it rests on, mark."""
    return ["placement", *paths, *COLUMNS, "rests_on", "mark"]


def row_cells(row: Row, paths: Iterable[str], rests_on: str) -> tuple[Any, ...]:
    """Return a row's cells, the last being a mark by which a changed byte is noticed."""
    cells = [row.number, *(row.values[p] for p in paths), *(row.outcome[c] for c in COLUMNS), rests_on]
    cells = [int(c) if isinstance(c, bool) else c for c in cells]
    return (*cells, _mark(cells))


def _mark(cells: Iterable[Any]) -> str:
    return hashlib.sha256(json.dumps(list(cells)).encode("utf-8")).hexdigest()[:12]


def open_store(path: Path, head: Head, *, resume: bool) -> Store:
    """Open the store of a sweep, or begin it.

    Parameters
    ----------
    path : Path
        The file; its folder must exist.
    head : Head
        What the sweep now rests on.
    resume : bool
        Whether a file that is there may be gone on with; a new one is begun where there is none.

    Raises
    ------
    DataError
        In words: it exists and `resume` is not set, it is another process's, damaged, from a newer version, of
        another sweep, or the study, code or tables have changed since. The file is then left as it is.
    """
    lock = Lock(path)
    lock.take()
    try:
        fresh = not path.exists() or path.stat().st_size == 0
        with in_words(path, None):
            connection = sqlite3.connect(path, timeout=5.0)
        try:
            store = Store(path, head, connection, lock)
            _settle(store, connection, fresh=fresh, resume=resume)
        except BaseException:
            connection.close()
            if fresh and path.exists() and path.stat().st_size == 0:
                path.unlink()
            raise
    except BaseException:
        lock.release()
        raise
    return store


def _settle(store: Store, connection: sqlite3.Connection, *, fresh: bool, resume: bool) -> None:
    path = store.path
    if not fresh:
        check_kind(connection, path)
        fresh = connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0] == 0
    if fresh:
        with in_words(path, 0):
            _begin(connection, store.head)
        return
    if not resume:
        kept = connection.execute("SELECT count(*) FROM placements").fetchone()[0]
        msg = f"{path}: holds a sweep already ({kept} placements); go on with --resume, or name another file"
        raise DataError(msg)
    _same(connection, store)
    store.done[check_rows(connection, path, store.head.paths)] = True
    with in_words(path, store.kept):
        connection.execute("PRAGMA journal_mode=WAL")
        connection.execute("PRAGMA synchronous=NORMAL")


def _begin(connection: sqlite3.Connection, head: Head) -> None:
    """Write tables and head in one transaction, so that a half-begun store is an empty one."""
    cells = ['"placement" INTEGER PRIMARY KEY', *(f'"{p}"' for p in head.paths)]
    cells += [f"{name} {kind}" for name, kind in COLUMNS.items()] + ["rests_on TEXT NOT NULL", "mark TEXT NOT NULL"]
    connection.isolation_level = None
    connection.execute("BEGIN IMMEDIATE")
    connection.execute(f"PRAGMA application_id={APPLICATION}")
    connection.execute(f"PRAGMA user_version={FORMAT}")
    connection.execute("CREATE TABLE head (name TEXT PRIMARY KEY, value TEXT NOT NULL)")
    connection.executemany("INSERT INTO head VALUES (?, ?)", head.rows())
    connection.execute(f"CREATE TABLE placements ({', '.join(cells)})")
    connection.execute("COMMIT")
    connection.isolation_level = "DEFERRED"
    connection.execute("PRAGMA journal_mode=WAL")
    connection.execute("PRAGMA synchronous=NORMAL")


def check_kind(connection: sqlite3.Connection, path: Path) -> None:
    """Refuse a file that is no sound store of a version that is known.

    Raises
    ------
    DataError
        In words.
    """
    with in_words(path, None):
        application = connection.execute("PRAGMA application_id").fetchone()[0]
        version = connection.execute("PRAGMA user_version").fetchone()[0]
        tables = {name for (name,) in connection.execute("SELECT name FROM sqlite_master WHERE type='table'")}
    if application != APPLICATION and (tables or application):
        msg = f"{path}: is an SQLite file, but no Pullward sweep; name another file"
        raise DataError(msg)
    if version > FORMAT:
        msg = (f"{path}: was written by a newer Pullward (store format {version}, this one reads up to {FORMAT});"
               " update Pullward; the file was left as it is")  # fmt: skip
        raise DataError(msg)
    with in_words(path, None):
        faults = [text for (text,) in connection.execute("PRAGMA quick_check(3)") if text != "ok"]
    if faults or (tables and not {"head", "placements"} <= tables):
        raise DataError(damaged(path, faults[0].splitlines()[-1] if faults else "a table is missing"))


def damaged(path: Path, what: str) -> str:
    """Return the sentence for a damaged store."""
    return f"{path}: the store is damaged ({what}); it was left as it is: bring back a copy, or move it away and start again"


def read_head(connection: sqlite3.Connection, path: Path) -> Head:
    """Return what a store says of itself.

    Raises
    ------
    DataError
        If that cannot be read.
    """
    with in_words(path, None):
        found = dict(connection.execute("SELECT name, value FROM head"))
    try:
        parts = {name.removeprefix("hash."): value for name, value in found.items() if name.startswith("hash.")}
        return Head(parts, tuple(json.loads(found["paths"])), int(found["count"]), found["title"], found["placements"],
                    found["study"])  # fmt: skip
    except (KeyError, ValueError) as error:
        raise DataError(damaged(path, f"its head lacks {error}")) from error


def _same(connection: sqlite3.Connection, store: Store) -> None:
    kept = read_head(connection, store.path)
    changed = changed_words(kept.parts, store.head.parts)
    if changed:
        verb = "has" if len(changed) == 1 else "have"
        msg = (f"{store.path}: {' and '.join(changed)} {verb} changed since this sweep began, so its placements cannot be"
               " mixed with new ones; undo the change, or start a new store")  # fmt: skip
        raise DataError(msg)


def check_rows(connection: sqlite3.Connection, path: Path, paths: Iterable[str]) -> list[int]:
    """Return the numbers of all rows, each of which still carries its mark.

    Raises
    ------
    DataError
        Naming the first that does not.
    """
    found: list[int] = []
    width = len(columns(paths))
    with in_words(path, None):
        for cells in connection.execute("SELECT * FROM placements ORDER BY placement"):
            if len(cells) != width or _mark(cells[:-1]) != cells[-1]:
                raise DataError(damaged(path, f"placement {cells[0]} is not as it was written"))
            found.append(cells[0])
    return found


@contextlib.contextmanager
def in_words(path: Path, kept: int | None) -> Iterator[None]:
    """Turn what SQLite raises into a sentence; `kept` is how many placements are safe, None where nothing was written."""
    try:
        yield
    except sqlite3.Error as error:
        raise DataError(_sentence(path, error, kept)) from error


def _sentence(path: Path, error: sqlite3.Error, kept: int | None) -> str:
    code = getattr(error, "sqlite_errorcode", None) or 0
    safe = "" if kept is None else f"; the {kept} placements kept so far are safe, go on with --resume"
    primary = code & 0xFF
    if primary in (sqlite3.SQLITE_NOTADB, sqlite3.SQLITE_CORRUPT):
        return damaged(path, str(error))
    if primary == sqlite3.SQLITE_FULL or "disk is full" in str(error):
        return f"{path}: the disk is full{safe}"
    if primary in (sqlite3.SQLITE_READONLY, sqlite3.SQLITE_CANTOPEN, sqlite3.SQLITE_PERM):
        return f"{path}: cannot be written there: the folder or the file is read-only, or does not exist{safe}"
    if primary == sqlite3.SQLITE_BUSY:
        return f"{path}: another program is writing to it{safe}"
    return f"{path}: cannot be written ({error}){safe}"
