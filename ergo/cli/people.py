"""`pullward people`: list the population tables, or print one table's percentiles by sex."""

import argparse
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from rich.console import Console

    from ergo.datasets import Library

WIDTH = 80
MARKS = ("p01", "p05", "p50", "p95", "p99")


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("people", help="list the population tables, or print one table's body sizes")
    parser.add_argument("table", metavar="TABLE", nargs="?", help="a population of the list, or a CSV file of your own")
    parser.add_argument("--json", metavar="FILE", help="write as JSON; - for standard output only")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Print the list or one table; return the exit code."""
    from ergo.cli.writing import write_json
    from ergo.datasets import library
    from ergo.errors import EXIT_DONE

    shipped = library()
    found = _listed(shipped) if args.table is None else _one(shipped, args.table)
    if args.json:
        write_json(args.json, found)
    if args.json != "-":
        from rich.console import Console

        console = Console(width=WIDTH, highlight=False, emoji=False, markup=False)
        if args.table is None:
            _show_list(console, found)
        else:
            _show_one(console, found)
    return EXIT_DONE


def _listed(shipped: "Library") -> dict[str, Any]:
    from ergo.people.dimensions import DIMENSIONS
    from ergo.people.own_table import COLUMNS
    from ergo.people.percentiles import tables

    return {"populations": tables(shipped), "own_table": {"columns": list(COLUMNS), "dimensions": list(DIMENSIONS)}}


def _one(shipped: "Library", name: str) -> dict[str, Any]:
    """Return the percentiles of a shipped population, or of a user's CSV file.

    Raises
    ------
    DataError
        If neither is there.
    """
    from pathlib import Path

    from ergo.errors import DataError
    from ergo.people.percentiles import percentiles
    from ergo.people.populations import is_own

    path = Path(name)
    if is_own(name) and not path.is_file():
        msg = f"there is no file {name}; without a file, name one of the tables that `pullward people` lists"
        raise DataError(msg)
    return percentiles(shipped, path if is_own(name) or path.is_file() else name)


def _show_list(console: "Console", found: dict[str, Any]) -> None:
    console.print("Population tables", style="bold")
    for row in found["populations"]:
        console.print()
        sample = ", ".join(part for part in (row["n"], f"status: {row['status']}") if part)
        console.print(row["population"], style="bold")
        _say(console, f"{row['title']} ({sample})")
        for caveat in row["caveats"]:
            _say(console, caveat, bullet="-")
    own = found["own_table"]
    console.print()
    console.print("A table of your own", style="bold")
    _say(console, f"A CSV file with the columns {', '.join(own['columns'])}, sex female or male, at least stature in mm "
                  "and body_mass in kg of both; p05, p50 and p95 may stand instead of mean and sd.")  # fmt: skip
    _say(console, f"Dimensions: {', '.join(own['dimensions'])}.")


def _show_one(console: "Console", found: dict[str, Any]) -> None:
    from ergo.people.dimensions import LINK_PARTS

    console.print(f"{found['population']}: {found['title']}", style="bold")
    console.print("Barefoot. Links are what the model makes of the dimensions.")
    links = [f"{link}_mm" for link in LINK_PARTS]
    for sex in ("women", "men"):
        measured = [name for name in found[sex] if name not in links]
        _show_rows(console, f"{sex.capitalize()}: dimensions", found, sex, measured)
        _show_rows(console, f"{sex.capitalize()}: links", found, sex, links)
    console.print()
    console.print("Caveats", style="bold")
    for caveat in found["caveats"]:
        _say(console, caveat, bullet="-")
    console.print()
    console.print("Statuses", style="bold")
    from ergo.sources import STATUS_MEANING

    for status, meaning in STATUS_MEANING.items():
        if status in found["statuses"].values():
            _say(console, f"{status}: {meaning}", bullet="-")


def _show_rows(console: "Console", title: str, found: dict[str, Any], sex: str, names: list[str]) -> None:
    console.print()
    console.print(f"{title:<34}" + "".join(f"{mark.replace('p0', 'p').upper():>7}" for mark in MARKS) + "  status",
                  style="bold")  # fmt: skip
    for name in names:
        words, _, unit = name.rpartition("_")
        cells = "".join(f"{found[sex][name][mark]:7.{1 if unit == 'kg' else 0}f}" for mark in MARKS)
        console.print(f"{words.replace('_', ' ') + ', ' + unit:<34}{cells}  {found['statuses'][name]}")


def _say(console: "Console", text: str, bullet: str = "") -> None:
    """Print a sentence wrapped to the width, indented under its heading."""
    import textwrap

    first = f"  {bullet} " if bullet else "  "
    console.print(textwrap.fill(text, WIDTH, initial_indent=first, subsequent_indent=" " * len(first)), soft_wrap=True)
