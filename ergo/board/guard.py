"""What keeps the board to its own machine and each browser to its own work."""

import re

from dash import Dash
from flask import Flask, Response, abort, g, request
from werkzeug.exceptions import HTTPException

from ergo.board.store import new_key

LARGEST_BODY = 6 * 1024 * 1024
_KEY = re.compile(r"[0-9a-f]{32}")
LOOPBACK = ("127.0.0.1", "localhost", "[::1]")


def guard(server: Flask, *, port: int, hosts: tuple[str, ...] = LOOPBACK) -> None:
    """Refuse foreign hosts and origins, large bodies and odd paths; give each browser its key."""
    server.config["MAX_CONTENT_LENGTH"] = LARGEST_BODY
    allowed = {f"{host}:{port}" for host in hosts}
    cookie = f"pullward_work_{port}"

    @server.before_request
    def check() -> None:
        if request.host not in allowed:
            abort(403)
        origin = request.headers.get("Origin")
        if origin is not None and origin.partition("://")[2] not in allowed:
            abort(403)
        if request.headers.get("Sec-Fetch-Site", "none") == "cross-site":
            abort(403)
        sent = request.cookies.get(cookie, "")
        g.work_key = sent if _KEY.fullmatch(sent) else new_key()
        g.new_key = g.work_key != sent

    @server.after_request
    def harden(response: Response) -> Response:
        if g.get("new_key"):
            response.set_cookie(cookie, g.work_key, max_age=90 * 86_400, httponly=True, samesite="Strict", path="/")
        response.headers["X-Content-Type-Options"] = "nosniff"
        response.headers["Referrer-Policy"] = "no-referrer"
        response.headers["X-Frame-Options"] = "DENY"
        response.headers["Cross-Origin-Opener-Policy"] = "same-origin"
        response.headers.setdefault("Content-Security-Policy", server.config.get("BOARD_CSP", "default-src 'self'"))
        return response

    @server.errorhandler(Exception)
    def plain(error: Exception) -> tuple[str, int]:
        """Answer without a trace of the inside; odd paths under the component suites are not found."""
        if isinstance(error, HTTPException):
            return error.name, error.code or 500
        if request.path.startswith("/_dash-component-suites/"):
            return "Not Found", 404
        server.logger.exception("the board failed on %s", request.path)
        return "The board failed on this; nothing was lost.", 500


def policy(app: Dash) -> str:
    """Return the Content-Security-Policy; to be asked for when every callback is there."""
    hashes = " ".join(app.csp_hashes())
    return (
        f"default-src 'none'; script-src 'self' {hashes}; style-src 'self' 'unsafe-inline'; img-src 'self' data: blob:; "
        "font-src 'self' data:; connect-src 'self'; worker-src 'self' blob:; object-src 'none'; base-uri 'none'; "
        "frame-ancestors 'none'; form-action 'self'"
    )


def work_key() -> str:
    """Return the key of the browser that is asking."""
    return str(g.work_key)
