"""`pullward sweep`: many placements of one study, kept in a file that survives any interruption."""

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from rich.console import Console

    from ergo.explore.axes import Placements
    from ergo.explore.store import Head
    from ergo.explore.summary import Summary
    from ergo.study.model import Study

WIDTH = 80
SHOWN_ON_FRONT = 10


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser(
        "sweep", help="try many placements",
        description="Judge many placements of a study on the same people. Ctrl-C stops; --resume goes on.",
    )  # fmt: skip
    parser.add_argument("study", metavar="STUDY", help="a study file, or the name of a shipped study")
    parser.add_argument("--vary", metavar="KEY=VALUES", action="append", default=[],
                        help="lever.length_mm=120:300:10, linkage.branch=open,crossed, lever.pivot_mm[2]=900,950;"
                        " repeat for more axes")  # fmt: skip
    parser.add_argument("--sobol", type=int, default=0, metavar="N",
                        help="spread N placements over the axes (ranges low:high) instead of a grid")  # fmt: skip
    parser.add_argument("--store", metavar="FILE", required=True, help="the sweep's file (SQLite)")
    parser.add_argument("--resume", action="store_true", help="go on with a file that is there")
    parser.add_argument("--variant", metavar="NAME", help="start from this variant of the study")
    parser.add_argument("--operators", type=int, metavar="N", help="draw this many operators")
    parser.add_argument("--positions", type=int, metavar="P", help="judge this many stroke positions")
    parser.add_argument("--seed", type=int, metavar="K", help="draw them from this seed")
    parser.add_argument("--workers", type=int, metavar="W", help="processes; one a processor if not given")
    parser.add_argument("--scheduler", metavar="ADDRESS", help="judge on a Dask cluster, tcp://host:port")
    parser.add_argument("--csv", metavar="FILE", help="write all placements as CSV")
    parser.add_argument("--parquet", metavar="FILE", help="write all placements as Parquet")
    parser.add_argument("--json", metavar="FILE", help="write the summary as JSON; - for standard output only")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Judge what is missing, then say what the sweep says; return the exit code."""
    from ergo.cli.studies import chosen_study
    from ergo.cli.writing import write_json
    from ergo.errors import EXIT_DONE
    from ergo.explore.axes import placements_of
    from ergo.explore.reading import read_store
    from ergo.explore.summary import summarise

    study = chosen_study(args.study, variant=args.variant, operators=args.operators, seed=args.seed)
    if args.positions is not None:
        study = study.with_values({"study.positions": args.positions})
    placements = placements_of(study, args.vary, args.sobol)
    code = _judge(args, study, placements)
    if code != EXIT_DONE:
        return code
    head, frame = read_store(Path(args.store))
    _write_tables(args, frame)
    summary = summarise(frame, head.paths, head.count)
    if args.json:
        write_json(args.json, {"title": head.title, "placements": head.placements, **summary.to_dict()})
    if args.json != "-":
        show(head, summary)
    return EXIT_DONE


def _judge(args: argparse.Namespace, study: "Study", placements: "Placements") -> int:
    import sys

    from ergo.cli.main import INTERRUPTED
    from ergo.errors import EXIT_DONE
    from ergo.explore.sweep import sweep

    crew = None
    if args.scheduler:
        from ergo.explore.cluster import crew_at

        crew = crew_at(args.scheduler)
    bar = _Bar(quiet=args.json == "-")
    try:
        with bar:
            sweep(study, placements, Path(args.store), resume=args.resume, workers=args.workers, crew=crew, tell=bar.tell)
    except KeyboardInterrupt:
        print(f"Stopped: {bar.kept} of {placements.count} placements are kept in {args.store};"  # noqa: T201
              " the same command with --resume goes on.", file=sys.stderr)  # fmt: skip
        return INTERRUPTED
    finally:
        if crew is not None:
            crew.close()
    return EXIT_DONE


class _Bar:
    """A bar on the terminal's error channel: placements kept, rate, time left."""

    def __init__(self, *, quiet: bool) -> None:
        from rich.console import Console
        from rich.progress import BarColumn, Progress, TextColumn

        console = Console(stderr=True)
        columns = (TextColumn("sweeping"), BarColumn(bar_width=24), TextColumn("{task.description}"))
        self._bar = Progress(*columns, console=console, transient=True, disable=quiet or not console.is_terminal)
        self._task = self._bar.add_task("starting workers", total=None)
        self.kept = 0

    def __enter__(self) -> "_Bar":
        self._bar.start()
        return self

    def __exit__(self, *_: object) -> None:
        self._bar.stop()

    def tell(self, progress: Any) -> None:
        """Show how far it is."""
        self.kept = progress.kept
        words = f"{progress.kept} of {progress.count}, {rate_words(progress.rate)}, {time_words(progress.left_s)} left"
        self._bar.update(self._task, completed=progress.kept, total=progress.count, description=words)


def rate_words(rate: float) -> str:
    """Return placements a second in words, a minute where they are slow."""
    return f"{rate:.1f}/s" if rate >= 1.0 else f"{60.0 * rate:.1f}/min"


def time_words(seconds: float) -> str:
    """Return a time in words."""
    if seconds != seconds or seconds == float("inf"):
        return "unknown time"
    if seconds < 100.0:
        return f"{seconds:.0f} s"
    if seconds < 6000.0:
        return f"{seconds / 60.0:.0f} min"
    return f"{seconds / 3600.0:.1f} h"


def _write_tables(args: argparse.Namespace, frame: Any) -> None:
    from ergo.cli.writing import write_whole
    from ergo.explore.reading import table_bytes

    for kind in ("csv", "parquet"):
        if getattr(args, kind):
            write_whole(getattr(args, kind), table_bytes(frame, kind))


def show(head: "Head", summary: "Summary") -> None:
    """Print best placements, the Pareto front and the sensitivity of each axis, 80 columns wide."""
    from rich.console import Console

    console = Console(width=WIDTH, highlight=False, emoji=False, markup=False)
    console.print(head.title, style="bold")
    refused = f"; {summary.refused} are no sound study" if summary.refused else ""
    console.print(f"{summary.judged} of {summary.count} placements judged, {summary.meeting} meet every target{refused}.")
    if not summary.judged:
        return
    for n, path in enumerate(head.paths):
        console.print(f"  {_letter(n)} = {path}")
    _table(console, "Best: fewest ratings missed, then most served, then least force", head, summary.best)
    _table(console, "None beats these in served share, hand travel and tool movement at once", head,
           summary.front.head(SHOWN_ON_FRONT))  # fmt: skip
    if len(summary.front) > SHOWN_ON_FRONT:
        console.print(f"and {len(summary.front) - SHOWN_ON_FRONT} more: --csv or --parquet hold them all")
    _section(console, "What matters for the served share, all else running through its values")
    for found in summary.sensitivity:
        console.print(f"{_short(found.path):<26} swings it by {found.swing:3.0f} points,{100 * found.variance_share:4.0f} %"
                      f" of variance; most at {_cell(found.best)}")  # fmt: skip
    _section(console, "Read with care")
    console.print("served: share served, %; travel: of the hand, mm; tool: its movement a mm of the\n"
                  "hand; force: largest at the hand, N. Served shares that are close may differ by\n"
                  "noise alone: compare says whether they do. A screening calculation from\n"
                  "population data; not a risk assessment.")  # fmt: skip


def _section(console: "Console", title: str) -> None:
    console.print()
    console.print(title, style="bold")


def _table(console: "Console", title: str, head: "Head", rows: Any) -> None:
    _section(console, title)
    room = min(max(32 // max(len(head.paths), 1), 6), 12)
    left = "".join(f"{_letter(n):>{room}}" for n, _ in enumerate(head.paths))
    console.print(f"{left}  served travel   tool  force  misses")
    for row in rows.to_dict("records"):
        axes = "".join(f"{_cell(row[p])[: room - 1]:>{room}}" for p in head.paths)
        numbers = f"{_figure(row['served'], 8, 1)}{_figure(row['hand_travel_mm'], 7, 0)}"
        numbers += f"{_figure(row['tool_mm_per_hand_mm'], 7, 3)}{_figure(row['largest_demand_n'], 7, 0)}"
        missed = "" if row["missed"] != row["missed"] else str(row["missed"])
        console.print(f"{axes}{numbers}  {missed}"[:WIDTH], soft_wrap=True)


def _figure(value: float, width: int, digits: int) -> str:
    return f"{value:{width}.{digits}f}" if value == value else f"{'-':>{width}}"


def _short(path: str) -> str:
    return path if len(path) <= 26 else f"...{path[-23:]}"


def _letter(n: int) -> str:
    return chr(ord("a") + n) if n < 26 else f"a{n}"


def _cell(value: Any) -> str:
    return f"{value:g}" if isinstance(value, float) else str(value)
