"""`pullward compare`: variants and studies side by side on the same people."""

import argparse
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from ergo.explore.compare import Comparison


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("compare", help="variants and studies side by side on the same people")
    parser.add_argument("studies", metavar="STUDY", nargs="+", help="study files or shipped studies; one brings its variants")
    parser.add_argument("--operators", type=int, metavar="N", help="draw this many operators")
    parser.add_argument("--seed", type=int, metavar="K", help="draw them from this seed")
    parser.add_argument("--json", metavar="FILE", help="write as JSON; - for standard output only")
    parser.add_argument("--csv", metavar="FILE", help="write one row a placement as CSV")
    parser.add_argument("--parquet", metavar="FILE", help="write one row a placement as Parquet")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Judge and compare; return the exit code."""
    from ergo.cli.progress import with_bar
    from ergo.cli.studies import chosen_study, study_path
    from ergo.cli.writing import write_json
    from ergo.errors import EXIT_DONE, Problem, StudyError
    from ergo.explore.compare import compare, named

    studies = [(study_path(n).stem, chosen_study(n, operators=args.operators, seed=args.seed)) for n in args.studies]
    chosen = named(studies, with_variants=True)
    if len(chosen) < 2:
        raise StudyError([Problem("compare", "needs two placements", "one study without variants", "variants, or more studies")])
    found = with_bar("comparing", lambda tell: compare(chosen, tell=tell), quiet=args.json == "-")
    _tables(args, found)
    if args.json:
        write_json(args.json, found.to_dict())
    if args.json != "-":
        show(found)
    return EXIT_DONE


def _tables(args: argparse.Namespace, found: "Comparison") -> None:
    if not (args.csv or args.parquet):
        return
    import io

    import pandas as pd

    from ergo.cli.writing import write_whole

    frame = pd.DataFrame(found.rows())
    if args.csv:
        write_whole(args.csv, frame.to_csv(index=False).encode("utf-8"))
    if args.parquet:
        content = io.BytesIO()
        frame.to_parquet(content, index=False)
        write_whole(args.parquet, content.getvalue())


def show(found: "Comparison") -> None:
    """Print the comparison, 80 columns wide."""
    from rich.console import Console

    from ergo.evaluation.results import RATING_NAMES

    console = Console(width=80, highlight=False, emoji=False, markup=False)
    heads = ("dir", "reach", "force", "post", "clear", "letgo", "serve")
    console.print(f"{'placement':<30}" + "".join(f"{h:>6}" for h in heads) + f"{'N':>6}", style="bold")
    best = found.best()
    for row in found.rows():
        numbers = "".join(f"{row[r]:5.0f}{'*' if best[r] == row['name'] else ' '}" for r in RATING_NAMES)
        console.print(f"{row['name'][:29]:<30}{numbers}{_force(row['largest_demand_n']):>6}")
    console.print("ratings 0..100; * best beyond the noise of the draw; N: largest hand force needed")
    console.print()
    for sentence in (*found.sentences(), *found.notes):
        console.print(f"- {sentence}")
    console.print("- A screening calculation from population data; not a risk assessment.")


def _force(newtons: float | None) -> str:
    return "-" if newtons is None else f"{newtons:.0f}"
