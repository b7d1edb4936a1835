"""Body dimensions: their names, the survey columns they come from, and the links the model makes of them."""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library
from ergo.sources import weakest

Array = NDArray[np.float64]
# Dimension -> column of the 2012 army survey records, mm and kg.
SURVEY_COLUMNS = {
    "stature": "stature",
    "body_mass": "weight_kg",
    "acromion_height": "acromialheight",
    "trochanter_height": "trochanterionheight",
    "ankle_height": "lateralmalleolusheight",
    "wrist_height": "wristheight",
    "sitting_height": "sittingheight",
    "eye_height_sitting": "eyeheightsitting",
    "elbow_rest_height": "elbowrestheight",
    "thigh_clearance": "thighclearance",
    "knee_height_sitting": "kneeheightsitting",
    "popliteal_height": "poplitealheight",
    "buttock_knee_length": "buttockkneelength",
    "acromion_radiale_length": "acromionradialelength",
    "radiale_stylion_length": "radialestylionlength",
    "shoulder_elbow_length": "shoulderelbowlength",
    "elbow_grip_length": "forearmcenterofgriplength",
    "forearm_hand_length": "forearmhandlength",
    "thumb_tip_reach": "thumbtipreach",
    "biacromial_breadth": "biacromialbreadth",
    "chest_breadth": "chestbreadth",
    "chest_depth": "chestdepth",
    "waist_depth": "waistdepth",
    "abdominal_depth_sitting": "abdominalextensiondepthsitting",
    "hand_length": "handlength",
    "hand_breadth": "handbreadth",
    "foot_length": "footlength",
}
# Dimensions that no column holds and that follow from others, unless a population's table gives them itself.
COMPOSED = {
    "elbow_height": ("acromion_height", "acromion_radiale_length"),
    "eye_height": ("stature", "sitting_height", "eye_height_sitting"),
    "shoulder_height_sitting": ("sitting_height", "stature", "acromion_height"),
    "forward_grip_reach": ("thumb_tip_reach", "hand_length"),
}
DIMENSIONS = (*SURVEY_COLUMNS, *COMPOSED)
FOLLOWING = DIMENSIONS[2:]  # every dimension but stature and body mass, on which the others are regressed
# A missing dimension also follows the first of these that the table gives: the same limb, measured otherwise.
KIN = {
    "acromion_radiale_length": ("shoulder_elbow_length",),
    "shoulder_elbow_length": ("acromion_radiale_length",),
    "elbow_grip_length": ("radiale_stylion_length", "forearm_hand_length"),
    "radiale_stylion_length": ("elbow_grip_length", "forearm_hand_length"),
    "forearm_hand_length": ("elbow_grip_length", "radiale_stylion_length"),
    "thumb_tip_reach": ("forward_grip_reach",),
}
BODY_TABLE = "body_model_parameters"
THUMB = "thumb_beyond_grip_share"
# Link -> the dimensions and the parameter rows it is made of; its status is the weakest of theirs.
LINK_PARTS = {
    "shoulder_height_standing": (("acromion_height",), ()),
    "shoulder_height_seated": (("shoulder_height_sitting",), ()),
    "elbow_height_standing": (("elbow_height",), ()),
    "upper_arm_link": (
        ("acromion_radiale_length",),
        ("shoulder_joint_drop_share", "elbow_joint_above_radiale_share"),
    ),
    "forearm_grip_link": (("elbow_grip_length",), ("olecranon_offset_mm",)),
    "forward_grip_reach": (("forward_grip_reach",), ()),
}


def unit_of(dimension: str) -> str:
    """Return the unit in which a dimension is tabled."""
    return "kg" if dimension == "body_mass" else "mm"


def composed(sizes: Mapping[str, Array], thumb_share: float) -> dict[str, Array]:
    """Return the dimensions that follow from others.

    Parameters
    ----------
    sizes : mapping
        Every measured dimension (n,) [mm, kg].
    thumb_share : float
        Thumb tip beyond the grip centre, as a share of the hand's length.

    Returns
    -------
    dict
        elbow_height = acromion height - acromion-radiale length (the radiale's height);
        eye_height = stature - sitting height + eye height sitting;
        shoulder_height_sitting = sitting height - stature + acromion height;
        forward_grip_reach = thumb tip reach - thumb_share x hand length.
        Source: the survey's own definitions (gordon_2014); none of the four was measured.
    """
    above_seat = sizes["stature"] - sizes["sitting_height"]
    return {
        "elbow_height": sizes["acromion_height"] - sizes["acromion_radiale_length"],
        "eye_height": above_seat + sizes["eye_height_sitting"],
        "shoulder_height_sitting": sizes["acromion_height"] - above_seat,
        "forward_grip_reach": sizes["thumb_tip_reach"] - thumb_share * sizes["hand_length"],
    }


@dataclass(frozen=True)
class Links:
    """Lengths (n,) [mm] that the model makes of measured dimensions, barefoot."""

    shoulder_height_standing: Array
    shoulder_height_seated: Array
    elbow_height_standing: Array
    upper_arm_link: Array
    forearm_grip_link: Array
    forward_grip_reach: Array
    shoulder_joint_drop: Array
    shoulder_half_breadth: Array


def links(sizes: Mapping[str, Array], library: Library) -> Links:
    """Return the links of n people.

    Parameters
    ----------
    sizes : mapping
        Every dimension (n,) [mm, kg].
    library : Library
        Holds `body_model_parameters`.

    Returns
    -------
    Links

    Notes
    -----
    upper arm = acromion-radiale x (1 - shoulder joint below the acromion - elbow joint above the radiale);
    forearm to grip = back of the elbow to the grip centre - back of the elbow to the elbow joint;
    shoulder half breadth = half the biacromial breadth - the joint's place inward of the acromion.
    Source: table `body_model_parameters`, one source and status a row.
    """
    rows = library.values(BODY_TABLE)
    arm = sizes["acromion_radiale_length"]
    drop, above = rows["shoulder_joint_drop_share"], rows["elbow_joint_above_radiale_share"]
    return Links(
        shoulder_height_standing=sizes["acromion_height"],
        shoulder_height_seated=sizes["shoulder_height_sitting"],
        elbow_height_standing=sizes["elbow_height"],
        upper_arm_link=(1.0 - drop - above) * arm,
        forearm_grip_link=sizes["elbow_grip_length"] - rows["olecranon_offset_mm"],
        forward_grip_reach=sizes["forward_grip_reach"],
        shoulder_joint_drop=drop * arm,
        shoulder_half_breadth=0.5 * sizes["biacromial_breadth"] - rows["shoulder_joint_medial_mm"],
    )


def link_statuses(statuses: Mapping[str, str], library: Library) -> dict[str, str]:
    """Return the status of every link: the weakest of the dimensions and parameter rows it is made of."""
    rows = library.parameters(BODY_TABLE)
    return {
        link: weakest([*(statuses[d] for d in dimensions), *(rows[r].status for r in parameters)])
        for link, (dimensions, parameters) in LINK_PARTS.items()
    }
