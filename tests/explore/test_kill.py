"""Kill -9 at fifty random moments: no placement lost, doubled or changed; and workers do not outlive their sweep."""

import json
import os
import signal
import sqlite3
import subprocess
import sys
import time
from pathlib import Path

CHECKOUT = Path(__file__).resolve().parents[2]
ENVIRONMENT = {**os.environ, "PYTHONPATH": str(CHECKOUT)}
KILLS = 50


def test_kill_at_fifty_random_moments_loses_doubles_and_changes_nothing(tmp_path):
    script = Path(__file__).parent / "killed_sweeps.py"
    done = subprocess.run([sys.executable, str(script), str(tmp_path), str(KILLS), "11"], env=ENVIRONMENT,
                          capture_output=True, text=True, check=False, timeout=240)  # fmt: skip
    assert done.returncode == 0, done.stderr
    counts = json.loads(done.stdout)
    print(f"{counts['kills']} kills over {counts['sweeps']} sweeps: {counts['lost']} lost, {counts['changed']} changed")
    assert counts["kills"] == KILLS
    assert (counts["lost"], counts["changed"]) == (0, 0)
    # The moments are spread over the sweep, not all before the first row.
    assert len({kept for kept in counts["kept_at_kill"] if kept}) > 10
    assert list(tmp_path.glob("*.lock")) == []


POOL = """
import sys, ergo
from pathlib import Path
from ergo.explore.axes import placements_of
from ergo.explore.sweep import sweep
from tests.explore.fast_judge import slow_judge
if __name__ == "__main__":
    study = ergo.read_study("gasket_punch")
    asked = placements_of(study, ["lever.length_mm=200:399:0.25", "lever.start_deg=-20,-10"])
    sweep(study, asked, Path(sys.argv[1]), workers=2, judge=slow_judge, tell=lambda p: print(p.kept, flush=True))
"""


def children(pid):
    """Processes whose parent is `pid`."""
    found = []
    for stat in Path("/proc").glob("[0-9]*/stat"):
        try:
            fields = stat.read_text().rpartition(")")[2].split()
        except OSError:
            continue
        if int(fields[1]) == pid:
            found.append(int(stat.parent.name))
    return found


def alive(pid):
    try:
        return Path(f"/proc/{pid}/stat").read_text().rpartition(")")[2].split()[0] != "Z"
    except OSError:
        return False


def started(tmp_path):
    """A sweep with two worker processes that has kept its first placements."""
    script = tmp_path / "pool.py"
    script.write_text(POOL)
    running = subprocess.Popen([sys.executable, str(script), str(tmp_path / "s.db")], env=ENVIRONMENT,
                               stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True)  # fmt: skip
    assert running.stdout.readline().strip().isdigit()
    return running


def test_workers_go_when_their_sweep_is_killed(tmp_path):
    with started(tmp_path) as running:
        workers = children(running.pid)
        assert len(workers) >= 2
        running.kill()
        running.communicate()
    until = time.monotonic() + 10.0
    while any(alive(pid) for pid in workers) and time.monotonic() < until:
        time.sleep(0.05)
    assert [pid for pid in workers if alive(pid)] == []


def test_a_killed_worker_is_replaced_and_nothing_is_lost(tmp_path):
    with started(tmp_path) as running:
        # multiprocessing's resource tracker is a child as well; only workers are started by `spawn_main`.
        workers = [pid for pid in children(running.pid) if b"spawn_main" in Path(f"/proc/{pid}/cmdline").read_bytes()]
        assert len(workers) == 2
        os.kill(workers[0], signal.SIGKILL)
        running.communicate(timeout=120)
        assert workers[0] not in children(running.pid)
    assert running.returncode == 0
    with sqlite3.connect(tmp_path / "s.db") as connection:
        numbers = [n for (n,) in connection.execute("SELECT placement FROM placements ORDER BY placement")]
    connection.close()
    assert numbers == list(range(1594))
