"""Properties of capability: what it cannot exceed, what cannot lower it, and what it must not depend on."""

import dataclasses
import hashlib
import os
import subprocess
import sys

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import ergo
from ergo.arm import kernels as k
from ergo.arm.posture_limits import COLUMNS, judge_posture
from ergo.evaluation.plan import plan
from ergo.evaluation.run import easiest_postures
from ergo.strength.hand_capability import hand_capability
from tests.arm import numpy_twin
from tests.arm.made_operators import LIMITS, SHAPE, operators, scene, targets

SMALL = {"operators.count": 60, "study.positions": 7}
STUDIES = ("gasket_punch", "fixture_clamp", "arbor_press")
STRENGTHS = [*range(k.GIRDLE_PULL, k.OPERATOR_COLUMNS)]
POSTURE = st.tuples(st.floats(-0.3, 0.3), st.floats(-0.6, -0.25), st.floats(0.0, 1.0), st.floats(0.0, 0.69), st.floats(-1.5, 2.2))


def planned(name, **more):
    return plan(ergo.read_study(name).with_values({**SMALL, **{key.replace("__", "."): v for key, v in more.items()}}), ergo.library())


def found(made):
    return hand_capability(made.bench, made.task, made.scouts)


def judged(op, posture, target, view=None):
    view = scene(0.9, 0.6, ball=True) if view is None else view
    return judge_posture(op, SHAPE, view, LIMITS, posture[0], posture[1], target, *posture[2:], np.zeros(COLUMNS))[0]


@settings(max_examples=200)
@given(POSTURE, st.integers(0, 20), st.sampled_from(STRENGTHS), st.floats(1.0, 3.0))
def test_a_stronger_person_never_gives_less_in_the_same_posture(posture, seed, column, factor):
    op, target = operators(1, seed)[0], targets(np.random.default_rng(seed), 0.9, 3)[1]
    stronger = op.copy()
    stronger[column] *= factor
    assert judged(stronger, posture, target) >= judged(op, posture, target) - 1e-9


@settings(max_examples=200)
@given(POSTURE, st.integers(0, 20), st.floats(0.1, 0.6), st.floats(0.0, 0.4))
def test_a_rougher_floor_never_takes_force_away(posture, seed, friction, more):
    op, target = operators(1, seed)[0], targets(np.random.default_rng(seed), 0.9, 3)[1]
    low, high = scene(0.9, friction, ball=True), scene(0.9, friction + more, ball=True)
    assert judged(op, posture, target, high) >= judged(op, posture, target, low) - 1e-9


@settings(max_examples=100)
@given(POSTURE, st.integers(0, 20), st.floats(-0.5, 0.5))
def test_person_and_handle_moved_sideways_together_change_nothing(posture, seed, aside):
    op, target = operators(1, seed)[0], targets(np.random.default_rng(seed), 0.9, 3)[1]
    moved = target.copy()
    moved[0] += aside
    there = (posture[0] + aside, *posture[1:])
    assert judged(op, there, moved) == pytest.approx(judged(op, posture, target), rel=1e-6, abs=1e-6)


@pytest.mark.parametrize("name", STUDIES)
def test_the_told_force_is_that_of_the_told_posture(name):
    """The NumPy twin, at the stance and posture that the search tells, gives the force that it tells."""
    made = planned(name)
    capability, bench = found(made), made.bench
    compared = 0
    for n in range(0, 60, 4):
        for p in range(7):
            if not capability.reached[n, p]:
                continue
            other, _ = numpy_twin.posture(bench.ops[n], bench.shape, bench.scene, bench.limits, *capability.stance[n],
                                          bench.targets[p], *capability.strongest[n, p])  # fmt: skip
            # The kernel's arc cosine is good to 0.004 degrees, which moves a strength by up to 1e-4 of itself.
            assert capability.force_n[n, p] == pytest.approx(other, rel=3e-4, abs=1e-3)
            compared += 1
    assert compared > 90


@pytest.mark.parametrize("name", STUDIES)
def test_the_told_posture_holds_the_grip(name):
    """Elbow, forearm and grip close up: the drawn hand is at the handle, the elbow one upper arm from the shoulder."""
    made = planned(name)
    capability = found(made)
    posture, ops = easiest_postures(made, capability), made.bench.ops
    grip = made.machine.drive.grip_m[None]
    reached = capability.reached
    fore = np.linalg.norm(grip - posture.elbow, axis=-1)
    upper = np.linalg.norm(posture.elbow - posture.shoulder, axis=-1)
    assert np.abs(fore - ops[:, None, k.FOREARM])[reached].max() < 1e-6
    assert np.abs(upper - ops[:, None, k.UPPER])[reached].max() < 1e-6


@pytest.mark.parametrize("name", STUDIES)
def test_the_easiest_posture_carries_the_demand_where_any_does(name):
    made = planned(name)
    capability, task = found(made), made.task
    need = task.demand_n * task.margin_min / task.share
    carries = capability.reached & (capability.force_n >= need)
    assert carries.any()
    assert (capability.easiest_force_n >= need - 1e-9)[carries].all()


@pytest.mark.parametrize("name", STUDIES)
def test_nobodys_answer_depends_on_who_else_was_drawn(name):
    made = planned(name)
    everybody = found(made)
    rows = np.array([41, 3, 17, 58, 20])
    few = dataclasses.replace(made.bench, ops=made.bench.ops[rows], windows=made.bench.windows[rows])
    some = hand_capability(few, made.task, made.scouts)
    for field in dataclasses.fields(some):
        assert getattr(some, field.name).tobytes() == getattr(everybody, field.name)[rows].tobytes(), field.name


def test_a_heavier_load_never_serves_more():
    served = [float(np.mean((found(made).force_n * made.task.share >= made.task.demand_n).all(axis=1)))
              for made in (planned("gasket_punch", load__force_n=f) for f in (200.0, 420.0, 700.0))]  # fmt: skip
    assert served == sorted(served, reverse=True)
    assert served[0] > served[-1]


def test_the_left_hand_at_the_mirrored_station_is_the_right_hand():
    right = planned("gasket_punch")
    study = right.study
    x, y, z = study.lever.pivot_mm
    low, high = study.operators.stand_x_mm
    # The same people: a left hand is drawn from rows of its own, so the right one's rows stand in for them.
    left = plan(study.with_values({"operators.hand": "left", "lever.pivot_mm": [-x, y, z], "operators.stand_x_mm": [-high, -low]}),
                ergo.library())  # fmt: skip
    # The grip axis has no sign: columns 6 to 8 may point either way.
    assert left.bench.targets[:, :6] == pytest.approx(right.bench.targets[:, :6], abs=1e-12)
    assert left.bench.windows == pytest.approx(right.bench.windows, abs=1e-12)
    here = hand_capability(right.bench, right.task, right.scouts)
    there = hand_capability(dataclasses.replace(left.bench, ops=right.bench.ops), left.task, right.scouts)
    assert there.force_n == pytest.approx(here.force_n, rel=0.02, abs=0.5)


PRINTED = """
import hashlib, ergo
from ergo.evaluation.plan import plan
from ergo.strength.hand_capability import hand_capability
made = plan(ergo.read_study("arbor_press").with_values({"operators.count": 60, "study.positions": 7}), ergo.library())
found = hand_capability(made.bench, made.task, made.scouts)
print(hashlib.sha256(found.force_n.tobytes() + found.easiest.tobytes() + found.stance.tobytes()).hexdigest())
"""


@pytest.mark.parametrize("threads", ["1", "2"])
def test_the_number_of_threads_changes_no_bit(threads):
    """Where the kernels are compiled in this very run, as in CI, it also holds compiling against loading."""
    done = subprocess.run([sys.executable, "-c", PRINTED], env={**os.environ, "NUMBA_NUM_THREADS": threads},
                          capture_output=True, text=True, check=True)  # fmt: skip
    here = found(planned("arbor_press"))
    mine = hashlib.sha256(here.force_n.tobytes() + here.easiest.tobytes() + here.stance.tobytes()).hexdigest()
    assert done.stdout.strip() == mine
