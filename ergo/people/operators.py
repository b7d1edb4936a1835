"""The operators: n virtual people as a frozen struct of arrays, in SI, shod and gloved as the study says."""

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library
from ergo.people.dimensions import BODY_TABLE, DIMENSIONS, links
from ergo.people.populations import SexModel, read_population
from ergo.people.sampling import (
    AGE,
    COMMON,
    JOINT_FACTORS,
    JOINTS,
    draw_sizes,
    mass_deviate,
    normal_points,
    sobol_points,
)

Array = NDArray[np.float64]
GLOVES = ("none", "thin", "heavy")
HANDS = ("right", "left")
STREAM_WOMEN, STREAM_MEN = 0, 1
MM = 1e-3


@dataclass(frozen=True)
class Operators:
    """n operators; arrays (n,) in m, kg, years; heights over the floor include the shoes.

    `strength_common_z` (n,) is a standard normal correlated with body mass; `strength_joint_z` (n, 16) are
    independent ones, one a joint function.
    """

    population: str
    hand: str
    glove: str
    women: NDArray[np.bool_]
    age_years: Array
    mass_kg: Array
    stature_m: Array
    stature_shod_m: Array
    acromion_height_m: Array
    acromion_above_seat_m: Array
    elbow_height_m: Array
    eye_height_m: Array
    eye_above_seat_m: Array
    shoulder_joint_drop_m: Array
    shoulder_half_breadth_m: Array
    upper_arm_m: Array
    forearm_grip_m: Array
    wrist_grip_m: Array
    forward_grip_reach_m: Array
    hip_height_m: Array
    hip_above_seat_m: Array
    ankle_height_m: Array
    foot_length_m: Array
    ankle_ahead_of_heel_m: Array
    body_front_m: Array
    body_front_seated_m: Array
    chest_depth_m: Array
    chest_half_breadth_m: Array
    hand_length_m: Array
    hand_breadth_m: Array
    hand_depth_m: Array
    thigh_clearance_m: Array
    buttock_knee_m: Array
    knee_height_seated_m: Array
    popliteal_height_m: Array
    strength_common_z: Array
    strength_joint_z: Array


def draw(library: Library, population: str | Path, *, women_share: float, count: int, seed: int,
         hand: str = "right", age_years: tuple[float, float] = (18.0, 65.0), shoes_mm: float = 0.0,
         glove: str = "none") -> Operators:  # fmt: skip
    """Return operators of a population; the same seed and count give the same people whatever they work at.

    Parameters
    ----------
    library : Library
        The tables.
    population : str or Path
        A shipped population, or a user's CSV file.
    women_share : float
        Met exactly, to the nearest whole person; women come first.
    count, seed : int
        People drawn, and the seed of the draw.
    hand : str
        Hand that works the lever, `right` or `left`: it changes nobody's body.
    age_years : tuple
        Youngest and oldest [years]; ages are even between them, and change strength, not body size.
    shoes_mm : float
        Thickness of the soles [mm], added to every height over the floor.
    glove : str
        `none`, `thin` or `heavy`.

    Returns
    -------
    Operators
    """
    if hand not in HANDS or glove not in GLOVES or not 0.0 <= women_share <= 1.0 or count < 1:
        msg = f"hand one of {HANDS}, glove one of {GLOVES}, women_share 0 to 1, count from 1"
        raise ValueError(msg)
    people = read_population(library, population)
    women = round(women_share * count)
    halves = [
        _of_sex(people.women, women, seed, age_years, library, women=True),
        _of_sex(people.men, count - women, seed, age_years, library, women=False),
    ]
    joined = {key: np.concatenate([half[key] for half in halves]) for key in halves[0]}
    return _worn(people.name, joined, library, hand, shoes_mm, glove)


def _of_sex(model: SexModel, count: int, seed: int, age_years: tuple[float, float], library: Library, *, women: bool
            ) -> dict[str, Array]:  # fmt: skip
    """Return sizes, age and strength deviates of people of one sex."""
    points = sobol_points(count, seed, STREAM_WOMEN if women else STREAM_MEN)
    z = normal_points(points)
    with_mass = library.values(BODY_TABLE)["common_factor_mass_correlation"]
    return {
        **draw_sizes(model, z[:, : len(DIMENSIONS)]),
        "women": np.full(count, women),
        "age": age_years[0] + (age_years[1] - age_years[0]) * points[:, AGE],
        "common": with_mass * mass_deviate(model, z) + np.sqrt(1.0 - with_mass**2) * z[:, COMMON],
        "joints": z[:, JOINTS : JOINTS + JOINT_FACTORS],
    }


def _worn(population: str, sizes: dict[str, Array], library: Library, hand: str, shoes_mm: float, glove: str
          ) -> Operators:  # fmt: skip
    """Return the operators in SI, shod and gloved."""
    rows = library.values(BODY_TABLE)
    women = sizes["women"].astype(bool)
    made = links(sizes, library)
    m = {name: value * MM for name, value in sizes.items() if name in DIMENSIONS}
    return Operators(
        population=population,
        hand=hand,
        glove=glove,
        women=women,
        age_years=sizes["age"],
        mass_kg=sizes["body_mass"],
        stature_m=m["stature"],
        acromion_above_seat_m=made.shoulder_height_seated * MM,
        eye_above_seat_m=m["eye_height_sitting"],
        shoulder_joint_drop_m=made.shoulder_joint_drop * MM,
        shoulder_half_breadth_m=made.shoulder_half_breadth * MM,
        upper_arm_m=made.upper_arm_link * MM,
        forearm_grip_m=made.forearm_grip_link * MM,
        wrist_grip_m=np.where(women, rows["wrist_grip_women_mm"], rows["wrist_grip_men_mm"]) * MM,
        forward_grip_reach_m=made.forward_grip_reach * MM,
        hip_above_seat_m=np.full(women.size, rows["hip_above_seat_mm"] * MM),
        ankle_ahead_of_heel_m=rows["ankle_ahead_of_heel_share"] * m["foot_length"],
        body_front_m=rows["body_front_share"] * m["waist_depth"],
        body_front_seated_m=rows["body_front_share"] * m["abdominal_depth_sitting"],
        chest_depth_m=m["chest_depth"],
        chest_half_breadth_m=0.5 * m["chest_breadth"],
        hand_length_m=m["hand_length"],
        hand_breadth_m=m["hand_breadth"] + rows[f"glove_{glove}_breadth_mm"] * MM,
        hand_depth_m=rows["hand_depth_share"] * m["hand_breadth"] + rows[f"glove_{glove}_depth_mm"] * MM,
        thigh_clearance_m=m["thigh_clearance"],
        buttock_knee_m=m["buttock_knee_length"],
        strength_common_z=sizes["common"],
        strength_joint_z=sizes["joints"],
        **_shod(m, rows, shoes_mm * MM),
    )


def _shod(m: dict[str, Array], rows: dict[str, float], shoe_m: float) -> dict[str, Array]:
    """Return what the shoes change: heights over the floor, and the foot's length."""
    return {
        "stature_shod_m": m["stature"] + shoe_m,
        "acromion_height_m": m["acromion_height"] + shoe_m,
        "elbow_height_m": m["elbow_height"] + shoe_m,
        "eye_height_m": m["eye_height"] + shoe_m,
        "hip_height_m": m["trochanter_height"] + rows["hip_joint_above_trochanter_mm"] * MM + shoe_m,
        "ankle_height_m": m["ankle_height"] + shoe_m,
        "knee_height_seated_m": m["knee_height_sitting"] + shoe_m,
        "popliteal_height_m": m["popliteal_height"] + shoe_m,
        "foot_length_m": m["foot_length"] + (rows["shoe_length_mm"] * MM if shoe_m > 0.0 else 0.0),
    }
