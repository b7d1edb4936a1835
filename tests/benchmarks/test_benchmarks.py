"""Rates of the parts, each with what it must give. The ordinary suite runs every part once and times nothing.

Numbers: python -m pytest tests/benchmarks --benchmark-enable
"""

import numpy as np
import pytest
from numba import njit

import ergo
from ergo.arm.posture_limits import COLUMNS, judge_posture
from ergo.arm.reach import reach_line_m
from ergo.datasets import library
from ergo.evaluation.machine import machine_of
from ergo.evaluation.plan import plan
from ergo.explore.axes import placements_of
from ergo.explore.reading import read_store
from ergo.explore.sweep import sweep
from ergo.letgo.hand import Muscle, run_on
from ergo.people.operators import draw
from ergo.strength.hand_capability import hand_capability
from tests.arm.made_operators import LIMITS, SHAPE, operators, scene, targets
from tests.explore.fast_judge import judge

POSTURES, OPERATORS, POSITIONS = 1000, 50, 9


@pytest.fixture(scope="module")
def study():
    return ergo.read_study("gasket_punch").with_values({"operators.count": OPERATORS, "study.positions": POSITIONS})


@njit
def judged(op, shape, view, limits, path, bends, forces):
    row = np.zeros(COLUMNS)
    for n in range(bends.shape[0]):
        forces[n] = judge_posture(op, shape, view, limits, 0.0, -0.35, path[n % path.shape[0]], 0.3, bends[n], 0.5, row)[0]


def test_a_thousand_postures(benchmark):
    op, view = operators(1, 1)[0], scene()
    path, bends = targets(np.random.default_rng(1), 0.9, POSITIONS), np.linspace(0.0, 0.6, POSTURES)
    forces = np.full(POSTURES, np.nan)
    benchmark(judged, op, SHAPE, view, LIMITS, path, bends, forces)
    assert np.isfinite(forces).all()
    assert (forces > 0.0).any()


def test_how_far_one_operator_reaches(benchmark):
    op, angles = operators(1, 1)[0], np.deg2rad(np.arange(-60.0, 61.0, 5.0))
    line = np.asarray(benchmark(reach_line_m, op, scene(), -0.35, angles))
    assert line.shape[0] == angles.size
    # A straight arm of 0.6 m moves with a trunk of 0.5 m: the line spans more than the arm and less than both twice.
    assert 0.6 < np.ptp(line[:, 1]) < 2.2


def test_the_best_stance_of_fifty_operators(benchmark, study):
    made = plan(study, library())
    found = benchmark.pedantic(hand_capability, args=(made.bench, made.task, made.scouts), rounds=3, warmup_rounds=1)
    assert found.force_n.shape == (OPERATORS, POSITIONS)
    assert found.reached.any()
    assert (found.force_n[~found.reached] == 0.0).all()


def test_how_the_hand_runs_on_in_fifty_by_nine_cases(benchmark):
    muscle = Muscle.from_library(library())
    force = np.linspace(40.0, 300.0, OPERATORS * POSITIONS).reshape(OPERATORS, POSITIONS)
    run = benchmark(run_on, force, np.full_like(force, 2.0), muscle, fixed_mass_kg=0.5, end_m=0.4)
    assert run.overrun_m.shape[:2] == force.shape
    assert (run.overrun_m > 0.0).all()
    assert (run.overrun_m <= 0.4).all()


def test_a_mechanism_drive_of_forty_one_positions(benchmark):
    asked = ergo.read_study("gasket_punch").with_values({"study.positions": 41})
    drive = benchmark(lambda: machine_of(asked, library()).drive)
    assert drive.demand_n.shape == (41,)
    assert (np.diff(drive.hand_travel_m) > 0.0).all()


def test_reading_a_study(benchmark):
    found = benchmark(ergo.read_study, "gasket_punch")
    assert found.study.positions == 41
    assert found.lever.length_mm > 0.0


def test_drawing_two_thousand_operators(benchmark):
    people = benchmark.pedantic(draw, args=(library(), "us_army_2012"), rounds=3, kwargs={
        "women_share": 0.5, "count": 2000, "seed": 1, "hand": "right", "age_years": (18.0, 60.0), "shoes_mm": 25.0,
        "glove": "none"})  # fmt: skip
    assert people.women.mean() == pytest.approx(0.5, abs=0.001)


def test_bookkeeping_of_two_hundred_placements(benchmark, study, tmp_path_factory):
    asked = placements_of(study, ["lever.length_mm=201:300:1", "linkage.branch=open,crossed"])

    def kept():
        path = tmp_path_factory.mktemp("bookkeeping") / "s.db"
        sweep(study, asked, path, workers=0, judge=judge)
        return path

    path = benchmark.pedantic(kept, rounds=3)
    assert len(read_store(path)[1]) == asked.count == 200
