"""`pullward check`: judge one study and say why."""

import argparse
from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from rich.console import Console

    from ergo.evaluation.results import Results

WIDTH = 80


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("check", help="judge a study: who reaches, which way, how hard, for whom, why")
    parser.add_argument("study", metavar="STUDY", help="a study file, or the name of a shipped study")
    parser.add_argument("--variant", metavar="NAME", help="judge this variant of the study")
    parser.add_argument("--operators", type=int, metavar="N", help="draw this many operators")
    parser.add_argument("--seed", type=int, metavar="K", help="draw them from this seed")
    parser.add_argument("--json", metavar="FILE", help="write the results as JSON; - for standard output only")
    parser.add_argument("--flips", action="store_true",
                        help="also find the recalled or derived numbers that would flip a target (takes minutes)")  # fmt: skip
    parser.add_argument("--strict", action="store_true", help="exit with 1 when the study falls short")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Judge the study; return the exit code."""
    from ergo.cli.progress import judged
    from ergo.cli.studies import chosen_study
    from ergo.errors import EXIT_DONE, EXIT_FALLS_SHORT

    study = chosen_study(args.study, variant=args.variant, operators=args.operators, seed=args.seed)
    results = judged(study, quiet=args.json == "-", flips=args.flips)
    if args.json:
        from ergo.cli.writing import write_json

        write_json(args.json, results.to_dict())
    if args.json != "-":
        show(results)
    return EXIT_FALLS_SHORT if args.strict and not results.meets else EXIT_DONE


def show(results: "Results") -> None:
    """Print the verdict, ratings, stroke, who is left out, let-go, cautions and sources, 80 columns wide."""
    from rich.console import Console

    from ergo.pictures import terminal

    console = Console(width=WIDTH, highlight=False, emoji=False, markup=False)
    name = results.study["study"]["title"] + (f", variant {results.variant}" if results.variant else "")
    console.print(name, style="bold")
    console.print(results.reasons[0])
    console.print()
    for line, met in terminal.rating_lines(results):
        console.print(line, style=None if met else "bold", soft_wrap=True)
    _section(console, "The stroke", terminal.stroke_chart(results), [terminal.direction_line(results)])
    console.print("         < pulled toward the operator   > pushed away   | neither")
    _section(console, "Who is left out, where they are lost first", terminal.left_out_lines(results))
    _section(console, "When the load lets go", terminal.let_go_lines(results))
    _section(console, "What decides it, and what is not known", terminal.wrapped(results.reasons[1:]))
    flips = results.details.get("flips")
    if flips is not None:
        title = "Numbers that would flip it, each alone at an end of its range"
        _section(console, title, terminal.wrapped(flips["sentences"]))
    _section(console, "Cautions", terminal.wrapped(results.cautions))
    _section(console, "Numbers that decided, with source and status", terminal.source_lines(results))


def _section(console: "Console", title: str, *blocks: list[str]) -> None:
    if not any(blocks):
        return
    console.print()
    console.print(title, style="bold")
    for block in blocks:
        for line in block:
            console.print(line, soft_wrap=True)
