"""`pullward report`: write the reasoning down, for the machine's design file."""

import argparse
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from pathlib import Path
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ergo.evaluation.results import Results
    from ergo.study.model import Study

BASE = "base"


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("report", help="write the reasoning down for the design file")
    parser.add_argument("study", metavar="STUDY", help="a study file, or the name of a shipped study")
    parser.add_argument("--variant", metavar="NAME", help="report on this variant of the study")
    parser.add_argument("--against", metavar="NAME", nargs="+", default=[],
                        help=f"compare with these variants; {BASE} is the study without a variant")  # fmt: skip
    parser.add_argument("--operators", type=int, metavar="N", help="draw this many operators")
    parser.add_argument("--seed", type=int, metavar="K", help="draw them from this seed")
    parser.add_argument("--date", metavar="YYYY-MM-DD", help="date to print beside the author's name")
    parser.add_argument("-o", "--output", metavar="FILE", required=True, help="a .pdf, .html or .md file")
    parser.add_argument("--bundle", metavar="DIR", help="also write everything needed to check it; .zip for one file")
    parser.add_argument("--cad", metavar="DIR", help="also write DXF, STL and GLB files")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Judge the study and write the report; return the exit code."""
    from ergo.cli.studies import chosen_study
    from ergo.cli.writing import write_whole
    from ergo.errors import EXIT_DONE
    from ergo.report.bundle import CHECKSUMS, Order, bundle, single, zipped
    from ergo.report.files import write_folder

    date = _date(args.date)
    suffix = _suffix(args.output)
    study = chosen_study(args.study, operators=args.operators, seed=args.seed)
    order = Order(args.variant or "", tuple("" if n == BASE else n for n in args.against), date)
    with progress("report", 2 + len(order.against)) as step:
        results = _judged(study, order.variant, step)
        against = [_judged(study, name, step) for name in order.against]
        step("writing")
        written = single(results, suffix, against, date)
        files = bundle(results, study, order, against) if args.bundle else {}
        if args.cad:
            from ergo.report.cad import cad_files

            write_folder(args.cad, cad_files(results), "units.txt")
    if args.bundle and Path(args.bundle).suffix == ".zip":
        write_whole(args.bundle, zipped(files))
    elif args.bundle:
        write_folder(args.bundle, files, CHECKSUMS)
    write_whole(args.output, written)
    _say(f"{args.output}: {results.reasons[0]}")
    return EXIT_DONE


def _judged(study: "Study", variant: str, step: Callable[[str], None]) -> "Results":
    from ergo.errors import Problem, StudyError
    from ergo.evaluation.run import evaluate

    step(f"judging {variant or 'the study'}")
    names = [v.name for v in study.variants]
    if variant and variant not in names:
        allowed = ", ".join([*names, BASE])
        raise StudyError([Problem(f"{study.name}: variants", "no variant of that name", variant, allowed)])
    return evaluate(study.variant(variant) if variant else study)


def _date(text: str | None) -> tuple[int, int, int] | None:
    import datetime

    from ergo.errors import Problem, StudyError

    if text is None:
        return None
    try:
        made = datetime.date.fromisoformat(text)
    except ValueError:
        raise StudyError([Problem("--date", "is not a date", text, "YYYY-MM-DD")]) from None
    return made.year, made.month, made.day


def _suffix(output: str) -> str:
    from ergo.errors import Problem, StudyError

    suffix = Path(output).suffix.lower()
    if suffix not in (".pdf", ".html", ".htm", ".md"):
        raise StudyError([Problem("--output", "is not a kind of report", output, ".pdf, .html or .md")])
    return suffix


@contextmanager
def progress(name: str, steps: int) -> Iterator[Callable[[str], None]]:
    """Show a bar on the terminal's error channel, nothing where it is piped; yields what tells the next step."""
    from rich.console import Console
    from rich.progress import BarColumn, Progress, TextColumn, TimeElapsedColumn

    console = Console(stderr=True)
    if not console.is_terminal:
        yield lambda what: None
        return
    columns = (TextColumn("{task.description}"), BarColumn(), TimeElapsedColumn())
    with Progress(*columns, console=console, transient=True) as bar:
        task = bar.add_task(name, total=steps, completed=-1)

        def step(what: str) -> None:
            bar.update(task, advance=1, description=what)

        yield step


def _say(text: str) -> None:
    from rich.console import Console

    Console(highlight=False, markup=False, emoji=False, soft_wrap=True).print(text)
