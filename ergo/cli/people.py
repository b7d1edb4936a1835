"""`pullward people`: the population tables, or one table's percentiles."""

import argparse
from typing import Any


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("people", help="list the populations, or show the percentiles of one")
    parser.add_argument("table", metavar="TABLE", nargs="?", help="a shipped population, or a CSV file of your own")
    parser.add_argument("--json", metavar="FILE", help="write as JSON; - for standard output only")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """List or show; return the exit code."""
    from ergo.cli.writing import write_json
    from ergo.datasets import library
    from ergo.errors import EXIT_DONE
    from ergo.people.percentiles import percentiles, tables

    shipped = library()
    content: dict[str, Any] = percentiles(shipped, args.table) if args.table else {"populations": tables(shipped)}
    if args.json:
        write_json(args.json, content)
    if args.json != "-":
        show_percentiles(content) if args.table else show_tables(content["populations"])
    return EXIT_DONE


def show_tables(rows: list[dict[str, str]]) -> None:
    """Print what populations there are."""
    from rich.console import Console

    console = Console(width=80, highlight=False, emoji=False, markup=False)
    for row in rows:
        console.print(f"{row['population']:<16} {row['title']}", style="bold")
        facts = ", ".join(t for t in (row["n"], row["year"], f"status {row['status']}") if t)
        console.print(f"{'':<16} {facts}")
        for caveat in row["caveats"].split("; "):
            console.print(f"{'':<16} - {caveat}", soft_wrap=True)


def show_percentiles(content: dict[str, Any]) -> None:
    """Print one population's percentiles by sex, 80 columns wide."""
    from rich.console import Console

    console = Console(width=80, highlight=False, emoji=False, markup=False)
    console.print(f"{content['population']}: {content['title']}", style="bold")
    for sex in ("women", "men"):
        console.print()
        console.print(f"{sex:<30}{'P1':>8}{'P5':>8}{'P50':>8}{'P95':>8}{'P99':>8} status", style="bold")
        for name, marks in content[sex].items():
            numbers = "".join(f"{marks[m]:8.0f}" for m in ("p01", "p05", "p50", "p95", "p99"))
            console.print(f"{name:<30}{numbers} {content['statuses'][name]}")
    console.print()
    console.print("Barefoot, lightly clothed. What the table does not cover:", style="bold")
    for caveat in content["caveats"]:
        console.print(f"  - {caveat}")
