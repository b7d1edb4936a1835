"""Germany, 18 to 65 years: DIN 33402-2:2005-12, read in a reproduction, P5, P50, P95 in steps of 5 mm."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.people.operators import draw
from ergo.people.percentiles import percentiles

LIBRARY = library()
ROWS = {
    ("men", "stature_mm"): (1650, 1750, 1855),
    ("women", "stature_mm"): (1535, 1625, 1720),
    ("men", "shoulder_height_standing_mm"): (1345, 1450, 1550),
    ("women", "shoulder_height_standing_mm"): (1260, 1345, 1425),
    ("men", "elbow_height_standing_mm"): (1025, 1100, 1175),
    ("women", "elbow_height_standing_mm"): (960, 1020, 1080),
    ("men", "eye_height_mm"): (1530, 1630, 1735),
    ("women", "eye_height_mm"): (1435, 1515, 1605),
    ("men", "elbow_grip_length_mm"): (325, 350, 390),
    ("women", "elbow_grip_length_mm"): (295, 315, 350),
    ("men", "popliteal_height_mm"): (410, 450, 490),
    ("women", "popliteal_height_mm"): (375, 415, 450),
}


@pytest.mark.parametrize(("sex", "name"), ROWS)
def test_the_standards_rows_come_back(sex, name):
    got = percentiles(LIBRARY, "germany_2005")[sex][name]
    # Printed in steps of 5 mm, and kept as printed: half a step would already be as good as the standard.
    assert [got[m] for m in ("p05", "p50", "p95")] == pytest.approx(ROWS[sex, name], abs=2.5)


@pytest.mark.parametrize(
    ("women", "rows"), [(False, (1345, 1450, 1550, 1025, 1100, 1175)), (True, (1260, 1345, 1425, 960, 1020, 1080))]
)
def test_drawn_germans(women, rows):
    people = draw(LIBRARY, "germany_2005", women_share=float(women), count=8192, seed=1)
    got = [*np.percentile(people.acromion_height_m, (5, 50, 95)), *np.percentile(people.elbow_height_m, (5, 50, 95))]
    # 8192 people: a P5 has a standard error of 1.5 mm at most.
    assert np.array(got) * 1e3 == pytest.approx(rows, abs=5)
    # One person's shoulder lies above the elbow by about an upper arm, though both come from rows of their own.
    apart = people.acromion_height_m - people.elbow_height_m
    assert apart.min() > 0.200
    assert np.median(apart) == pytest.approx((rows[1] - rows[4]) * 1e-3, abs=0.005)


def test_mass_that_the_standard_does_not_give():
    # German adults of 2005, official survey of households (recalled): men 82 kg, women 68 kg on average.
    people = draw(LIBRARY, "germany_2005", women_share=0.5, count=8192, seed=1)
    for chosen, mass in ((~people.women, 82.0), (people.women, 68.0)):
        assert people.mass_kg[chosen].mean() == pytest.approx(mass, rel=0.05)
