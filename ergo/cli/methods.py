"""`pullward methods`: list every method with its range, source, status and check."""

import argparse
from typing import Any

WIDTH = 80
INDENT = "  "
NOTHING = "none"


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("methods", help="list the methods with range, source, status and check")
    parser.add_argument("--json", metavar="FILE", help="write as JSON; - for standard output only")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Print the list; return the exit code."""
    from ergo.cli.writing import write_json
    from ergo.errors import EXIT_DONE

    found = listed()
    if args.json:
        write_json(args.json, found)
    if args.json != "-":
        _show(found)
    return EXIT_DONE


def listed() -> dict[str, Any]:
    """Return every method as a row of plain text, with its source as the bibliography has it.

    Raises
    ------
    DataError
        If the table is missing or names a source that the bibliography does not have.
    """
    from ergo.datasets import library
    from ergo.sources import STATUS_MEANING, bibliography, cite

    table = library().table("methods")
    rows = []
    for row in table.rows:
        cite(row["source"])
        rows.append({**row, "source_title": bibliography()[row["source"]].title})
    return {"methods": rows, "statuses": dict(STATUS_MEANING), "caveats": list(table.caveats)}


def _show(found: dict[str, Any]) -> None:
    """Print the methods room by room, 80 columns wide."""
    from rich.console import Console

    console = Console(width=WIDTH, highlight=False, emoji=False, markup=False)
    rows = found["methods"]
    for room in dict.fromkeys(row["room"] for row in rows):
        console.print(room, style="bold")
        for row in rows:
            if row["room"] == room:
                console.print(_block(row), soft_wrap=True)
        console.print()
    unchecked = sum(row["published_check"] == NOTHING for row in rows)
    console.print(_filled(f"{len(rows)} methods, {len(rows) - unchecked} of them with a check.", ""), soft_wrap=True)
    for status, meaning in found["statuses"].items():
        if any(row["status"] == status for row in rows):
            console.print(_filled(f"{status}: {meaning}", INDENT), soft_wrap=True)


def _block(row: dict[str, str]) -> str:
    source = f"{row['source']}, {row['locator']}" if row["locator"] else row["source"]
    lines = (
        ("range", row["range"]),
        ("source", source),
        ("status", row["status"]),
        ("check", row["published_check"]),
    )
    head = _filled(f"{row['method']} ({row['file']})", INDENT)
    return "\n".join([head, *(_filled(f"{name:<7} {text}", INDENT * 2) for name, text in lines)])


def _filled(text: str, indent: str) -> str:
    import textwrap

    return textwrap.fill(text, WIDTH, initial_indent=indent, subsequent_indent=indent + INDENT, break_on_hyphens=False)
