"""Long work in the background: progress, results as they come, and a stop between two steps."""

import threading
from collections import OrderedDict
from collections.abc import Callable
from typing import Any

from ergo.board.store import new_key

JOBS_KEPT = 32
MOST_AT_ONCE = 4


class StoppedError(Exception):
    """The job was stopped by the hand that started it."""


class Job:
    """One piece of long work; only its owner may see or stop it."""

    def __init__(self, owner: str, kind: str) -> None:
        self.key, self.owner, self.kind = new_key(), owner, kind
        self.share, self.what = 0.0, "waiting"
        self.rows: list[dict[str, Any]] = []
        self.result: Any = None
        self.trouble = ""
        self.done = threading.Event()
        self._stop = threading.Event()

    @property
    def stopped(self) -> bool:
        """Whether the job was told to stop."""
        return self._stop.is_set()

    @property
    def what_done(self) -> str:
        """What to say when the job has come to its end."""
        return f"Done: {len(self.rows)} placements." if self.rows else "Done."

    def stop(self) -> None:
        """Tell the job to stop at its next step."""
        self._stop.set()

    def tell(self, share: float, what: str) -> None:
        """Take note of progress; raises `StoppedError` when the job was told to stop."""
        self.share, self.what = float(share), what
        if self._stop.is_set():
            raise StoppedError


    def tell_only(self, _share: float, _what: str) -> None:
        """Look for the stop without taking note of progress inside one step."""
        if self._stop.is_set():
            raise StoppedError


class Jobs:
    """Every job of this board, the newest kept; a job that nobody asks for any more is forgotten."""

    def __init__(self) -> None:
        self._jobs: OrderedDict[str, Job] = OrderedDict()
        self._lock = threading.Lock()

    def start(self, owner: str, kind: str, work: Callable[[Job], Any]) -> Job:
        """Start work in a thread; an older job of the same owner and kind is stopped."""
        job = Job(owner, kind)
        with self._lock:
            for old in self._jobs.values():
                if old.owner == owner and old.kind == kind:
                    old.stop()
            running = sum(not j.done.is_set() for j in self._jobs.values() if not j.stopped)
            if running >= MOST_AT_ONCE:
                job.trouble = "Too much is running on this board already; try again when it has finished."
                job.done.set()
            self._jobs[job.key] = job
            while len(self._jobs) > JOBS_KEPT:
                self._jobs.popitem(last=False)[1].stop()
        if not job.done.is_set():
            threading.Thread(target=_run, args=(job, work), daemon=True, name=f"job {kind}").start()
        return job

    def of(self, owner: str, key: str | None) -> Job | None:
        """Return a job of an owner, None when it is unknown or another's."""
        with self._lock:
            job = self._jobs.get(key or "")
        return job if job is not None and job.owner == owner else None


def _run(job: Job, work: Callable[[Job], Any]) -> None:
    try:
        job.result = work(job)
        job.share = 1.0
    except StoppedError:
        job.trouble = "Stopped."
    except Exception as error:
        job.trouble = f"{error}" or type(error).__name__
    finally:
        job.done.set()
