"""What a sweep rests on: the study, what is varied, the code and the tables; one hash each, so that a change can be named."""

import functools
import hashlib
import importlib.metadata
from collections.abc import Mapping
from pathlib import Path
from typing import Any

import ergo
from ergo.datasets import checksum, table_keys
from ergo.explore.axes import Placements
from ergo.sources import folder
from ergo.study.model import Study

# Rooms that decide a placement's numbers; faces, pictures and the store itself do not.
_ROOMS = ("people", "arm", "strength", "mechanism", "load", "letgo", "rating", "study", "evaluation")
_FILES = ("frames.py", "datasets.py", "explore/outcome.py", "explore/keys.py", "explore/axes.py")
_LIBRARIES = ("numpy", "scipy", "numba")
WORDS = {
    "study": "the study",
    "placements": "what is varied",
    "code": "the program or its libraries",
    "data": "the shipped tables",
}


def fingerprint(study: Study, placements: Placements) -> dict[str, str]:
    """Return the hashes of study, placements, code and data (hex, 16 digits each)."""
    return {
        "study": study.digest()[:16],
        "placements": _short(placements.words()),
        "code": code_hash(),
        "data": data_hash(study),
    }


def joined(parts: Mapping[str, str]) -> str:
    """Return one hash of all parts: what every row carries."""
    return _short("|".join(f"{name}={parts[name]}" for name in sorted(WORDS)))


def changed_words(kept: Mapping[str, Any], now: Mapping[str, str]) -> list[str]:
    """Return in words what differs between the fingerprint that a store holds and the present one."""
    return [word for name, word in WORDS.items() if kept.get(name) != now[name]]


@functools.cache
def code_hash() -> str:
    """Return the hash of every source file that decides numbers, and of the versions of the numeric libraries."""
    place = Path(ergo.__file__).parent
    paths = sorted(p for room in _ROOMS for p in (place / room).rglob("*.py")) + [place / name for name in _FILES]
    parts = [f"{p.relative_to(place).as_posix()}:{checksum(p)}" for p in paths]
    parts += [f"{name} {importlib.metadata.version(name)}" for name in _LIBRARIES]
    return _short("\n".join(parts))


def data_hash(study: Study) -> str:
    """Return the hash of every shipped table, and of the study's own population file."""
    place = folder("datasets")
    parts = [f"{key}:{checksum(place / key / 'table.csv')}" for key in table_keys()]
    own = study.operators.population
    if own.endswith(".csv"):
        parts.append(checksum(Path(study.folder) / own))
    return _short("\n".join(parts))


def _short(text: str) -> str:
    return hashlib.sha256(text.encode("utf-8")).hexdigest()[:16]
