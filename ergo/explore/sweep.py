"""Many placements of one study, judged by a crew and kept in a store; interrupted at any moment, nothing is lost."""

import math
import time
from collections import deque
from collections.abc import Callable
from concurrent.futures import FIRST_COMPLETED, BrokenExecutor, Future, wait
from dataclasses import dataclass, field
from pathlib import Path
from typing import Any

import numpy as np

from ergo.errors import DataError
from ergo.explore.axes import Placements
from ergo.explore.fingerprint import fingerprint
from ergo.explore.outcome import judge_placement
from ergo.explore.store import Head, Store, open_store
from ergo.explore.workers import Chunk, Crew, Judge, OtherCodeError, chunk_of, crew_of
from ergo.study.model import Study

CHUNK_S, LARGEST_CHUNK = 0.25, 256
WAITING_A_WORKER = 2
DEATHS_BORNE = 3


@dataclass(frozen=True)
class Progress:
    """How far a sweep is: placements kept, of how many, placements a second [1/s], time left [s]; NaN until known."""

    kept: int
    count: int
    rate: float
    left_s: float


@dataclass
class _Pace:
    """Measures how fast placements come, and how many make a chunk."""

    begun: float = field(default_factory=time.monotonic)
    judged: int = 0

    def progress(self, store: Store) -> Progress:
        passed = time.monotonic() - self.begun
        rate = self.judged / passed if self.judged else math.nan
        return Progress(store.kept, store.head.count, rate, (store.head.count - store.kept) / rate)

    def chunk(self, workers: int, pending: int) -> int:
        passed = time.monotonic() - self.begun
        size = math.ceil(CHUNK_S * self.judged / (workers * passed)) if self.judged else 1
        return max(min(size, LARGEST_CHUNK, math.ceil(pending / (2 * workers))), 1)


def head_of(study: Study, placements: Placements) -> Head:
    """Return what a store of this sweep says of itself."""
    paths = tuple(axis.path for axis in placements.axes)
    return Head(fingerprint(study, placements), paths, placements.count, study.study.title, placements.words(), study.as_toml())


def sweep(study: Study, placements: Placements, path: Path, *, resume: bool = False, workers: int | None = None,
          crew: Crew | None = None, judge: Judge = judge_placement,
          tell: Callable[[Progress], None] | None = None) -> int:  # fmt: skip
    """Judge every placement that the store does not hold yet.

    Parameters
    ----------
    study : Study
        Read and checked.
    placements : Placements
        Which keys take which values.
    path : Path
        The store; see `open_store` for what it refuses.
    resume : bool
        Whether a store that is there is gone on with.
    workers : int, optional
        Processes; one a processor by default, 0 for this process alone. Results do not depend on it.
    crew : Crew, optional
        Other workers, such as a cluster's.
    judge : callable
        `judge_placement`, or a stand-in that other processes can import.
    tell : callable, optional
        Progress after every chunk.

    Returns
    -------
    int
        How many placements were judged now.

    Raises
    ------
    DataError
        In words, when store or workers fail; KeyboardInterrupt goes through. What was kept stays kept.
    """
    head = head_of(study, placements)
    with open_store(path, head, resume=resume) as store:
        left = np.flatnonzero(~store.done)
        if left.size == 0:
            return 0
        hands: Crew = crew if crew is not None else crew_of(workers)
        try:
            return _run(store, _Work(study, judge, placements, head), left, hands, tell)
        finally:
            hands.close()


@dataclass(frozen=True)
class _Work:
    study: Study
    judge: Judge
    placements: Placements
    head: Head

    def chunk(self, numbers: Any) -> Chunk:
        parts = self.head.parts
        return chunk_of(self.study, self.judge, numbers, self.placements.values, code=parts["code"], data=parts["data"])


def _run(store: Store, work: _Work, left: np.ndarray, hands: Crew, tell: Callable[[Progress], None] | None) -> int:
    pace, at, deaths = _Pace(), 0, 0
    again: deque[Chunk] = deque()
    out: dict[Future[Any], Chunk] = {}
    while at < left.size or again or out:
        while len(out) < WAITING_A_WORKER * hands.size and (again or at < left.size):
            if again:
                chunk = again.popleft()
            else:
                size = pace.chunk(hands.size, left.size - at)
                chunk = work.chunk(left[at : at + size])
                at += size
            out[hands.submit(chunk)] = chunk
        finished, _ = wait(out, timeout=1.0, return_when=FIRST_COMPLETED)
        if not finished:
            hands.look_round()
        broken = False
        for future in finished:
            broken = not _keep(store, future, out, again, pace) or broken
        if broken:
            deaths += 1
            again.extend(out.values())
            out.clear()
            _revive(store, hands, deaths, again)
        if tell is not None and finished:
            tell(pace.progress(store))
    return pace.judged


def _keep(store: Store, future: "Future[Any]", out: dict["Future[Any]", Chunk], again: "deque[Chunk]", pace: _Pace) -> bool:
    """Keep a finished chunk; a chunk whose worker died goes back, and False says so."""
    chunk = out.pop(future)
    try:
        rows = future.result()
    except BrokenExecutor:
        again.append(chunk)
        return False
    except OtherCodeError as error:
        msg = ("a worker runs another version of Pullward, its libraries or its tables than this machine; install the same"
               f" there; the {store.kept} placements kept so far are safe, go on with --resume")  # fmt: skip
        raise DataError(msg) from error
    store.add(rows)
    pace.judged += len(rows)
    return True


def _revive(store: Store, hands: Crew, deaths: int, again: "deque[Chunk]") -> None:
    """Replace workers that died; give up when they die again and again."""
    if deaths > DEATHS_BORNE or not hands.restarts:
        first = min(n for chunk in again for n in chunk.numbers)
        msg = (f"{store.path}: worker processes died {deaths} times, the last near placement {first} (out of memory?);"
               f" the {store.kept} placements kept so far are safe, go on with --resume")  # fmt: skip
        raise DataError(msg)
    hands.restart()
