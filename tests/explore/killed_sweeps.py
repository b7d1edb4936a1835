"""Sweeps killed with -9 at random moments and gone on with; prints counts as JSON. Run in a process of its own.

    python killed_sweeps.py FOLDER KILLS SEED

Children are forked before any kernel runs, so that fifty of them start in a second.
"""

import json
import os
import random
import signal
import sqlite3
import sys
import time
from pathlib import Path

import ergo
from ergo.explore import sweep as sweeping
from ergo.explore.axes import placements_of
from tests.explore.fast_judge import judge, slow_judge

VARIED = ["lever.length_mm=200:269:1", "linkage.branch=open,crossed", "lever.start_deg=-20,-10"]


def rows(path):
    """Placement -> cells, as they lie in the file."""
    if not path.exists() or path.stat().st_size == 0:
        return {}
    with sqlite3.connect(path) as connection:
        tables = connection.execute("SELECT count(*) FROM sqlite_master").fetchone()[0]
        found = connection.execute("SELECT * FROM placements").fetchall() if tables else []
    connection.close()
    assert len(found) == len({cells[0] for cells in found})
    return {cells[0]: cells for cells in found}


def child(study, placements, path, writing):
    """Sweep until the end or the kill; say on the pipe when it begins."""
    os.write(writing, b".")
    try:
        sweeping.sweep(study, placements, path, resume=True, workers=0, judge=slow_judge)
    except BaseException as error:
        os.write(2, f"{type(error).__name__}: {error}\n".encode())
        os._exit(1)
    os._exit(0)


def killed_once(study, placements, path, delay_s):
    """Start a sweep in a forked child, kill it after a while; whether it was killed before its end."""
    reading, writing = os.pipe()
    pid = os.fork()
    if pid == 0:
        child(study, placements, path, writing)
    os.close(writing)
    os.read(reading, 1)
    os.close(reading)
    time.sleep(delay_s)
    os.kill(pid, signal.SIGKILL)
    status = os.waitpid(pid, 0)[1]
    assert os.WIFSIGNALED(status) or os.WEXITSTATUS(status) == 0, "a sweep could not go on"
    return os.WIFSIGNALED(status)


def main(folder, kills, seed):
    sweeping.CHUNK_S = 0.02
    chance = random.Random(seed)
    study = ergo.read_study("gasket_punch")
    placements = placements_of(study, VARIED)
    sweeping.sweep(study, placements, folder / "undisturbed.db", workers=0, judge=judge)
    expected = rows(folder / "undisturbed.db")
    counts = {"kills": 0, "sweeps": 0, "lost": 0, "changed": 0, "kept_at_kill": []}
    while counts["kills"] < kills:
        path, kept, ended = folder / f"sweep{counts['sweeps']}.db", {}, False
        while not ended:
            # Some moments in the first milliseconds, when the file is only being made; most while rows are written.
            ended = not killed_once(study, placements, path, chance.choice([0.002, 0.02, 0.5, 0.5]) * chance.random())
            now = rows(path)
            counts["kills"] += not ended
            counts["lost"] += len(kept.keys() - now.keys())
            counts["changed"] += sum(now[n] != cells for n, cells in kept.items() if n in now)
            counts["changed"] += sum(expected[n] != cells for n, cells in now.items())
            counts["kept_at_kill"].append(len(now))
            kept = now
            if counts["kills"] >= kills:
                sweeping.sweep(study, placements, path, resume=True, workers=0, judge=judge)
                ended = True
        counts["sweeps"] += 1
        counts["lost"] += len(expected.keys() - rows(path).keys())
        counts["changed"] += rows(path) != expected
    print(json.dumps(counts))


if __name__ == "__main__":
    main(Path(sys.argv[1]), int(sys.argv[2]), int(sys.argv[3]))
