"""Body dimensions: their names, the survey columns they come from, and the links the model makes of them."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library

Array = NDArray[np.float64]
# Dimension -> column of the 2012 army survey records (mm, kg); three are sums of columns.
SURVEY_COLUMNS = {
    "stature": "stature",
    "body_mass": "weight_kg",
    "acromion_height": "acromialheight",
    "elbow_height": "acromialheight-acromionradialelength",
    "eye_height": "stature-sittingheight+eyeheightsitting",
    "trochanter_height": "trochanterionheight",
    "ankle_height": "lateralmalleolusheight",
    "wrist_height": "wristheight",
    "sitting_height": "sittingheight",
    "eye_height_sitting": "eyeheightsitting",
    "shoulder_height_sitting": "sittingheight-stature+acromialheight",
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
DIMENSIONS = tuple(SURVEY_COLUMNS)
FOLLOWING = DIMENSIONS[2:]  # every dimension but stature and body mass, which the others may be regressed on
BODY_TABLE = "body_model_parameters"


def unit_of(dimension: str) -> str:
    """Return the unit in which a dimension is tabled."""
    return "kg" if dimension == "body_mass" else "mm"


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


def links(sizes: dict[str, Array], women: NDArray[np.bool_], library: Library, measured: frozenset[str]) -> Links:
    """Return the links of n people.

    Parameters
    ----------
    sizes : dict
        Every dimension (n,) [mm, kg].
    women : array
        (n,) whether a woman.
    library : Library
        Holds `body_model_parameters`.
    measured : frozenset
        Dimensions that the population table itself gives: where it gives the forearm's bone but not the reach to
        the grip, the grip link is made from the bone, so that proportions of another people are not carried over.

    Returns
    -------
    Links

    Notes
    -----
    upper arm = 0.846 acromion-radiale (joint centre 0.119 below the acromion, elbow centre 0.035 above radiale);
    forearm to grip = elbow-grip length - 13 mm, or 1.013 radiale-stylion + wrist to grip.
    Source: table `body_model_parameters`, one source and status a row.
    """
    rows = library.values(BODY_TABLE)
    arm = sizes["acromion_radiale_length"]
    drop, above = rows["shoulder_joint_drop_share"], rows["elbow_joint_above_radiale_share"]
    wrist = np.where(women, rows["wrist_grip_women_mm"], rows["wrist_grip_men_mm"])
    if "elbow_grip_length" not in measured and "radiale_stylion_length" in measured:
        fore = rows["forearm_bone_share"] * sizes["radiale_stylion_length"] + wrist
    else:
        fore = sizes["elbow_grip_length"] - rows["olecranon_offset_mm"]
    return Links(
        shoulder_height_standing=sizes["acromion_height"],
        shoulder_height_seated=sizes["shoulder_height_sitting"],
        elbow_height_standing=sizes["elbow_height"],
        upper_arm_link=(1.0 - drop - above) * arm,
        forearm_grip_link=fore,
        forward_grip_reach=sizes["thumb_tip_reach"] - rows["thumb_beyond_grip_share"] * sizes["hand_length"],
        shoulder_joint_drop=drop * arm,
        shoulder_half_breadth=0.5 * sizes["biacromial_breadth"] - rows["shoulder_joint_medial_mm"],
    )
