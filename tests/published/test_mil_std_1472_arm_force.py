"""The model's P5 men against all 60 cells of the seated arm-force table (MIL-STD-1472, status memory).

The table's subjects sat against a backrest and held a vertical grip with the forearm level; so here: upper arm in the
sagittal plane at the elbow angle less 90 degrees, no stance limit. No strength row was tuned to this table.
"""

import numpy as np
import pytest

from ergo.arm import kernels as k
from ergo.arm.body import Support
from ergo.arm.posture_limits import COLUMNS, arm_limits, verdict
from ergo.datasets import library
from ergo.people.operators import draw
from ergo.strength.hand_capability import LIMITS, HandTask, Workplace, pack

ANGLES = (180, 150, 120, 90, 60)
DIRECTIONS = {
    "pull": (0, -1, 0), "push": (0, 1, 0), "up": (0, 0, 1), "down": (0, 0, -1), "in": (-1, 0, 0), "out": (1, 0, 0),
}  # fmt: skip
TABLE = library().table("arm_force_mil_std_1472")


def printed(direction, hand, angle):
    return float(TABLE.row(direction=direction, hand=hand, elbow_deg=str(angle))["p5_men_n"])


def bench_of(hand, tables=None):
    tables = tables or library()
    people = draw(tables, "us_army_2012", women_share=0.0, count=400, seed=3, hand=hand, age_years=(18, 45))
    place = Workplace(0.0, 0.1, 0.6, (0, 0), (0, 0), 0.3, Support(True, 0.45, -0.6), "seat back")
    task = HandTask(np.zeros((1, 3)), np.array([[0.0, -1, 0]]), np.array([[0.0, 0, 1]]), False, np.ones(1))
    huge = np.full(people.mass_kg.size, 1e6)  # the dynamometer's handgrip held the hand
    return pack(people, place, task, huge, huge, tables)


def seated_force(bench, op, elbow_deg, direction):
    """Force and limit of one man with the arm in the sagittal plane, forearm level."""
    raised = np.deg2rad(elbow_deg - 90.0)
    shoulder = np.array([op[k.HALF_BREADTH], -0.6, 1.0])
    elbow = shoulder + op[k.UPPER] * np.array([0.0, np.sin(raised), -np.cos(raised)])
    grip = elbow + np.array([0.0, op[k.FOREARM], 0.0])
    line = grip - shoulder
    target = np.array([*grip, *direction, 0.0, 0.0, 1.0])
    best = min(np.linspace(-1.2, 1.2, 25), key=lambda s: abs(upper_arm_x(op, line, s)))
    best = min(np.linspace(best - 0.1, best + 0.1, 21), key=lambda s: abs(upper_arm_x(op, line, s)))
    row = np.zeros(COLUMNS)
    arm_limits(op, bench.shape, bench.limits, False, (*shoulder, 0.0), (-0.6, 0.5, 0.0, 1.0), target, np.cos(best), np.sin(best),
               row)  # fmt: skip
    force, code = verdict(row)
    along = float(line @ np.array(direction)) / np.linalg.norm(line)
    girdle = op[k.GIRDLE_PUSH] / along if along > 1e-6 else (op[k.GIRDLE_PULL] / -along if along < -1e-6 else 1e9)
    return (girdle, k.LIMIT_GIRDLE) if girdle < force else (force, code)


def upper_arm_x(op, line, swivel):
    return k.arm_lines(*line, op[k.UPPER], op[k.FOREARM], np.cos(swivel), np.sin(swivel))[0]


def ratios(tables=None):
    found = {}
    for hand in ("right", "left"):
        bench = bench_of(hand, tables)
        for name, direction in DIRECTIONS.items():
            for angle in ANGLES:
                answers = np.array([seated_force(bench, op, angle, direction) for op in bench.ops])
                code = int(np.bincount(answers[:, 1].astype(int), minlength=14).argmax())
                found[hand, name, angle] = (np.percentile(answers[:, 0], 5.0) / printed(name, hand, angle), LIMITS[code])
    return found


@pytest.fixture(scope="module")
def found():
    return ratios()


def test_median_ratio_and_cells_inside_the_band(found, capsys):
    with capsys.disabled():
        print("\nmodel over table, P5 men (limit that decides):")
        for hand in ("right", "left"):
            for name in DIRECTIONS:
                print(f"  {hand:<6}{name:<5}" + "  ".join(f"{a}: {found[hand, name, a][0]:4.2f}" for a in ANGLES))
    values = np.array([v for v, _ in found.values()])
    outside = {cell: round(float(v), 2) for cell, (v, _) in found.items() if not 0.6 < v < 1.67}
    # The band 0.6 to 1.67 is a factor 5/3 either way: two tables of strength by different hands differ by as much.
    assert 0.9 <= np.median(values) <= 1.2
    assert values.size - len(outside) >= 54, outside
    # The cells outside: pull with the elbow bent to 60 degrees (the upper arm points behind the trunk, where no
    # published fall of extension strength was found), and pulls and pushes of the left hand, whose printed values
    # lie up to 40 % below the right hand's while the model's left hand has 92 % of the right.
    assert all(direction in ("pull", "push") for _, direction, _ in outside), outside


def test_effect_of_the_other_sources(found, capsys):
    """Where two sources disagree: the textbook's elbow extension is 1.4 times higher, its shoulder extension lower."""
    for row, factor in (("elbow_extension", 64.7 / 46.0), ("shoulder_extension", 101.4 / 112.4)):
        other = ratios(library().with_factor("joint_strength", row, factor))
        moved = {cell: (found[cell][0], other[cell][0]) for cell in found if abs(other[cell][0] / found[cell][0] - 1) > 0.01}
        with capsys.disabled():
            print(f"\n{row} after the textbook (x {factor:.2f}) moves {len(moved)} of 60 cells:")
            print("  " + "; ".join(f"{' '.join(map(str, c))} {a:.2f} to {b:.2f}" for c, (a, b) in moved.items()))
        assert moved
        assert all((b > a) == (factor > 1.0) for a, b in moved.values())


def test_newtons_are_the_printed_pounds():
    # Each printed N value equals its lb value x 4.448 to the printed unit (reference notes 1.1).
    for row in TABLE.rows:
        assert float(row["p5_men_n"]) == pytest.approx(float(row["p5_men_lb"]) * 4.448, abs=1.0)
