"""A bar on anything that takes over a second."""

from collections.abc import Callable
from typing import TYPE_CHECKING, TypeVar

if TYPE_CHECKING:
    from ergo.evaluation.results import Results
    from ergo.study.model import Study

Answer = TypeVar("Answer")
Tell = Callable[[float, str], None]


def _silent(share: float, what: str) -> None:
    """Tell nobody."""


def with_bar(title: str, work: Callable[[Tell], Answer], *, quiet: bool = False) -> Answer:
    """Do `work` with a bar on the terminal's error channel, unless `quiet` or piped."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    console = Console(stderr=True)
    if quiet or not console.is_terminal:
        return work(_silent)
    columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
    with Progress(*columns, console=console, transient=True) as bar:
        task = bar.add_task(title, total=1.0)
        return work(lambda share, what: bar.update(task, completed=share, description=what))


def judged(study: "Study", *, quiet: bool = False, flips: bool = False) -> "Results":
    """Evaluate a study behind a bar."""
    from ergo.evaluation.run import evaluate

    return with_bar("judging", lambda tell: evaluate(study, tell=tell, with_flips=flips), quiet=quiet)
