"""The work of each browser, kept on the server: what stands in the fields, every step back, what was kept."""

import json
import os
import re
import secrets
import shutil
import threading
import time
from collections import OrderedDict
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

from ergo.board.draft import Draft, draft_of, set_at

_ID = re.compile(r"[0-9a-f]{32}")
LONGEST_HISTORY = 80
LARGEST_FILE = 1_000_000
MOST_FILES = 20
MOST_KEPT = 100
WORKS_IN_MEMORY = 64
OLDEST_S = 90 * 86_400.0


@dataclass
class Step:
    """One state of the fields that one can go back to."""

    change: int
    tab: str
    why: str
    name: str
    data: dict[str, Any]


@dataclass
class Kept:
    """A placement that was kept: its study, a note, and the numbers it had."""

    key: str
    note: str
    name: str
    data: dict[str, Any]
    summary: dict[str, Any]


class OtherTabError(Exception):
    """The work was changed in another tab since this one last saw it."""


@dataclass
class Work:
    """One browser's work; every change goes through `apply`, `undo` or `redo`, under `lock`."""

    key: str
    place: Path
    steps: list[Step] = field(default_factory=list)
    at: int = -1
    change: int = 0
    kept: list[Kept] = field(default_factory=list)
    reference: str = ""
    draft: Draft | None = None
    numbers: dict[str, int] = field(default_factory=dict)
    seen_by: dict[str, int] = field(default_factory=dict)
    lock: threading.RLock = field(default_factory=threading.RLock)

    @property
    def files(self) -> Path:
        """Folder of the CSV files brought along with the study."""
        return self.place / "files"

    @property
    def empty(self) -> bool:
        """Whether no study was opened yet."""
        return self.at < 0

    @property
    def name(self) -> str:
        """File name of the study."""
        return self.steps[self.at].name if self.at >= 0 else "study.toml"

    @property
    def can_undo(self) -> bool:
        """Whether there is a step back."""
        return self.at > 0

    @property
    def can_redo(self) -> bool:
        """Whether there is a step forward."""
        return self.at < len(self.steps) - 1

    def open(self, data: dict[str, Any], name: str, tab: str, why: str = "opened") -> Draft:
        """Put another study into the fields; undo leads back to the one before."""
        with self.lock:
            return self._step(data, name, tab, why)

    def apply(self, path: str, value: Any, *, tab: str, seen: int, keep_mine: bool = False) -> Draft:
        """Change one value.

        Raises
        ------
        OtherTabError
            When another tab has changed the work since `seen`, unless `keep_mine`.
        KeyError
            For a path that leads nowhere.
        """
        with self.lock:
            if not keep_mine:
                self._must_have_seen(tab, seen)
            before = self._data_at(seen) if keep_mine else self.steps[self.at].data
            return self._step(set_at(before, path, value), self.name, tab, path)

    def replace(self, data: dict[str, Any], *, why: str, tab: str, seen: int) -> Draft:
        """Change the whole study in one step, as `apply` does for one value."""
        with self.lock:
            self._must_have_seen(tab, seen)
            return self._step(data, self.name, tab, why)

    def undo(self, *, tab: str, seen: int, steps: int = -1) -> Draft | None:
        """Go a step back, or forward with `steps=1`; None where there is none."""
        with self.lock:
            self._must_have_seen(tab, seen)
            if not 0 <= self.at + steps < len(self.steps):
                return None
            self.at += steps
            self.change += 1
            step = self.steps[self.at]
            step.change, step.tab = self.change, tab
            last_good = self.draft.good if self.draft else None
            self.draft = draft_of(step.data, self.files, step.name, last_good)
            self.save()
            return self.draft

    def save(self) -> None:
        """Write the work to its folder, whole or not at all."""
        content = {
            "steps": [vars(s) for s in self.steps],
            "at": self.at,
            "change": self.change,
            "kept": [vars(k) for k in self.kept],
            "reference": self.reference,
        }
        self.place.mkdir(parents=True, exist_ok=True, mode=0o700)
        beside = self.place / f"work.{secrets.token_hex(4)}.part"
        beside.write_text(json.dumps(content), encoding="utf-8")
        os.replace(beside, self.place / "work.json")

    def _step(self, data: dict[str, Any], name: str, tab: str, why: str) -> Draft:
        last_good = self.draft.good if self.draft else None
        self.change += 1
        self.draft = draft_of(data, self.files, name, last_good)
        step = Step(self.change, tab, why, name, self.draft.data)
        self._forget_redo()
        if self._goes_on(step):
            self.steps[self.at] = step
        else:
            self.steps.append(step)
        del self.steps[: max(0, len(self.steps) - LONGEST_HISTORY)]
        self.at = len(self.steps) - 1
        self.save()
        return self.draft

    def _forget_redo(self) -> None:
        del self.steps[self.at + 1 :]

    def _goes_on(self, step: Step) -> bool:
        """Return whether a step is the same hand still on the same control, so that one undo takes it all back."""
        if self.at < 1:
            return False
        last = self.steps[self.at]
        return last.why == step.why and last.tab == step.tab and last.change == step.change - 1 and "." in step.why

    def _must_have_seen(self, tab: str, seen: int) -> None:
        if any(s.change > seen and s.tab != tab for s in self.steps):
            raise OtherTabError

    def _data_at(self, seen: int) -> dict[str, Any]:
        return next((s.data for s in self.steps if s.change == seen), self.steps[self.at].data)


class Store:
    """Every work, by the key that only its own browser knows; read from the folder when first asked for."""

    def __init__(self, folder: Path) -> None:
        self._folder = folder
        self._works: OrderedDict[str, Work] = OrderedDict()
        self._lock = threading.Lock()
        folder.mkdir(parents=True, exist_ok=True, mode=0o700)
        self._clear_old()

    def work(self, key: str) -> Work:
        """Return the work of a key, an empty one when it is new; ValueError for what is no key."""
        if not _ID.fullmatch(key):
            msg = "no key of a work"
            raise ValueError(msg)
        with self._lock:
            if key not in self._works:
                self._works[key] = _read(key, self._folder / key)
            self._works.move_to_end(key)
            while len(self._works) > WORKS_IN_MEMORY:
                self._works.popitem(last=False)
            return self._works[key]

    def _clear_old(self) -> None:
        """Remove works that nobody has touched for months."""
        for place in self._folder.iterdir():
            file = place / "work.json"
            if _ID.fullmatch(place.name) and file.is_file() and time.time() - file.stat().st_mtime > OLDEST_S:
                shutil.rmtree(place, ignore_errors=True)


def new_key() -> str:
    """Return a key that cannot be guessed."""
    return secrets.token_hex(16)


def _read(key: str, place: Path) -> Work:
    work = Work(key, place)
    try:
        content = json.loads((place / "work.json").read_text(encoding="utf-8"))
        steps = [Step(**s) for s in content["steps"]]
        kept = [Kept(**k) for k in content["kept"]]
        at, change = int(content["at"]), int(content["change"])
    except (OSError, ValueError, KeyError, TypeError):
        return work
    if not -1 <= at < len(steps):
        return work
    work.steps, work.kept, work.at, work.change = steps, kept, at, change
    work.reference = str(content.get("reference", ""))
    if at >= 0:
        work.draft = _last_draft(work)
    return work


def _last_draft(work: Work) -> Draft:
    """Return the draft in the fields, with the last sound study of the steps before it where it is unsound."""
    step = work.steps[work.at]
    draft = draft_of(step.data, work.files, step.name)
    for earlier in reversed(work.steps[: work.at]):
        if draft.good is not None:
            break
        good = draft_of(earlier.data, work.files, earlier.name).good
        draft = Draft(draft.data, good, draft.problems)
    return draft
