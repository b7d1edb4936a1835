"""de Leva 1996, table 4: the shipped rows, and the arm put together from them."""

import numpy as np
import pytest

from ergo.arm.segments import Segments
from ergo.datasets import library

SEGMENTS = Segments.from_library(library())


@pytest.mark.parametrize(
    ("name", "men", "women"),
    # table 4: mass and centre of mass in per cent, men and women
    [("upper_arm", (2.71, 57.72), (2.55, 57.54)), ("forearm", (1.62, 45.74), (1.38, 45.59)),
     ("hand", (0.61, 79.00), (0.56, 74.74)), ("trunk_3", (43.46, 43.10), (42.57, 37.82)),
     ("head_2", (6.94, 50.02), (6.68, 48.41)), ("thigh", (14.16, 40.95), (14.78, 36.12)),
     ("shank", (4.33, 43.95), (4.81, 43.52)), ("foot", (1.37, 44.15), (1.29, 40.14))],
)  # fmt: skip
def test_table_4_mass_and_centre_of_mass(name, men, women):
    sex = np.array([False, True])
    assert SEGMENTS.mass_share(name, sex) * 100.0 == pytest.approx([men[0], women[0]], abs=1e-9)
    assert SEGMENTS.com_share(name, sex) * 100.0 == pytest.approx([men[1], women[1]], abs=1e-9)


def test_table_4_upper_arm_radii_of_gyration():
    found = SEGMENTS.gyration_share("upper_arm", [False, True]) * 100.0
    assert found == pytest.approx(np.array([[28.5, 26.9, 15.8], [27.8, 26.0, 14.8]]), abs=1e-9)


def test_the_segments_add_up_to_a_whole_body():
    # head, trunk and twice the limbs; the table's own rounding leaves 0.01 to 0.02 of a per cent
    for woman in (False, True):
        once = SEGMENTS.mass_share("trunk_3", woman) + SEGMENTS.mass_share("head_2", woman)
        limbs = ("upper_arm", "forearm", "hand", "thigh", "shank", "foot")
        twice = 2.0 * sum(SEGMENTS.mass_share(name, woman) for name in limbs)
        assert once + twice == pytest.approx(1.0, abs=2.5e-4)


def test_forearm_and_fist_join_by_the_parallel_axis_rule():
    # a man of 80 kg with the sample's own forearm of 268.9 mm, written out from table 4 by hand
    arm = SEGMENTS.arm(False, 80.0, 0.2689 + 0.065, 0.065)
    forearm, hand = 80.0 * 0.0162, 80.0 * 0.0061
    at_forearm, at_hand = 0.4574 * 0.2689, 0.2689 + 0.79 * 0.0862
    centre = (forearm * at_forearm + hand * at_hand) / (forearm + hand)
    about_elbow_axis = forearm * ((0.265 * 0.2689) ** 2 + (at_forearm - centre) ** 2)
    about_elbow_axis += hand * ((0.513 * 0.0862) ** 2 + (at_hand - centre) ** 2)
    link = 0.3339
    assert arm.forearm_hand_kg == pytest.approx(forearm + hand, rel=1e-12)
    assert arm.forearm_hand_com * link == pytest.approx(centre, rel=1e-12)
    found = arm.forearm_hand_kg * (arm.forearm_hand_gyration[1] * link) ** 2
    assert found == pytest.approx(about_elbow_axis, rel=1e-12)


def test_the_upper_arm_disagreement_between_sets_is_told():
    caveats = " ".join(library().table("segment_parameters_de_leva_1996").caveats)
    assert "58 %" in caveats
    assert "44 %" in caveats
