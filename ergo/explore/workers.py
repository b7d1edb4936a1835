"""Who judges placements: this process, processes of this machine, or a company's cluster; all by the same function.

Processes are started by spawn, each with one kernel thread: a whole placement a process also spreads the work outside
the kernel, and a parallel kernel must never be forked.
"""

import multiprocessing
import os
import signal
import threading
import time
from collections.abc import Callable, Sequence
from concurrent.futures import Executor, Future, ProcessPoolExecutor
from dataclasses import dataclass
from typing import Any, Protocol

from ergo.errors import DataError, PullwardError
from ergo.explore.fingerprint import code_hash, data_hash
from ergo.explore.keys import placed
from ergo.explore.outcome import Outcome, refused
from ergo.explore.store import Row
from ergo.study.model import Study

Judge = Callable[[Study], Outcome]
# Threads of one process take turns: two in parallel kernels at once end it under numba's plainest thread layer.
_turn = threading.Lock()


class OtherCodeError(Exception):
    """A worker runs another version of the program or its tables."""


@dataclass(frozen=True)
class Chunk:
    """Placements for one worker: numbers and values, the study they change, who judges, and what must be the same."""

    study: Study
    judge: Judge
    numbers: tuple[int, ...]
    values: tuple[dict[str, Any], ...]
    code: str = ""
    data: str = ""


def judge_chunk(chunk: Chunk) -> list[Row]:
    """Judge the placements of a chunk, one after the other.

    Parameters
    ----------
    chunk : Chunk
        From the process that holds the store.

    Returns
    -------
    list of Row
        One a placement; a placement that is no sound study has its problem as outcome.

    Raises
    ------
    OtherCodeError
        If this worker's program or tables are not those that the sweep rests on.
    """
    if chunk.code and (code_hash(), data_hash(chunk.study)) != (chunk.code, chunk.data):
        raise OtherCodeError
    rows = []
    for number, values in zip(chunk.numbers, chunk.values, strict=True):
        try:
            study = placed(chunk.study, values)
        except PullwardError as error:
            outcome = refused(str(error))
        else:
            with _turn:
                outcome = chunk.judge(study)
        rows.append(Row(number, values, outcome))
    return rows


def judge_chunk_on_one_thread(chunk: Chunk) -> list[Row]:
    """Judge a chunk with one kernel thread, the other processors being other workers'."""
    import numba

    numba.set_num_threads(1)
    return judge_chunk(chunk)


class Crew(Protocol):
    """Somebody who judges chunks."""

    restarts: bool

    @property
    def size(self) -> int:
        """How many chunks can be judged at once."""
        ...

    def submit(self, chunk: Chunk) -> "Future[list[Row]]":
        """Begin to judge a chunk."""
        ...

    def restart(self) -> None:
        """Replace workers that died."""
        ...

    def look_round(self) -> None:
        """Raise DataError when nobody is left who could judge."""
        ...

    def close(self) -> None:
        """Send everybody home, whatever they are doing."""
        ...


class OwnHands:
    """This process alone; its kernels use every processor."""

    size, restarts = 1, False

    def submit(self, chunk: Chunk) -> "Future[list[Row]]":
        """Judge the chunk now."""
        future: Future[list[Row]] = Future()
        try:
            future.set_result(judge_chunk(chunk))
        except Exception as error:
            future.set_exception(error)
        return future

    def restart(self) -> None:
        """Nobody dies here but the process itself."""

    def look_round(self) -> None:
        """There is always this process."""

    def close(self) -> None:
        """Nobody waits here."""


class Processes:
    """Processes of this machine."""

    restarts = True

    def __init__(self, size: int) -> None:
        self.size = size
        self._pool = self._start()

    def _start(self) -> ProcessPoolExecutor:
        spawn = multiprocessing.get_context("spawn")
        return ProcessPoolExecutor(self.size, mp_context=spawn, initializer=_settle_in)

    def submit(self, chunk: Chunk) -> "Future[list[Row]]":
        """Give a chunk to the next free process."""
        return self._pool.submit(judge_chunk_on_one_thread, chunk)

    def restart(self) -> None:
        """Start new processes in place of the broken pool."""
        self.close()
        self._pool = self._start()

    def look_round(self) -> None:
        """A process that died is noticed by its chunk."""

    def close(self) -> None:
        """End the processes at once; what they were judging is judged again some day."""
        processes = list((getattr(self._pool, "_processes", None) or {}).values())
        for process in processes:
            process.terminate()
        self._pool.shutdown(wait=True, cancel_futures=True)


def _settle_in() -> None:
    """Leave Ctrl-C to the process that holds the store, and go when it is gone."""
    signal.signal(signal.SIGINT, signal.SIG_IGN)
    parent = multiprocessing.parent_process()
    if parent is not None:
        threading.Thread(target=_leave_with, args=(parent,), daemon=True).start()


def _leave_with(parent: Any) -> None:
    parent.join()
    os._exit(1)


class Borrowed:
    """Workers behind any executor, such as a cluster's; they come and go without our help."""

    restarts = False

    def __init__(self, executor: Executor, count: Callable[[], int], close: Callable[[], object], *,
                 patience_s: float = 60.0) -> None:  # fmt: skip
        self._executor, self._count, self._close, self._patience_s = executor, count, close, patience_s
        self._seen = time.monotonic()

    @property
    def size(self) -> int:
        """How many workers there are just now, at least one."""
        return max(self._count(), 1)

    def submit(self, chunk: Chunk) -> "Future[list[Row]]":
        """Hand a chunk to the cluster."""
        return self._executor.submit(judge_chunk_on_one_thread, chunk)

    def restart(self) -> None:
        """The cluster does this itself."""

    def look_round(self) -> None:
        """Raise DataError when the last worker has been gone for too long."""
        now = time.monotonic()
        if self._count() > 0:
            self._seen = now
        elif now - self._seen > self._patience_s:
            msg = "the cluster has no workers any more; the placements kept so far are safe: start workers, go on with --resume"
            raise DataError(msg)

    def close(self) -> None:
        """Take back what was handed out."""
        self._close()


def processors() -> int:
    """Return how many processors this process may use."""
    return len(os.sched_getaffinity(0)) if hasattr(os, "sched_getaffinity") else os.cpu_count() or 1


def crew_of(workers: int | None) -> "OwnHands | Processes":
    """Return the crew for a number of processes; none given means one a processor, 0 this process alone."""
    wanted = processors() if workers is None else workers
    return OwnHands() if wanted <= 0 else Processes(wanted)


def chunk_of(study: Study, judge: Judge, numbers: Sequence[int], values_of: Callable[[int], dict[str, Any]], *,
             code: str = "", data: str = "") -> Chunk:  # fmt: skip
    """Return a chunk of placements."""
    asked = tuple(int(n) for n in numbers)
    return Chunk(study, judge, asked, tuple(values_of(n) for n in asked), code, data)
