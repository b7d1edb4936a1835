"""British adults (after Pheasant, partly recalled) and Hong Kong adults (seen), P5, P50, P95 and SD.

The last test withholds the British arm and shoulder rows and lets the US army's regression on stature and mass tell
them: how well proportions carry to another people.
"""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.people.operators import draw
from ergo.people.percentiles import percentiles

LIBRARY = library()
SEEN = {
    ("great_britain", "men", "stature_mm"): (1625, 1740, 1855),
    ("great_britain", "women", "stature_mm"): (1505, 1610, 1710),
    ("great_britain", "men", "elbow_rest_height_mm"): (195, 245, 295),
    ("great_britain", "women", "shoulder_elbow_length_mm"): (300, 330, 360),
    ("hong_kong", "men", "stature_mm"): (1585, 1680, 1775),
    ("hong_kong", "women", "stature_mm"): (1455, 1555, 1655),
    ("hong_kong", "men", "shoulder_height_seated_mm"): (555, 605, 655),
    ("hong_kong", "women", "shoulder_height_seated_mm"): (510, 560, 610),
    ("hong_kong", "men", "elbow_height_standing_mm"): (950, 1015, 1080),
    ("japan", "men", "stature_mm"): (1560, 1655, 1750),
    ("japan", "women", "stature_mm"): (1450, 1530, 1610),
}


@pytest.mark.parametrize(("population", "sex", "name"), SEEN)
def test_rows_come_back(population, sex, name):
    got = percentiles(LIBRARY, population)[sex][name]
    # Printed in steps of 5 mm and kept as printed.
    assert [got[m] for m in ("p05", "p50", "p95")] == pytest.approx(SEEN[population, sex, name], abs=2.5)


@pytest.mark.parametrize(
    ("population", "women", "sd"),
    [("great_britain", False, 70), ("great_britain", True, 62), ("hong_kong", False, 58), ("hong_kong", True, 60),
     ("japan", False, 58), ("japan", True, 48)],
)  # fmt: skip
def test_the_printed_sd_of_stature(population, women, sd):
    # The SD is printed beside the percentiles and not used by the model; percentiles are rounded to 5 mm, which moves
    # an SD read from them by up to 1.5 mm.
    people = draw(LIBRARY, population, women_share=float(women), count=8192, seed=1)
    assert people.stature_m.std() * 1e3 == pytest.approx(sd, abs=2.5)


def test_the_straight_british_arm():
    # Measured from acromion to grip: 665 and 600 mm. The links and the joint's drop must add up to it within 4 %: two
    # samples, a joint centre known to 20 mm, and a sum of lengths taken on a bent elbow.
    british = percentiles(LIBRARY, "great_britain")
    for sex, measured in (("men", 665.0), ("women", 600.0)):
        arm = british[sex]["upper_arm_link_mm"]["p50"] + british[sex]["forearm_grip_link_mm"]["p50"]
        drop = british[sex]["acromion_radiale_length_mm"]["p50"] * 0.119
        assert arm + drop == pytest.approx(measured, rel=0.04)


def test_british_rows_told_from_stature_and_mass_alone(tmp_path):
    own = tmp_path / "stature_and_mass.csv"
    own.write_text(
        "sex,dimension,unit,mean,sd,p05,p50,p95\n"
        "male,stature,mm,,,1625,1740,1855\nmale,body_mass,kg,,,55,75,94\n"
        "female,stature,mm,,,1505,1610,1710\nfemale,body_mass,kg,,,44,63,81\n"
    )
    told = percentiles(LIBRARY, own)
    # Medians of the British table, men and women. Heights and limb lengths carry over within 2 %; two surveys never
    # take a landmark alike.
    withheld = {
        "acromion_height_mm": (1425, 1310), "elbow_height_mm": (1090, 1005), "shoulder_elbow_length_mm": (365, 330),
        "forearm_hand_length_mm": (475, 430), "hand_length_mm": (190, 175), "foot_length_mm": (265, 235),
        "sitting_height_mm": (910, 850), "eye_height_mm": (1630, 1505),
    }  # fmt: skip
    for name, (men, women) in withheld.items():
        allowed = 0.04 if name in ("foot_length_mm", "hand_length_mm") else 0.02
        assert told["men"][name]["p50"] == pytest.approx(men, rel=allowed), name
        assert told["women"][name]["p50"] == pytest.approx(women, rel=allowed), name
    spread = np.array([told["men"]["acromion_height_mm"][m] for m in ("p05", "p95")])
    assert spread == pytest.approx([1315, 1535], rel=0.015)  # men's P5 and P95 of shoulder height
