"""`pullward verify`: recompute a report's bundle and say whether it still matches."""

import argparse


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("verify", help="recompute a report's bundle and say whether it still matches")
    parser.add_argument("bundle", metavar="DIR", help="a folder or .zip that `pullward report --bundle` wrote")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Check the bundle; exit 0 when it matches, 1 when it does not."""
    from rich.console import Console

    from ergo.cli.report import progress
    from ergo.errors import EXIT_DONE, EXIT_FALLS_SHORT
    from ergo.report.verify import verify

    with progress("verify", 5) as step:
        finding = verify(args.bundle, tell=lambda share, what: step(what))
    console = Console(highlight=False, markup=False, emoji=False, soft_wrap=True)
    console.print(finding.sentence())
    for line in finding.differences:
        console.print(f"  {line}")
    return EXIT_DONE if finding.matches else EXIT_FALLS_SHORT
