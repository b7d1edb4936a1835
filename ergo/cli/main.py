"""The `pullward` command: one file a subcommand, loaded only when it is chosen."""

import argparse
import importlib
import importlib.util
import os
import sys

from ergo import __version__
from ergo.errors import PullwardError, StudyError

COMMANDS = ("new", "check", "compare", "sweep", "suggest", "report", "verify", "board", "people", "methods")
HELP = {
    "new": "write a commented study file",
    "check": "judge a study: who reaches, which way, how hard, for whom, why",
    "compare": "variants and studies side by side on the same people",
    "sweep": "try many placements",
    "suggest": "find the smallest changes that meet the targets",
    "report": "write the reasoning down for the design file",
    "verify": "recompute a report's bundle and say whether it still matches",
    "board": "see and change the lever in the browser",
    "people": "list populations, or show one's percentiles",
    "methods": "list the methods with range, source, status and check",
}
UNEXPECTED = 70  # sysexits: an internal fault
INTERRUPTED = 130


def available() -> list[str]:
    """Return the commands of this installation."""
    return [name for name in COMMANDS if importlib.util.find_spec(f"ergo.cli.{name}") is not None]


def build(chosen: str | None) -> argparse.ArgumentParser:
    """Return the parser; only the chosen command's module is loaded, the others are named."""
    parser = argparse.ArgumentParser(
        prog="pullward",
        description="Is a hand lever in the right place? Who reaches it, which way it is worked, how hard, for whom.",
        epilog="A screening calculation from population data; not a risk assessment.",
    )
    parser.add_argument("--version", action="version", version=f"pullward {__version__}")
    subparsers = parser.add_subparsers(dest="command", metavar="COMMAND", required=True)
    for name in available():
        if name == chosen:
            importlib.import_module(f"ergo.cli.{name}").add(subparsers)
        else:
            subparsers.add_parser(name, help=HELP[name], add_help=False)
    return parser


def main(argv: list[str] | None = None) -> int:
    """Run the command line; return its exit code."""
    words = sys.argv[1:] if argv is None else argv
    chosen = next((w for w in words if not w.startswith("-")), None)
    args = build(chosen).parse_args(words)
    try:
        return int(args.run(args))
    except StudyError as error:
        count = len(error.problems)
        print(f"{count} problem{'s' if count != 1 else ''}:", file=sys.stderr)  # noqa: T201
        for problem in error.problems:
            print(f"  {problem.sentence()}", file=sys.stderr)  # noqa: T201
        return error.exit_code
    except PullwardError as error:
        print(error, file=sys.stderr)  # noqa: T201
        return error.exit_code
    except KeyboardInterrupt:
        print("stopped", file=sys.stderr)  # noqa: T201
        return INTERRUPTED
    except BrokenPipeError:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return 0
    except Exception as error:
        if os.environ.get("PULLWARD_DEBUG"):
            raise
        print(f"unexpected fault: {type(error).__name__}: {error}; please report it with the study"  # noqa: T201
              " (PULLWARD_DEBUG=1 shows where)", file=sys.stderr)  # fmt: skip
        return UNEXPECTED


if __name__ == "__main__":
    sys.exit(main())
