"""A sweep on a real Dask scheduler with real workers on loopback: the rows of a local run, whoever is killed meanwhile."""

import contextlib
import json
import os
import socket
import sqlite3
import subprocess
import sys
import time
from collections import Counter
from pathlib import Path

import pytest

import ergo
from ergo.explore.axes import placements_of
from ergo.explore.sweep import CHUNK_S, WAITING_A_WORKER, sweep
from tests.explore.fast_judge import PAUSE_S, judge

CHECKOUT = Path(__file__).resolve().parents[2]
VARIED = ["lever.length_mm=200:399:0.25", "lever.start_deg=-20,-10"]
COUNT = 1594
ENGINE = ["sweep", "gasket_punch", "--vary", "lever.length_mm=240:310:10", "--operators", "50", "--positions", "3"]

# Prints how many placements are kept; ends in words as the command line does.
SWEEP = """
import sys, ergo
from pathlib import Path
from ergo.errors import PullwardError
from ergo.explore import cluster
from ergo.explore.axes import placements_of
from ergo.explore.sweep import sweep
from tests.explore.fast_judge import recorded_judge
from tests.explore.test_cluster import VARIED
study = ergo.read_study("gasket_punch")
crew = cluster.crew_at(sys.argv[2])
try:
    sweep(study, placements_of(study, VARIED), Path(sys.argv[1]), resume=True, crew=crew, judge=recorded_judge,
          tell=lambda p: print(p.kept, flush=True))
except PullwardError as error:
    sys.exit(str(error))
finally:
    crew.close()
"""


def rows(path):
    with contextlib.closing(sqlite3.connect(path)) as connection:
        return connection.execute("SELECT * FROM placements ORDER BY placement").fetchall()


def environment(folder):
    return {**os.environ, "PYTHONPATH": str(CHECKOUT), "PULLWARD_TEST_RECORD": str(folder / "judged.txt")}


class Cluster:
    """Scheduler and workers as processes of their own, started by the dask library's commands."""

    def __init__(self, folder):
        self.folder, self.processes, self.workers = folder, [], []
        where = folder / "scheduler.json"
        self.scheduler = self._start("scheduler", "--port", "0", "--scheduler-file", str(where))
        while not where.exists() or not where.read_text().strip().endswith("}"):
            assert self.scheduler.poll() is None, (folder / "dask.log").read_text()
            time.sleep(0.02)
        self.address = json.loads(where.read_text())["address"]

    def _start(self, *words):
        with (self.folder / "dask.log").open("ab") as log:
            begun = subprocess.Popen([sys.executable, "-m", "dask", *words, "--host", "127.0.0.1", "--no-dashboard"],
                                     env=environment(self.folder), cwd=self.folder, stdout=log, stderr=log)  # fmt: skip
        self.processes.append(begun)
        return begun

    def work(self, count):
        """Start workers of one thread, which nobody starts again."""
        for _ in range(count):
            self.workers.append(self._start("worker", self.address, "--nthreads", "1", "--no-nanny",
                                            "--local-directory", str(self.folder)))  # fmt: skip
        return self

    def close(self):
        for process in self.processes:
            process.kill()
            process.wait()


@pytest.fixture
def cluster(tmp_path):
    folder = tmp_path / "cluster"
    folder.mkdir()
    with contextlib.closing(Cluster(folder)) as made:
        yield made


# Long enough for kernels that are compiled for the first time.
def pullward(folder, *words, seconds=600):
    return subprocess.run([sys.executable, "-m", "ergo", *words], env=environment(folder), cwd=folder, check=False,
                          capture_output=True, text=True, timeout=seconds)  # fmt: skip


@contextlib.contextmanager
def sweeping(cluster, path):
    """A sweep on the cluster, that prints how far it is."""
    with subprocess.Popen([sys.executable, "-c", SWEEP, str(path), cluster.address], env=environment(cluster.folder),
                          stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True) as running:  # fmt: skip
        try:
            yield running
        finally:
            running.kill()


def until(running, kept):
    """Wait until so many placements are kept."""
    for line in running.stdout:
        if int(line) >= kept:
            return
    raise AssertionError(running.stderr.read())


def judged(cluster):
    """Worker and placement, one a judgement, in the order of time."""
    lines = (cluster.folder / "judged.txt").read_text().splitlines()
    return [(int(pid), place) for pid, _, place in (line.partition(" ") for line in lines)]


@pytest.fixture
def undisturbed(tmp_path):
    """The rows of the same sweep in this process alone."""
    study = ergo.read_study("gasket_punch")
    assert sweep(study, placements_of(study, VARIED), tmp_path / "undisturbed.db", workers=0, judge=judge) == COUNT
    return rows(tmp_path / "undisturbed.db")


@pytest.mark.slow
def test_the_command_gives_the_rows_of_a_local_run(cluster, tmp_path):
    cluster.work(2)
    there = pullward(tmp_path, *ENGINE, "--store", "there.db", "--scheduler", cluster.address, "--csv", "there.csv")
    here = pullward(tmp_path, *ENGINE, "--store", "here.db", "--workers", "1", "--csv", "here.csv")
    assert (there.returncode, there.stderr) == (0, "")
    assert here.returncode == 0, here.stderr
    assert len(rows(tmp_path / "here.db")) == 8
    assert rows(tmp_path / "there.db") == rows(tmp_path / "here.db")
    assert (tmp_path / "there.csv").read_bytes() == (tmp_path / "here.csv").read_bytes()
    assert there.stdout == here.stdout


def test_every_placement_is_judged_once(cluster, tmp_path, undisturbed):
    cluster.work(2)
    with sweeping(cluster, tmp_path / "s.db") as running:
        assert running.communicate(timeout=120)[1] == ""
    assert running.returncode == 0
    assert rows(tmp_path / "s.db") == undisturbed
    times = Counter(place for _, place in judged(cluster))
    assert len(times) == COUNT
    assert set(times.values()) == {1}
    assert len({pid for pid, _ in judged(cluster)}) == 2


def test_a_worker_killed_costs_only_what_it_held(cluster, tmp_path, undisturbed):
    victim = cluster.work(2).workers[0]
    with sweeping(cluster, tmp_path / "s.db") as running:
        until(running, 300)
        victim.kill()
        assert running.communicate(timeout=120)[1] == ""
    assert running.returncode == 0
    assert rows(tmp_path / "s.db") == undisturbed
    found = judged(cluster)
    first = {place: pid for pid, place in reversed(found)}
    again = {place for place, times in Counter(place for _, place in found).items() if times > 1}
    assert len(first) == COUNT
    assert {first[place] for place in again} <= {victim.pid}
    # It held the chunk it was at and the next one; placements cannot come faster than their pause.
    assert len(again) <= WAITING_A_WORKER * (CHUNK_S / PAUSE_S + 1)
    print(f"worker killed: {len(again)} of {COUNT} placements judged again, {len(first)} kept")


def test_a_scheduler_that_goes_is_told_and_the_sweep_goes_on_later(cluster, tmp_path, undisturbed):
    cluster.work(2)
    with sweeping(cluster, tmp_path / "s.db") as running:
        until(running, 300)
        cluster.scheduler.kill()
        said = running.communicate(timeout=120)[1]
    assert said.strip().endswith("placements kept so far are safe: start it, go on with --resume")
    kept = rows(tmp_path / "s.db")
    assert 300 <= len(kept) < COUNT
    study = ergo.read_study("gasket_punch")
    left = sweep(study, placements_of(study, VARIED), tmp_path / "s.db", resume=True, workers=0, judge=judge)
    assert left == COUNT - len(kept)
    assert rows(tmp_path / "s.db") == undisturbed


def test_a_scheduler_without_workers_is_told(cluster, tmp_path):
    done = pullward(tmp_path, *ENGINE, "--store", "s.db", "--scheduler", cluster.address, seconds=60)
    assert (done.returncode, done.stdout) == (3, "")
    assert done.stderr == f"{cluster.address}: the scheduler has no worker; start some, see DEVELOPERS.md\n"
    assert not (tmp_path / "s.db").exists()


@pytest.mark.parametrize(("address", "code", "words"), [
    ("tcp://127.0.0.1:1", 3, "no Dask scheduler answers there (Connection refused); start one, or leave --scheduler out"),
    ("127.0.0.1:8786", 2, "is no address of a scheduler; write tcp://host:port"),
    ("tcp://127.0.0.1:many", 2, "is no address of a scheduler; write tcp://host:port"),
])  # fmt: skip
def test_nobody_at_the_address_is_told_at_once(tmp_path, address, code, words):
    begun = time.monotonic()
    done = pullward(tmp_path, *ENGINE, "--store", "s.db", "--scheduler", address, seconds=60)
    assert (done.returncode, done.stdout, done.stderr) == (code, "", f"{address}: {words}\n")
    # A few seconds even on a busy machine; the client of Dask alone would try for twenty.
    assert time.monotonic() - begun < 15.0
    assert list(tmp_path.iterdir()) == []


@pytest.mark.parametrize("greeting", [b"", b"HTTP/1.1 400 Bad Request\r\n\r\n"])
def test_something_else_at_the_address_is_told(tmp_path, greeting):
    with socket.create_server(("127.0.0.1", 0)) as other:
        address = f"tcp://127.0.0.1:{other.getsockname()[1]}"
        with subprocess.Popen([sys.executable, "-m", "ergo", *ENGINE, "--store", "s.db", "--scheduler", address],
                              env=environment(tmp_path), cwd=tmp_path, stderr=subprocess.PIPE, text=True) as running:  # fmt: skip
            line = other.accept()[0]
            with line:
                line.sendall(greeting)
                said = running.communicate(timeout=60)[1]
    assert running.returncode == 3
    assert said.startswith(f"{address}: no Dask scheduler answers there (")
    assert said.count("\n") == 1
