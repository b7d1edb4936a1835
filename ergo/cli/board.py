"""`pullward board`: see and change the lever in the browser."""

import argparse
from pathlib import Path
from typing import TYPE_CHECKING, Any

if TYPE_CHECKING:
    from collections.abc import Sequence

    from ergo.evaluation.results import Results

PORT = 8060
LOOPBACK = "127.0.0.1"
THREADS = 16


def add(subparsers: "argparse._SubParsersAction[argparse.ArgumentParser]") -> None:
    """Declare the command."""
    parser = subparsers.add_parser("board", help="see and change the lever in the browser")
    parser.add_argument("study", metavar="STUDY", nargs="?", help="a study file, or the name of a shipped study")
    parser.add_argument("--port", type=int, default=PORT, metavar="N", help=f"port on this computer (default {PORT})")
    parser.add_argument("--folder", metavar="DIR", help="the only folder whose studies the board may open and save")
    parser.add_argument("--host", default=LOOPBACK, metavar="ADDRESS",
                        help="address to listen on; anything but the default lets other computers in")  # fmt: skip
    parser.add_argument("--no-browser", action="store_true", help="do not open the browser")
    parser.set_defaults(run=run)


def run(args: argparse.Namespace) -> int:
    """Serve the board until it is stopped; return the exit code."""
    import waitress

    from ergo.board.app import create_app
    from ergo.cli.studies import chosen_study, study_path
    from ergo.errors import EXIT_DONE
    from ergo.evaluation.run import evaluate

    folder = _folder(args.folder)
    if args.study:
        chosen_study(args.study)
    taken = _listening(args.host, args.port)
    app = create_app(
        evaluate=evaluate, make_report=_report_maker(), study_folder=folder, port=args.port, host=args.host,
        first=study_path(args.study) if args.study else None, start=True,
    )  # fmt: skip
    address = f"http://{args.host}:{args.port}/"
    whom = "for this computer only" if args.host == LOOPBACK else "for every computer that reaches this address"
    print(f"The board is at {address} {whom}. Ctrl-C stops it; your work is kept.")  # noqa: T201
    if not args.no_browser:
        import webbrowser

        webbrowser.open(address)
    waitress.serve(app.server, sockets=[taken], threads=THREADS, ident="pullward", clear_untrusted_proxy_headers=True)
    return EXIT_DONE


def _folder(name: str | None) -> Path | None:
    from ergo.errors import DataError

    if name is None:
        return None
    place = Path(name).resolve()
    if not place.is_dir():
        msg = f"{name}: there is no such folder"
        raise DataError(msg)
    return place


def _listening(host: str, port: int) -> Any:
    """Return a listening socket; DataError when the port is taken."""
    import socket

    from ergo.errors import DataError

    made = socket.socket(socket.AF_INET, socket.SOCK_STREAM)
    try:
        made.setsockopt(socket.SOL_SOCKET, socket.SO_REUSEADDR, 1)
        made.bind((host, port))
        made.listen(64)
    except (OSError, OverflowError) as error:
        made.close()
        msg = f"{host}, port {port} cannot be used ({error}); choose another with --port"
        raise DataError(msg) from error
    return made


def _report_maker() -> Any:
    """Return what makes the PDF of results, None where this installation has no report."""
    import importlib.util

    if importlib.util.find_spec("ergo.report.bundle") is None:
        return None

    def make(results: "Results", against: "Sequence[Results]" = ()) -> bytes:
        from ergo.report.bundle import single

        return single(results, ".pdf", against)

    return make
