"""A board in its own thread, an engine that answers at once, and a headless browser."""

import dataclasses
import importlib.util
import os
import shutil
import socket
import threading
import time
from pathlib import Path

import pytest

ARGUMENTS = ["--no-sandbox", "--disable-gpu", "--disable-quic", "--no-first-run", "--disable-background-networking",
             "--disable-component-update", "--disable-sync"]  # fmt: skip


def _made_results():
    place = Path(__file__).parents[1] / "pictures" / "made_results.py"
    spec = importlib.util.spec_from_file_location("made_results_for_board", place)
    module = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(module)
    return module


def served_share(length_mm):
    """What the hand-made engine says of a lever's length [%]: a straight line that a test can work out itself."""
    return min(100.0, 50.0 + 0.1 * length_mm)


class MadeEngine:
    """An engine without physics: the served share follows from the lever's length alone."""

    def __init__(self):
        self.made = _made_results()
        self.asked = []
        self.takes_s = 0.0

    def __call__(self, study, *, library=None, tell=lambda share, what: None):
        tell(0.0, "starting")
        time.sleep(self.takes_s)
        tell(0.5, "half way")
        self.asked.append((study.lever.length_mm if study.lever else None, study.operators.count))
        base = self.made.made(short=True)
        length = study.lever.length_mm if study.lever else 300.0
        value = served_share(length)
        if library is not None and library.changes.get(("grip_on_handle", "breakaway_ball_share")) == 0.7:
            value = 100.0
        served = dataclasses.replace(base.ratings["served"], value=value, reason=f"{value:.1f} % meet every target.",
                                     met=value >= 95.0)
        people = {"population": study.operators.population, "count": study.operators.count,
                  "women_share": study.operators.women_share}  # fmt: skip
        manifest = {**base.manifest, "study": study.digest()}
        return dataclasses.replace(base, study=study.content(), variant=study.variant_name, people=people,
                                   ratings={**base.ratings, "served": served}, manifest=manifest)  # fmt: skip


class Served:
    """A running board and what it was made of."""

    def __init__(self, app, address, engine, store, folder):
        self.app, self.address, self.engine, self.store, self.folder = app, address, engine, store, folder


def serve(tmp_path, engine, **more):
    """Start a board on a free port; return it and what stops it."""
    from werkzeug.serving import make_server

    from ergo.board.app import create_app

    with socket.socket() as free:
        free.bind(("127.0.0.1", 0))
        port = free.getsockname()[1]
    folder = tmp_path / "folder"
    folder.mkdir(exist_ok=True)
    app = create_app(evaluate=engine, store_folder=tmp_path / "store", study_folder=folder, port=port, start=True, **more)
    server = make_server("127.0.0.1", port, app.server, threaded=True)
    server.daemon_threads = True
    thread = threading.Thread(target=server.serve_forever, kwargs={"poll_interval": 0.05}, daemon=True)
    thread.start()
    return Served(app, f"http://127.0.0.1:{port}", engine, tmp_path / "store", folder), server


@pytest.fixture
def engine():
    return MadeEngine()


@pytest.fixture
def board(tmp_path, engine):
    made, server = serve(tmp_path, engine, make_report=lambda results, against=(): b"%PDF-1.7 made\n")
    yield made
    server.shutdown()
    server.server_close()


@pytest.fixture(scope="session")
def chromium():
    """One browser for all tests; missing is a failure only where it is required."""
    path = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
    if path is None or importlib.util.find_spec("playwright") is None:
        if os.environ.get("PULLWARD_REQUIRE_BROWSER"):
            pytest.fail("Chromium and Playwright are required (PULLWARD_REQUIRE_BROWSER is set) and one is missing")
        pytest.skip("needs Chromium and Playwright")
    from playwright.sync_api import sync_playwright

    with sync_playwright() as play:
        browser = play.chromium.launch(executable_path=path, args=ARGUMENTS)
        yield browser
        browser.close()


class Watch:
    """What a page said and asked for while a test ran."""

    def __init__(self, address):
        self.address, self.errors, self.elsewhere, self.refused = address, [], [], []

    def on(self, page):
        page.on("console", lambda m: self.errors.append(m.text) if m.type == "error" else None)
        page.on("pageerror", lambda e: self.errors.append(str(e)))
        page.on("request", lambda r: None if self._ours(r.url) else self.elsewhere.append(r.url))

    def _ours(self, url):
        return url.startswith((self.address, "data:", "blob:"))


@pytest.fixture
def new_page(chromium, board):
    """Make pages; after the test none may have logged an error or asked anybody but the board."""
    contexts, watches = [], []

    def make(*, width=1280, height=800, theme="light", context=None, expect_errors=False):
        if context is None:
            context = chromium.new_context(viewport={"width": width, "height": height}, accept_downloads=True)
            context.set_default_timeout(15_000)
            contexts.append(context)
            if theme == "dark":
                context.add_cookies([{"name": "pullward_theme", "value": "dark", "url": board.address}])
        page = context.new_page()
        watch = Watch(board.address)
        watch.on(page)
        if not expect_errors:
            watches.append(watch)
        return page

    yield make
    errors = [e for w in watches for e in w.errors]
    elsewhere = [u for w in watches for u in w.elsewhere]
    for context in contexts:
        context.close()
    assert errors == []
    assert elsewhere == []
