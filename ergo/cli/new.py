"""`pullward new`: write a commented study file."""

import argparse


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("new", help="write a commented study file with every key")
    parser.add_argument("file", metavar="FILE", help="the file to write; an existing one is never overwritten")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Write the file; return the exit code."""
    from pathlib import Path

    from ergo.cli.writing import write_whole
    from ergo.errors import EXIT_DONE, Problem, StudyError
    from ergo.study.template import template

    target = Path(args.file)
    if target.exists():
        raise StudyError([Problem(str(target), "exists already; nothing was written", suggestion="choose another name")])
    write_whole(target, template().encode("utf-8"))
    print(f"{target} written: change it, then run: pullward check {target}")  # noqa: T201
    return EXIT_DONE
