"""The command with the real engine: the same bytes a row from one process, one worker, two workers, or after Ctrl-C."""

import contextlib
import os
import signal
import sqlite3
import subprocess
import sys
import time
from pathlib import Path

import pytest

CHECKOUT = Path(__file__).resolve().parents[2]
ASKED = ["sweep", "gasket_punch", "--vary", "lever.length_mm=200,240,280,320", "--vary", "lever.start_deg=-20,-10,0",
         "--operators", "50", "--positions", "3"]  # fmt: skip
COUNT = 12


def rows(path):
    with contextlib.closing(sqlite3.connect(path)) as connection:
        if not connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0]:
            return []
        return connection.execute("SELECT * FROM placements ORDER BY placement").fetchall()


def started(folder, name, *words):
    return subprocess.Popen([sys.executable, "-m", "ergo", *ASKED, "--store", name, *words], cwd=folder, text=True,
                            env={**os.environ, "PYTHONPATH": str(CHECKOUT)}, stdout=subprocess.PIPE,
                            stderr=subprocess.PIPE)  # fmt: skip


def finished(running, code=0):
    with running:
        said = running.communicate(timeout=600)
    assert running.returncode == code, said[1]
    return said


@pytest.fixture(scope="module")
def alone(tmp_path_factory):
    """Rows and words of an undisturbed run in one process, whose kernels use every processor."""
    folder = tmp_path_factory.mktemp("alone")
    words = finished(started(folder, "s.db", "--workers", "0"))[0]
    return rows(folder / "s.db"), words


@pytest.mark.slow
@pytest.mark.parametrize("workers", ["1", "2"])
def test_rows_are_the_same_bytes_whoever_judges(tmp_path, alone, workers):
    words = finished(started(tmp_path, "s.db", "--workers", workers))[0]
    assert len(alone[0]) == COUNT
    assert len({row[3:-2] for row in alone[0]}) > COUNT // 2
    assert (rows(tmp_path / "s.db"), words) == alone


@pytest.mark.slow
@pytest.mark.parametrize("how", [signal.SIGINT, signal.SIGKILL])
def test_a_stopped_run_goes_on_with_other_workers_to_the_same_rows(tmp_path, alone, how):
    path = tmp_path / "stopped.db"
    with started(tmp_path, path.name, "--workers", "1") as running:
        until = time.monotonic() + 600.0
        while not (path.exists() and path.stat().st_size and len(rows(path)) >= 2):
            assert time.monotonic() < until
            time.sleep(0.02)
        running.send_signal(how)
        said = running.communicate(timeout=60)
    kept = len(rows(path))
    assert 2 <= kept < COUNT
    if how == signal.SIGINT:
        assert running.returncode == 130
        assert said == ("", f"Stopped: {kept} of {COUNT} placements are kept in {path.name};"
                            " the same command with --resume goes on.\n")  # fmt: skip
    finished(started(tmp_path, path.name, "--workers", "2", "--resume"))
    assert rows(path) == alone[0]
