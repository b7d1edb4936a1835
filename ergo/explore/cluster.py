"""A company's Dask cluster as the crew of a sweep; the scheduler is theirs, the store stays here."""

import contextlib
import itertools
import logging
import socket
from collections.abc import Callable
from concurrent.futures import BrokenExecutor, CancelledError, Executor, Future
from typing import Any
from urllib.parse import urlsplit

from ergo.errors import DataError, PullwardError
from ergo.explore.workers import Borrowed, Chunk

KNOCK_S, PATIENCE_S = 4.0, 10.0
SCHEMES = ("tcp", "tls")
RETRIES = 3
# A Dask scheduler speaks first: eight bytes say how long its greeting is, some hundred bytes.
LONGEST_GREETING = 1 << 20
GONE = "the cluster's scheduler went away; the placements kept so far are safe: start it, go on with --resume"
OTHER = "what listens there is something else"


def crew_at(address: str) -> Borrowed:
    """Return the workers behind a running Dask scheduler.

    Parameters
    ----------
    address : str
        `tcp://host:port`, as the scheduler prints it. Workers need the same Pullward; start them with one thread each.

    Raises
    ------
    DataError
        If `distributed` is not installed, nobody answers at the address, or no worker has come.
    PullwardError
        If that is no address.
    """
    try:
        from distributed import Client
    except ImportError as error:
        msg = "a cluster needs the package distributed: install pullward[cluster]"
        raise DataError(msg) from error
    _knock(address)
    _quieten()
    try:
        client = Client(address, timeout=f"{PATIENCE_S:g}s", set_as_default=False)
    except (OSError, TimeoutError, ValueError) as error:
        raise DataError(_nobody(address, OTHER)) from error
    try:
        client.wait_for_workers(1, timeout=PATIENCE_S)
    except TimeoutError as error:
        client.close()
        msg = f"{address}: the scheduler has no worker; start some, see DEVELOPERS.md"
        raise DataError(msg) from error
    return Borrowed(_Handing(client), lambda: _count(client), client.close)


def _knock(address: str) -> None:
    """Raise where nobody listens: a client of Dask would try for long, and leave threads behind."""
    parts = urlsplit(address)
    try:
        port = parts.port
    except ValueError:
        port = None
    if parts.scheme not in SCHEMES or not parts.hostname or port is None:
        msg = f"{address}: is no address of a scheduler; write tcp://host:port"
        raise PullwardError(msg)
    try:
        with socket.create_connection((parts.hostname, port), timeout=KNOCK_S) as line:
            greeting = line.recv(8, socket.MSG_WAITALL) if parts.scheme == "tcp" else b""
    except OSError as error:
        raise DataError(_nobody(address, error.strerror or str(error))) from error
    if parts.scheme == "tcp" and not 0 < int.from_bytes(greeting, "little") < LONGEST_GREETING:
        raise DataError(_nobody(address, OTHER))


def _nobody(address: str, why: str) -> str:
    return f"{address}: no Dask scheduler answers there ({why}); start one, or leave --scheduler out"


def _quieten() -> None:
    """Keep Dask's log off the terminal: what matters of it is told in a sentence."""
    for name in list(logging.root.manager.loggerDict):
        if name.partition(".")[0] == "distributed":
            logging.getLogger(name).setLevel(logging.CRITICAL)


def _count(client: Any) -> int:
    """How many workers the scheduler has; none when it is gone itself."""
    with contextlib.suppress(OSError, TimeoutError, RuntimeError, KeyError):
        return len(client.scheduler_info(n_workers=-1)["workers"])
    return 0


class _Handing(Executor):
    """Hands each chunk to the cluster once; a chunk whose worker is lost is judged again by another.

    Dask runs a task again only when its result was lost before it came back here, and answers each task once: so the
    store gets every placement exactly once.
    """

    def __init__(self, client: Any) -> None:
        self._client = client
        self._numbers = itertools.count()

    def submit(self, fn: Callable[..., Any], /, *args: Any, **_: Any) -> "Future[Any]":
        """Submit one chunk."""
        chunk: Chunk = args[0]
        # The client's own name keeps two sweeps on one scheduler apart.
        key = f"placements-{self._client.id}-{next(self._numbers)}-from-{chunk.numbers[0]}"
        answer: Future[Any] = Future()
        task = self._client.submit(fn, chunk, key=key, pure=False, retries=RETRIES)
        task.add_done_callback(lambda done: _pass_on(done, answer))
        return answer


def _pass_on(done: Any, answer: "Future[Any]") -> None:
    import asyncio

    from distributed.scheduler import KilledWorker

    try:
        answer.set_result(done.result())
    except KilledWorker:
        answer.set_exception(BrokenExecutor("the cluster lost the chunk"))
    except (CancelledError, asyncio.CancelledError):
        answer.set_exception(DataError(GONE))
    except Exception as error:
        answer.set_exception(error)
