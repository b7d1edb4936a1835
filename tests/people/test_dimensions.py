"""Dimensions that follow from others, and the links the model makes of them, by arithmetic on paper."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.people.dimensions import (
    BODY_TABLE,
    COMPOSED,
    DIMENSIONS,
    KIN,
    LINK_PARTS,
    composed,
    link_statuses,
    links,
    unit_of,
)

LIBRARY = library()
# One man of the survey, its first row, mm and kg.
MAN = {
    "stature": 1845.0, "acromion_height": 1507.0, "acromion_radiale_length": 365.0, "sitting_height": 937.0,
    "eye_height_sitting": 824.0, "thumb_tip_reach": 891.0, "hand_length": 203.0, "elbow_grip_length": 364.0,
    "biacromial_breadth": 428.0,
}  # fmt: skip


def test_composed_dimensions_of_one_man():
    man = {name: np.array([value]) for name, value in MAN.items()}
    made = composed(man, 0.2)
    assert made["elbow_height"] == pytest.approx([1507 - 365])
    assert made["eye_height"] == pytest.approx([1845 - 937 + 824])
    assert made["shoulder_height_sitting"] == pytest.approx([937 - 1845 + 1507])
    assert made["forward_grip_reach"] == pytest.approx([891 - 40.6])
    assert set(made) == set(COMPOSED)


def test_links_of_one_man():
    man = {name: np.array([value]) for name, value in MAN.items()}
    made = links({**man, **composed(man, 0.2)}, LIBRARY)
    assert made.upper_arm_link == pytest.approx([0.846 * 365])
    assert made.forearm_grip_link == pytest.approx([364 - 13])
    assert made.shoulder_joint_drop == pytest.approx([0.119 * 365])
    assert made.shoulder_half_breadth == pytest.approx([214 - 35])
    assert made.shoulder_height_seated == pytest.approx([599])


def test_a_what_if_moves_the_link_by_what_it_says():
    man = {name: np.array([value]) for name, value in MAN.items()}
    sizes = {**man, **composed(man, 0.2)}
    deeper = links(sizes, LIBRARY.with_value(BODY_TABLE, "shoulder_joint_drop_share", 0.18))
    assert links(sizes, LIBRARY).upper_arm_link - deeper.upper_arm_link == pytest.approx([(0.18 - 0.119) * 365])


def test_a_link_is_no_better_known_than_its_parts():
    statuses = link_statuses(dict.fromkeys(DIMENSIONS, "computed"), LIBRARY)
    rows = LIBRARY.parameters(BODY_TABLE)
    assert statuses["shoulder_height_standing"] == "computed"
    assert rows["olecranon_offset_mm"].status == "memory"
    assert statuses["forearm_grip_link"] == "memory"
    assert set(statuses) == set(LINK_PARTS)


def test_units_and_kin_are_of_known_dimensions():
    assert unit_of("body_mass") == "kg"
    assert unit_of("stature") == "mm"
    assert set(KIN) <= set(DIMENSIONS)
    assert all(k in DIMENSIONS for near in KIN.values() for k in near)


def test_every_parameter_lies_between_its_low_and_high():
    for row in LIBRARY.parameters(BODY_TABLE).values():
        assert row.low <= row.value <= row.high, row.name
