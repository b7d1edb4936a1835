"""A sweep's speed as ratios: prints one JSON line, ratios only, nothing asserted. Run: python tests/benchmarks/sweep_ratios.py

What each figure is measured with stands in the line itself. Slopes and resuming use a stand-in for the engine that
takes microseconds, so that ten thousand placements go through keys, checks, workers' chunks and store in seconds.
"""

import json
import multiprocessing
import os
import sys
import tempfile
import time
from concurrent.futures import ProcessPoolExecutor
from pathlib import Path

import numba
import numpy as np

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

import ergo
from ergo.explore.axes import placements_of
from ergo.explore.sweep import sweep
from ergo.explore.workers import OwnHands, Processes
from tests.explore.fast_judge import judge

STUDY, OPERATORS, POSITIONS = "gasket_punch", 500, 41
SECONDS_A_RATE = 12.0
COUNTS = (100, 1000, 10_000)
USUAL = {"operators.count": OPERATORS, "study.positions": POSITIONS}


class Staying(Processes):
    """Workers that stay for the next sweep, so that their start is not measured with it."""

    def close(self):
        """Stay."""

    def go_home(self):
        super().close()


def engine_study():
    return ergo.read_study(STUDY).with_values(USUAL)


def lengths(study, count):
    """So many placements that differ in the lever's length."""
    made = placements_of(study, ["lever.length_mm=" + ",".join(f"{240.0 + 80.0 * n / count:.3f}" for n in range(count))])
    assert made.count == count
    return made


def grid(study, count):
    """A grid of so many placements, ten of them a length."""
    made = placements_of(study, [f"lever.length_mm=200:{200.0 + (count // 10 - 1) * 0.1:.6g}:0.1", "lever.start_deg=-20:-11:1"])
    assert made.count == count
    return made


def seconds(study, placements, folder, **how):
    """Wall time of a sweep into a new store."""
    handle, name = tempfile.mkstemp(suffix=".db", dir=folder)
    os.close(handle)
    start = time.perf_counter()
    sweep(study, placements, Path(name), resume=True, **how)
    return time.perf_counter() - start


def rate(study, folder, workers):
    """Placements a second of so many workers that have their kernels ready; and how many were judged for it."""
    crew = Staying(workers)
    try:
        warm = lengths(study, 2 * workers)
        seconds(study, warm, folder, crew=crew)
        one = seconds(study, warm, folder, crew=crew) / warm.count
        # A whole number for each worker, so that nobody waits at the end.
        count = 2 * workers * max(round(0.5 * SECONDS_A_RATE / (one * workers)), 2)
        asked = lengths(study, count)
        return asked.count / seconds(study, asked, folder, crew=crew), asked.count
    finally:
        crew.go_home()


def counting(count):
    total = 0
    for n in range(count):
        total += n * n
    return total


def machine_efficiency():
    """What two processes of plain arithmetic gain here and now, the ceiling of `parallel_efficiency_2`: others work too."""
    def one_round(workers):
        with ProcessPoolExecutor(workers, mp_context=multiprocessing.get_context("spawn")) as pool:
            list(pool.map(counting, [1000] * workers))
            start = time.perf_counter()
            list(pool.map(counting, [20_000_000] * workers))
            return time.perf_counter() - start

    return one_round(1) / one_round(2)


class Stopwatch:
    """Adds up the processor time in compiled functions that Python calls; what they call themselves counts once."""

    def __init__(self):
        self.spent, self._depth = 0.0, 0

    def __enter__(self):
        self._kept = [(module, name, thing) for key, module in list(sys.modules.items()) if key.startswith("ergo.")
                      for name, thing in list(vars(module).items()) if isinstance(thing, numba.core.registry.CPUDispatcher)]  # fmt: skip
        for module, name, thing in self._kept:
            setattr(module, name, self._timed(thing))
        return self

    def __exit__(self, *_):
        for module, name, thing in self._kept:
            setattr(module, name, thing)

    def _timed(self, compiled):
        def call(*args):
            self._depth += 1
            start = time.process_time()
            try:
                return compiled(*args)
            finally:
                self._depth -= 1
                if self._depth == 0:
                    self.spent += time.process_time() - start

        return call


def overhead(study, folder):
    """Share of a sweep's processor time outside compiled functions, one process and one kernel thread."""
    threads = numba.get_num_threads()
    numba.set_num_threads(1)
    asked = lengths(study, 6)
    seconds(study, asked, folder, crew=OwnHands())
    with Stopwatch() as watch:
        start = time.process_time()
        seconds(study, asked, folder, crew=OwnHands())
        whole = time.process_time() - start
    numba.set_num_threads(threads)
    return 1.0 - watch.spent / whole


def exponent(study, folder):
    """Slope of time over placements, in logarithms, and the seconds of the largest; a stand-in judges."""
    times = []
    for count in COUNTS:
        asked = grid(study, count)
        times.append(min(seconds(study, asked, folder, workers=0, judge=judge) for _ in range(3 if count < 5000 else 1)))
    return float(np.polyfit(np.log(COUNTS), np.log(times), 1)[0]), times[-1]


def resuming(study, folder):
    """Seconds that a stop in the middle of the largest sweep adds: opening, checking every row, starting two workers."""
    asked = grid(study, COUNTS[-1])
    path = Path(folder) / "resumed.db"
    sweep(study, asked, path, workers=0, judge=judge)
    start = time.perf_counter()
    assert sweep(study, asked, path, resume=True, workers=2, judge=judge) == 0
    opened = time.perf_counter() - start
    engine = lengths(engine_study(), 2)
    crew = Staying(2)
    try:
        cold = seconds(engine_study(), engine, folder, crew=crew)
        return opened, max(cold - seconds(engine_study(), engine, folder, crew=crew), 0.0)
    finally:
        crew.go_home()


def ratios():
    """Return the figures, and with what they were measured."""
    study, plain = engine_study(), ergo.read_study(STUDY)
    with tempfile.TemporaryDirectory() as folder:
        two, judged = rate(study, folder, 2)
        one, _ = rate(study, folder, 1)
        ceiling = machine_efficiency()
        share = overhead(study, folder)
        slope, largest_s = exponent(plain, folder)
        opened, started = resuming(plain, folder)
    return {
        "placements_per_second_500_operators": round(two, 3),
        "parallel_efficiency_2": round(two / (2.0 * one), 3),
        "overhead_share": round(share, 3),
        "sweep_exponent": round(slope, 3),
        "resume_cost_share": round((opened + started) / (COUNTS[-1] / two), 4),
        "sweep_measured_with": {
            "study": STUDY, "positions": POSITIONS, "placements_for_the_rate": judged, "workers": 2,
            "machine_efficiency_2": round(ceiling, 3), "load_average": round(os.getloadavg()[0], 1),
            "sweep_exponent": f"stand-in judge, {COUNTS[0]} to {COUNTS[-1]} placements, one process",
            "bookkeeping_ms_a_placement": round(1e3 * largest_s / COUNTS[-1], 3),
            "resume_cost_share": f"open and check {COUNTS[-1]} rows {opened:.2f} s, start two workers {started:.1f} s,"
                                 " over the time of as many placements at the rate above",
        },
    }  # fmt: skip


if __name__ == "__main__":
    print(json.dumps(ratios()))
