"""A company's Dask cluster as the crew of a sweep; the scheduler is theirs, the store stays here."""

import logging
from collections.abc import Callable
from concurrent.futures import BrokenExecutor, Executor, Future
from typing import Any

from ergo.errors import DataError
from ergo.explore.workers import Borrowed, Chunk

PATIENCE_S = 20.0
RETRIES = 3


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
    """
    try:
        from distributed import Client
    except ImportError as error:
        msg = "a cluster needs the package distributed: install pullward[cluster]"
        raise DataError(msg) from error
    logging.getLogger("distributed").setLevel(logging.CRITICAL)
    try:
        client = Client(address, timeout=f"{PATIENCE_S:g}s", set_as_default=False)
    except (OSError, TimeoutError, ValueError) as error:
        msg = f"{address}: no Dask scheduler answers there ({type(error).__name__}); start one, or leave --scheduler out"
        raise DataError(msg) from error
    try:
        client.wait_for_workers(1, timeout=PATIENCE_S)
    except TimeoutError as error:
        client.close()
        msg = f"{address}: the scheduler has no worker; start some, see DEVELOPERS.md"
        raise DataError(msg) from error
    return Borrowed(_Handing(client), lambda: len(client.scheduler_info(n_workers=-1)["workers"]), client.close)


class _Handing(Executor):
    """Hands each chunk to the cluster once; a chunk whose worker is lost is judged again by another.

    Dask runs a task again only when its result was lost before it came back here, and answers each task once: so the
    store gets every placement exactly once.
    """

    def __init__(self, client: Any) -> None:
        self._client = client

    def submit(self, fn: Callable[..., Any], /, *args: Any, **_: Any) -> "Future[Any]":
        """Submit one chunk."""
        chunk: Chunk = args[0]
        key = f"placements-{chunk.numbers[0]}-{len(chunk.numbers)}-{id(chunk):x}"
        answer: Future[Any] = Future()
        task = self._client.submit(fn, chunk, key=key, pure=False, retries=RETRIES)
        task.add_done_callback(lambda done: _pass_on(done, answer))
        return answer


def _pass_on(done: Any, answer: "Future[Any]") -> None:
    from distributed.scheduler import KilledWorker

    try:
        answer.set_result(done.result())
    except KilledWorker:
        answer.set_exception(BrokenExecutor("the cluster lost the chunk"))
    except Exception as error:
        answer.set_exception(error)
