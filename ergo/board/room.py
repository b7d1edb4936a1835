"""What every callback works with: the store, the engine's worker, the folders, and what was put in from outside."""

from collections.abc import Callable
from dataclasses import dataclass, field
from pathlib import Path

from ergo.board.jobs import Jobs
from ergo.board.judge import Judge
from ergo.board.store import Store


@dataclass(frozen=True)
class Room:
    """The board's inside; `folder` is the only place of the file system that a browser may name files in."""

    store: Store
    judge: Judge
    folder: Path | None
    make_report: Callable[..., bytes] | None
    first: Path | None = None
    jobs: Jobs = field(default_factory=Jobs)
    greeted: set[str] = field(default_factory=set)
