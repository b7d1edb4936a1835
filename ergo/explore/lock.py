"""One process a store: a lock that goes with the process, however it ends."""

import contextlib
import sqlite3
from pathlib import Path

from ergo.errors import DataError


class Lock:
    """A lock beside a store, `STORE.lock`.

    It is an exclusive transaction on an empty SQLite file, because that holds on every system and is let go by the
    operating system even after kill -9.
    """

    def __init__(self, store: Path) -> None:
        self._store = store
        self._path = store.with_name(store.name + ".lock")
        self._connection: sqlite3.Connection | None = None

    def take(self) -> None:
        """Take the lock.

        Raises
        ------
        DataError
            If another process has it, or the folder cannot be written.
        """
        for _ in range(3):
            before = self._attempt()
            # Whoever held it may have taken the file away between opening and locking.
            if self._path.exists() and self._path.stat().st_ino == before:
                return
            self._close()
        raise DataError(self._sentence(sqlite3.OperationalError("the lock keeps moving")))

    def _attempt(self) -> int:
        """Open and lock the lock file; return which file was opened."""
        try:
            self._connection = sqlite3.connect(self._path, timeout=0.0, isolation_level=None)
            opened = self._path.stat().st_ino
            self._connection.execute("BEGIN EXCLUSIVE")
        except (sqlite3.Error, OSError) as error:
            self._close()
            raise DataError(self._sentence(error)) from error
        return opened

    def _close(self) -> None:
        if self._connection is not None:
            self._connection.close()
        self._connection = None

    def release(self) -> None:
        """Let go, and take the lock file away."""
        if self._connection is None:
            return
        with contextlib.suppress(OSError):
            self._path.unlink()
        self._close()

    def _sentence(self, error: Exception) -> str:
        if getattr(error, "sqlite_errorcode", 0) & 0xFF == sqlite3.SQLITE_BUSY:
            return f"{self._store}: another sweep is running on this store; wait for it, or name another file"
        if self._store.exists() and not self._store.is_file():
            return f"{self._store}: is not a file"
        if not self._store.parent.is_dir():
            return f"{self._store}: there is no folder {self._store.parent}"
        return f"{self._store}: cannot be written there: the folder is read-only or full ({error})"
