"""The operators: n virtual people as a frozen struct of arrays, in SI, shod and gloved as the study says."""

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library
from ergo.people.dimensions import BODY_TABLE, DIMENSIONS, links
from ergo.people.populations import Population, SexModel, population
from ergo.people.sampling import JOINT_FACTORS, draw_sizes, mass_deviate, normal_points, sobol_points

Array = NDArray[np.float64]
GLOVES = ("none", "thin", "heavy")
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


def draw(library: Library, name: str | Path, *, women_share: float, count: int, seed: int, hand: str = "right",
         age_years: tuple[float, float] = (18.0, 65.0), shoes_mm: float = 0.0, glove: str = "none") -> Operators:  # fmt: skip
    """Return operators of a population; the same seed and count give the same people whatever they work at.

    Parameters
    ----------
    library : Library
        The tables.
    name : str or Path
        A shipped population, or a user's CSV file.
    women_share, count, seed
        The share of women is met exactly, to the nearest whole person; women come first.
    hand : str
        Hand that works the lever: it changes nobody's body.
    age_years : tuple
        Youngest and oldest; ages are even between them.
    shoes_mm, glove
        What is worn.

    Returns
    -------
    Operators
    """
    people = population(library, name)
    women = round(women_share * count)
    halves = [
        _half(people.women, women, seed, 0, age_years, library, women=True),
        _half(people.men, count - women, seed, 1, age_years, library, women=False),
    ]
    joined = {key: np.concatenate([half[key] for half in halves]) for key in halves[0]}
    measured = people.women.given & people.men.given
    return _worn(people, joined, measured, library, hand, shoes_mm, glove)


def _half(model: SexModel, count: int, seed: int, stream: int, age_years: tuple[float, float], library: Library,
          *, women: bool) -> dict[str, Array]:  # fmt: skip
    points = sobol_points(max(count, 1), seed, stream)[:count]
    z = normal_points(points)
    sizes = draw_sizes(model, z[:, : len(DIMENSIONS)])
    share = library.values(BODY_TABLE)["common_factor_mass_correlation"]
    first = len(DIMENSIONS)
    common = share * mass_deviate(model, z) + np.sqrt(1.0 - share**2) * z[:, first + 1]
    return {
        **sizes,
        "women": np.full(count, women),
        "age": age_years[0] + (age_years[1] - age_years[0]) * points[:, first],
        "common": common,
        "joints": z[:, first + 2 : first + 2 + JOINT_FACTORS],
    }


def _worn(people: Population, sizes: dict[str, Array], measured: frozenset[str], library: Library, hand: str,
          shoes_mm: float, glove: str) -> Operators:  # fmt: skip
    rows = library.values(BODY_TABLE)
    women = sizes["women"].astype(bool)
    made = links(sizes, women, library, measured)
    shoe, foot = shoes_mm * MM, sizes["foot_length"] * MM
    front = rows["body_front_share"]
    return Operators(
        population=people.name,
        hand=hand,
        glove=glove,
        women=women,
        age_years=sizes["age"],
        mass_kg=sizes["body_mass"],
        stature_m=sizes["stature"] * MM,
        stature_shod_m=sizes["stature"] * MM + shoe,
        acromion_height_m=made.shoulder_height_standing * MM + shoe,
        acromion_above_seat_m=made.shoulder_height_seated * MM,
        elbow_height_m=made.elbow_height_standing * MM + shoe,
        eye_height_m=sizes["eye_height"] * MM + shoe,
        eye_above_seat_m=sizes["eye_height_sitting"] * MM,
        shoulder_joint_drop_m=made.shoulder_joint_drop * MM,
        shoulder_half_breadth_m=made.shoulder_half_breadth * MM,
        upper_arm_m=made.upper_arm_link * MM,
        forearm_grip_m=made.forearm_grip_link * MM,
        wrist_grip_m=np.where(women, rows["wrist_grip_women_mm"], rows["wrist_grip_men_mm"]) * MM,
        forward_grip_reach_m=made.forward_grip_reach * MM,
        hip_height_m=sizes["trochanter_height"] * MM + shoe,
        hip_above_seat_m=np.full(women.size, rows["hip_above_seat_mm"] * MM),
        ankle_height_m=sizes["ankle_height"] * MM + shoe,
        foot_length_m=foot + (rows["shoe_length_mm"] * MM if shoes_mm > 0.0 else 0.0),
        ankle_ahead_of_heel_m=rows["ankle_ahead_of_heel_share"] * foot,
        body_front_m=front * sizes["waist_depth"] * MM,
        body_front_seated_m=front * sizes["abdominal_depth_sitting"] * MM,
        chest_depth_m=sizes["chest_depth"] * MM,
        chest_half_breadth_m=0.5 * sizes["chest_breadth"] * MM,
        hand_length_m=sizes["hand_length"] * MM,
        hand_breadth_m=(sizes["hand_breadth"] + rows[f"glove_{glove}_breadth_mm"]) * MM,
        hand_depth_m=(rows["hand_depth_share"] * sizes["hand_breadth"] + rows[f"glove_{glove}_depth_mm"]) * MM,
        thigh_clearance_m=sizes["thigh_clearance"] * MM,
        buttock_knee_m=sizes["buttock_knee_length"] * MM,
        knee_height_seated_m=sizes["knee_height_sitting"] * MM + shoe,
        popliteal_height_m=sizes["popliteal_height"] * MM + shoe,
        strength_common_z=sizes["common"],
        strength_joint_z=sizes["joints"],
    )
