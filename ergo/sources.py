"""The bibliography: every source that a shipped number names, and how to cite it."""

import functools
import tomllib
from collections.abc import Mapping
from dataclasses import dataclass
from pathlib import Path

from ergo.errors import DataError

STATUSES = ("seen", "computed", "derived", "memory")
STATUS_MEANING = {
    "seen": "read in the named source",
    "computed": "worked out here from raw public records",
    "derived": "worked out here from the named numbers",
    "memory": "recalled, not checked against the print",
}
_PACKAGE = Path(__file__).resolve().parent


@functools.cache
def folder(name: str) -> Path:
    """Return the folder `assets` or `datasets`, in an installed wheel or in a checkout.

    Raises
    ------
    DataError
        If neither place holds the folder.
    """
    for root in (_PACKAGE / "_data", _PACKAGE.parent):
        if (root / name).is_dir():
            return root / name
    msg = f"the folder {name} did not come with this installation; install pullward again"
    raise DataError(msg)


@dataclass(frozen=True)
class Source:
    """One entry of the bibliography."""

    key: str
    title: str
    authors: str = ""
    year: str = ""
    publisher: str = ""
    edition: str = ""
    doi: str = ""
    note: str = ""

    def entry(self) -> str:
        """Return the entry as one line for a bibliography."""
        head = f"{self.authors} ({self.year})" if self.authors else f"({self.year})"
        parts = [head.strip(), self.title, self.edition, self.publisher]
        line = ". ".join(p for p in parts if p and p != "()")
        return f"{line}. doi:{self.doi}" if self.doi else f"{line}."


@functools.cache
def bibliography() -> Mapping[str, Source]:
    """Return every source by key.

    Raises
    ------
    DataError
        If the bibliography is missing or cannot be read.
    """
    path = folder("datasets") / "sources.toml"
    try:
        entries = tomllib.loads(path.read_text(encoding="utf-8"))
    except (OSError, UnicodeDecodeError, tomllib.TOMLDecodeError) as error:
        msg = f"datasets/sources.toml cannot be read: {error}"
        raise DataError(msg) from error
    return {key: Source(key=key, **{k: str(v) for k, v in entry.items()}) for key, entry in entries.items()}


def cite(key: str, locator: str = "") -> str:
    """Return a short citation such as `de_leva_1996, table 4`; the key must be in the bibliography.

    Raises
    ------
    DataError
        If the key is unknown.
    """
    if key not in bibliography():
        msg = f"source {key} is not in datasets/sources.toml"
        raise DataError(msg)
    return f"{key}, {locator}" if locator else key


def weakest(statuses: "list[str] | tuple[str, ...]") -> str:
    """Return the weakest of several statuses: what is worked out from a number is no better than it."""
    return max(statuses, key=STATUSES.index) if statuses else "memory"
