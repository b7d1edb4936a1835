"""A bar on anything that takes over a second."""

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ergo.evaluation.results import Results
    from ergo.study.model import Study


def judged(study: "Study", *, quiet: bool = False, flips: bool = False) -> "Results":
    """Evaluate a study, with a bar on the terminal's error channel unless `quiet` or piped."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    from ergo.evaluation.run import evaluate

    console = Console(stderr=True)
    if quiet or not console.is_terminal:
        return evaluate(study, with_flips=flips)
    columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
    with Progress(*columns, console=console, transient=True) as bar:
        task = bar.add_task("judging", total=1.0)

        def tell(share: float, what: str) -> None:
            bar.update(task, completed=share, description=what)

        return evaluate(study, tell=tell, with_flips=flips)
