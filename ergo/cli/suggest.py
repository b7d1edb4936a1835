"""`pullward suggest`: the smallest changes that meet every target, or an honest no."""

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from rich.console import Console

    from ergo.explore.suggest import Proposal, Suggestion
    from ergo.study.model import Study

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
    parser.add_argument("--write", metavar="DIR", help="write each proposal as a study file into this folder")
    parser.add_argument("--strict", action="store_true", help="exit with 1 when no change is enough")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Look for changes; return the exit code."""
    from ergo.cli.progress import with_bar
    from ergo.cli.studies import chosen_study, study_path
    from ergo.cli.writing import write_json
    from ergo.errors import EXIT_DONE, EXIT_FALLS_SHORT
    from ergo.explore.suggest import TRIALS, suggest

    study = chosen_study(args.study, variant=args.variant, operators=args.operators, seed=args.seed)
    free = dict(bounds_of(text) for text in args.free)
    trials = _trials(args.trials, TRIALS)
    files = files_for(args.write, study, study_path(args.study).stem) if args.write else []
    found = with_bar("looking for changes", lambda tell: suggest(study, free=free, trials=trials, tell=tell),
                     quiet=args.json == "-")  # fmt: skip
    written = write_proposals(study, found, files) if files else []
    if args.json:
        write_json(args.json, {"title": study.study.title, **found.to_dict()})
    if args.json != "-":
        show(study.study.title, found)
        for path in written:
            print(f"written: {path}")  # noqa: T201
    enough = found.meets_already or bool(found.proposals)
    return EXIT_FALLS_SHORT if args.strict and not enough else EXIT_DONE


def _trials(asked: int | None, otherwise: int) -> int:
    from ergo.errors import Problem, StudyError

    if asked is not None and asked < 20:
        raise StudyError([Problem("--trials", "is too few to find anything", str(asked), "20 or more")])
    return asked or otherwise


def files_for(folder: str, study: "Study", stem: str) -> list[Path]:
    """Return the files that three proposals would be written to, refused before a long search rather than after it.

    Raises
    ------
    StudyError
        For a folder that is not there, a file that is there already, or a study whose own files would be out of reach.
    """
    from ergo.errors import Problem, StudyError
    from ergo.explore.suggest import PROPOSALS

    place = Path(folder)
    if not place.is_dir():
        raise StudyError([Problem("--write", "is no folder", folder, "a folder that is there")])
    if _reads_files(study) and place.resolve() != Path(study.folder).resolve():
        raise StudyError([Problem("--write", "would part the proposals from the CSV files that the study reads", folder,
                                  "the study's own folder")])  # fmt: skip
    files = [place / f"{stem}_proposal_{n + 1}.toml" for n in range(PROPOSALS)]
    there = [str(path) for path in files if path.exists()]
    if there:
        raise StudyError([Problem("--write", "would overwrite; nothing was tried", ", ".join(there), "another folder")])
    return files


def _reads_files(study: "Study") -> bool:
    parts = (study.linkage, study.load, study.path)
    return any(getattr(part, "file", None) for part in parts) or bool(study.operators.population_checksum)


def write_proposals(study: "Study", found: "Suggestion", files: list[Path]) -> list[Path]:
    """Write each proposal as a study file of its own, whole or not at all; return the files written."""
    from ergo.cli.writing import write_whole
    from ergo.explore.keys import placed

    written = []
    for n, (path, proposal) in enumerate(zip(files, found.proposals, strict=False)):
        title = f"{study.study.title}, proposal {n + 1}"
        write_whole(path, placed(study, {**proposal.values, "study.title": title}).as_toml().encode("utf-8"))
        written.append(path)
    return written


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
        change = f"{proposal.now[path]:g} -> {proposal.values[path]:g}{unit}"
        console.print(f"  {path:<32} {change:<26} {100 * proposal.shares[path]:4.0f} %")
    if not proposal.changed:
        console.print("  the study as it stands")
    console.print(f"  {'':<10}{'now (95 %)':>14}    {'then (95 %)':>14}")
    for name in _ratings():
        line, met = _rating(name, proposal)
        console.print(line, style=None if met else "bold", soft_wrap=True)
    for key, label, unit in (("largest_demand_n", "largest hand force", "N"), ("hand_travel_mm", "hand travel", "mm")):
        console.print(f"  {label}: {_number(proposal.before[key])} -> {_number(proposal.after[key])} {unit}")
    difference = proposal.served
    console.print(f"  serves {difference.points:+.0f} points on the same people, 95 % interval {difference.low:.0f} to"
                  f" {difference.high:.0f}")  # fmt: skip


def _rating(name: str, proposal: "Proposal") -> tuple[str, bool]:
    """Return one rating before and after as a line with the bar of what it becomes, and whether it meets its target."""
    from ergo.pictures.terminal import LABELS, bar

    before, after, target = proposal.before, proposal.after, proposal.targets[name]
    value, low, high = (float("nan") if after[f"{name}{end}"] is None else after[f"{name}{end}"] for end in ("", "_low", "_high"))
    met = name.replace("_", "-") not in after["missed"].split(", ")
    wanted = float("nan") if target is None else target
    words = f"target {target:.0f}" if target is not None else "no target"
    line = f"{' ' if met else '■'} {LABELS.get(name, name):<10}{_interval(before, name)} -> {_interval(after, name)}"
    return f"{line}  {bar(value, low, high, wanted)}  {words}", met


def _interval(found: Any, name: str) -> str:
    low, high = _number(found[f"{name}_low"]), _number(found[f"{name}_high"])
    return f"{_number(found[name], 4)} {f'({low}-{high})':<9}"


def _ratings() -> tuple[str, ...]:
    from ergo.evaluation.results import RATING_NAMES

    return RATING_NAMES


def _number(value: Any, width: int = 0) -> str:
    return f"{'-':>{width}}" if value is None else f"{value:{width}.0f}"


def _no(console: "Console", found: "Suggestion") -> None:
    console.print(f"No: nothing inside the bounds was found that meets every target ({found.trials} placements tried).")
    if not found.blocked:
        console.print("None of them is a study that can be judged: see the bounds.")
    elif found.together:
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
