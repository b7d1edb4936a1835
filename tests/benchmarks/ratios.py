"""Speed as ratios in one run: prints one JSON line. Run: python tests/benchmarks/ratios.py [--full] [--all]

`--full` goes on to 8000 operators; `--all` adds the ratios of a sweep (see `sweep_ratios.py`).
"""

import json
import resource
import statistics
import subprocess
import sys
import time
from pathlib import Path

import numpy as np
import pinocchio as pin
from numba import njit
from scipy.optimize import minimize

sys.path.insert(0, str(Path(__file__).resolve().parents[2]))

import ergo
from ergo.arm.posture_limits import COLUMNS, judge_posture
from ergo.evaluation.plan import plan
from ergo.strength.hand_capability import hand_capability
from tests.arm import numpy_twin
from tests.arm.made_operators import LIMITS, SHAPE, operators, scene, targets
from tests.benchmarks.sweep_ratios import ratios as sweep_ratios


@njit
def many(op, shape, view, limits, path, count):
    total, row = 0.0, np.zeros(COLUMNS)
    for n in range(count):
        bend = 0.3 + 1e-7 * n
        total += judge_posture(op, shape, view, limits, 0.0, -0.35, path[n % path.shape[0]], 0.3, bend, 0.5, row)[0]
    return total


def seconds(work, least=0.5):
    """Return seconds a call, over at least `least` seconds."""
    work()
    calls, start = 0, time.perf_counter()
    while time.perf_counter() - start < least:
        work()
        calls += 1
    return (time.perf_counter() - start) / calls


def posture_rates():
    """Return postures a second of the kernel and of its NumPy twin, the same postures."""
    op, view = operators(1, 1)[0], scene()
    path = targets(np.random.default_rng(1), 0.9, 9)
    fast = 20_000 / seconds(lambda: many(op, SHAPE, view, LIMITS, path, 20_000))

    def plain():
        for n in range(50):
            numpy_twin.posture(op, SHAPE, view, LIMITS, 0.0, -0.35, path[n % 9], 0.3, 0.3 + 1e-7 * n, 0.5)

    return fast, 50 / seconds(plain)


def generic_seconds():
    """Return seconds an operator and position of the generic way: Pinocchio Jacobians under SciPy's minimize."""
    model = pin.Model()
    shoulder = model.addJoint(0, pin.JointModelSphericalZYX(), pin.SE3.Identity(), "shoulder")
    elbow = model.addJoint(shoulder, pin.JointModelRY(), pin.SE3(np.eye(3), np.array([0.28, 0, 0])), "elbow")
    model.appendBodyToJoint(elbow, pin.Inertia(2.0, np.array([0.17, 0, 0]), 0.01 * np.eye(3)), pin.SE3.Identity())
    frame = model.addFrame(pin.Frame("hand", elbow, 0, pin.SE3(np.eye(3), np.array([0.33, 0, 0])), pin.FrameType.OP_FRAME))
    data, goal, way = model.createData(), np.array([0.35, 0.1, -0.2]), np.array([0.0, -1.0, 0.0])
    strengths = np.array([80.0, 90.0, 50.0, 60.0])

    def weakness(q):
        pin.framesForwardKinematics(model, data, q)
        miss = data.oMf[frame].translation - goal
        jacobian = pin.computeFrameJacobian(model, data, q, frame, pin.LOCAL_WORLD_ALIGNED)[:3]
        gravity = pin.computeGeneralizedGravity(model, data, q)
        load = np.abs(jacobian.T @ way) / np.maximum(strengths - np.abs(gravity), 1.0)
        return float(load.max() + 100.0 * miss @ miss)

    start = time.perf_counter()
    for n in range(6):
        minimize(weakness, np.array([0.1 * n, 0.3, 0.2, 1.0]), method="Nelder-Mead", options={"maxiter": 600})
    return (time.perf_counter() - start) / 6


def engine(count):
    """Return seconds of stance and posture search for `count` operators at 41 positions."""
    study = ergo.read_study("gasket_punch").with_values({"operators.count": count})
    made = plan(study, ergo.library())
    start = time.perf_counter()
    hand_capability(made.bench, made.task, made.scouts)
    return time.perf_counter() - start


def whole(command, runs=3):
    """Return the middle of wall times of a command."""
    found = []
    for _ in range(runs):
        start = time.perf_counter()
        subprocess.run(command, check=True, capture_output=True)
        found.append(time.perf_counter() - start)
    return statistics.median(found)


def main():
    fast, plain = posture_rates()
    engine(60)
    counts = (500, 1000, 2000, 8000) if "--full" in sys.argv else (500, 1000, 2000)
    times = [engine(n) for n in counts]
    slope = np.polyfit(np.log(counts), np.log(times), 1)[0]
    python, check = sys.executable, [sys.executable, "-m", "ergo", "check", "gasket_punch"]
    whole(check, 1)
    imports = whole([python, "-c", "import numpy, scipy, pandas, numba"])
    sweeps = sweep_ratios() if "--all" in sys.argv else {}
    print(json.dumps({
        "kernel_vs_numpy": round(fast / plain, 1),
        "kernel_vs_generic": round(generic_seconds() / (times[0] / (counts[0] * 41)), 1),
        "evaluations_per_second": round(fast),
        "operators_exponent": round(float(slope), 3),
        "largest_count": counts[-1],
        "peak_rss_mb": round(resource.getrusage(resource.RUSAGE_SELF).ru_maxrss / 1024),
        "ms_per_operator_41_positions": round(1e3 * times[0] / counts[0], 2),
        "cold_check_vs_imports": round(whole(check) / imports, 2),
        "help_vs_python": round(whole([python, "-m", "ergo", "--help"], 7) / whole([python, "-c", "pass"], 7), 2),
    } | sweeps))  # fmt: skip


if __name__ == "__main__":
    main()
