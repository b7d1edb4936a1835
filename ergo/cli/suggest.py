"""`pullward suggest`: the smallest changes that meet every target, or an honest no."""

import argparse
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from rich.console import Console

    from ergo.explore.suggest import Proposal, Suggestion

WIDTH = 80


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser(
        "suggest", help="find the smallest changes that meet the targets",
        description="Only the keys of [targets.free] change, or those named by --free. The tool keeps its travel.",
    )  # fmt: skip
    parser.add_argument("study", metavar="STUDY", help="a study file, or the name of a shipped study")
    parser.add_argument("--free", metavar="KEY=LOW:HIGH", action="append", default=[],
                        help="a key that may change, in place of [targets.free]; repeat for more")  # fmt: skip
    parser.add_argument("--variant", metavar="NAME", help="start from this variant of the study")
    parser.add_argument("--operators", type=int, metavar="N", help="draw this many operators")
    parser.add_argument("--seed", type=int, metavar="K", help="draw them from this seed")
    parser.add_argument("--trials", type=int, metavar="T", help="about how many placements are tried (default 240)")
    parser.add_argument("--json", metavar="FILE", help="write the answer as JSON; - for standard output only")
    parser.add_argument("--strict", action="store_true", help="exit with 1 when no change is enough")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Look for changes; return the exit code."""
    from ergo.cli.progress import with_bar
    from ergo.cli.studies import chosen_study
    from ergo.cli.writing import write_json
    from ergo.errors import EXIT_DONE, EXIT_FALLS_SHORT
    from ergo.explore.suggest import TRIALS, suggest

    study = chosen_study(args.study, variant=args.variant, operators=args.operators, seed=args.seed)
    free = dict(bounds_of(text) for text in args.free)
    trials = _trials(args.trials, TRIALS)
    found = with_bar("looking for changes", lambda tell: suggest(study, free=free, trials=trials, tell=tell),
                     quiet=args.json == "-")  # fmt: skip
    if args.json:
        write_json(args.json, {"title": study.study.title, **found.to_dict()})
    if args.json != "-":
        show(study.study.title, found)
    enough = found.meets_already or bool(found.proposals)
    return EXIT_FALLS_SHORT if args.strict and not enough else EXIT_DONE


def _trials(asked: int | None, otherwise: int) -> int:
    from ergo.errors import Problem, StudyError

    if asked is not None and asked < 20:
        raise StudyError([Problem("--trials", "is too few to find anything", str(asked), "20 or more")])
    return asked or otherwise


def bounds_of(text: str) -> tuple[str, tuple[float, float]]:
    """Return the key and bounds that KEY=LOW:HIGH means.

    Raises
    ------
    StudyError
        If it is not that.
    """
    from ergo.errors import Problem, StudyError

    path, _, words = text.partition("=")
    low, _, high = words.partition(":")
    try:
        return path.strip(), (float(low), float(high))
    except ValueError as error:
        raise StudyError([Problem("--free", "is not KEY=LOW:HIGH", text, "such as lever.length_mm=160:320")]) from error


def show(title: str, found: "Suggestion") -> None:
    """Print the proposals, or what blocks, 80 columns wide."""
    from rich.console import Console

    console = Console(width=WIDTH, highlight=False, emoji=False, markup=False)
    console.print(title, style="bold")
    if found.meets_already:
        console.print("Meets every target as it stands: nothing has to change.")
    elif found.proposals:
        count = len(found.proposals)
        console.print(f"{count} way{'s' if count > 1 else ''} to meet every target, smallest change first"
                      f" ({found.trials} placements tried).")  # fmt: skip
        if count < 3:
            console.print("No further one was found that differs by 15 % of some key's bounds.")
        for n, proposal in enumerate(found.proposals):
            _proposal(console, f"Proposal {n + 1}", proposal)
    else:
        _no(console, found)
    console.print()
    console.print("A screening calculation from population data; not a risk assessment.")


def _proposal(console: "Console", name: str, proposal: "Proposal") -> None:
    console.print()
    console.print(f"{name}: {100 * proposal.cost:.0f} % of one key's bounds in all", style="bold")
    for path in proposal.changed:
        unit = f" {proposal.units[path]}" if proposal.units[path] else ""
        console.print(f"  {path:<32} {proposal.now[path]:g} -> {proposal.values[path]:g}{unit}")
    if not proposal.changed:
        console.print("  the study as it stands")
    console.print("  " + "".join(f"{head:>9}" for head in ("", "dir", "reach", "force", "post", "clear", "letgo", "served")))
    for word, row in (("now", proposal.before), ("then", proposal.after)):
        console.print(f"  {word:>9}" + "".join(f"{_number(row[r], 9)}" for r in _ratings()))
    for key, label, unit in (("largest_demand_n", "largest hand force", "N"), ("hand_travel_mm", "hand travel", "mm")):
        console.print(f"  {label}: {_number(proposal.before[key])} -> {_number(proposal.after[key])} {unit}")
    difference = proposal.served
    console.print(f"  serves {difference.points:+.0f} points on the same people, 95 % interval {difference.low:.0f} to"
                  f" {difference.high:.0f}")  # fmt: skip


def _ratings() -> tuple[str, ...]:
    from ergo.evaluation.results import RATING_NAMES

    return RATING_NAMES


def _number(value: Any, width: int = 0) -> str:
    return f"{'-':>{width}}" if value is None else f"{value:{width}.0f}"


def _no(console: "Console", found: "Suggestion") -> None:
    console.print(f"No: nothing inside the bounds was found that meets every target ({found.trials} placements tried).")
    if found.together:
        console.print("Each target can be met alone, but not all at once. Still missed at the nearest:")
    else:
        console.print("These targets are missed by every placement tried:")
    for name, best, target in found.blocked:
        words = "at" if found.together else "at best"
        console.print(f"  {name.replace('_', ' '):<12} {words} {best:.0f} where {target:.0f} is asked")
    if found.nearest is not None:
        _proposal(console, "The nearest miss", found.nearest)
    console.print()
    console.print("Wider bounds, another key, a lower load or an easier target would be the next to try.")
