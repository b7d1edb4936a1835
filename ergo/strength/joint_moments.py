"""Isometric strength at each joint, person by person: level by sex, spread, a common factor, posture dependence."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Table
from ergo.people.age import age_strength_share
from ergo.people.operators import Operators

Array = NDArray[np.float64]
TABLE = "joint_strength"
VARIATION = "strength_variation"
# Strengths whose level depends on posture, in the order of the kernel's shape rows.
SHAPED = ("shoulder_flexion", "shoulder_extension", "elbow_flexion", "elbow_extension")
_SHAPE_COLUMNS = ("c0", "c_elbow", "c_elbow2", "c_elevation", "c_elevation_past_45")
# Joint functions that share one of the operator's joint factors: a strong flexor pairs with its own joint.
FUNCTIONS = (
    "shoulder_flexion", "shoulder_extension", "shoulder_abduction", "shoulder_adduction", "horizontal_flexion",
    "horizontal_extension", "medial_rotation", "lateral_rotation", "elbow_flexion", "elbow_extension",
    "wrist_flexion", "wrist_extension", "radial_deviation", "ulnar_deviation", "pronation", "supination",
)  # fmt: skip
GIRDLE = ("girdle_pull", "girdle_push")


@dataclass(frozen=True)
class JointStrengths:
    """Levels, spreads and posture shapes of every joint function.

    Valid range: adults of 18 to 74 years, isometric, a few seconds. Posture shapes hold for elbow angles of
    20 to 180 degrees and elevations of 0 to 180 degrees; behind the trunk the value of the hanging arm is used,
    since no published one was found.
    """

    women: dict[str, float]
    men: dict[str, float]
    centre: dict[str, str]
    variation: dict[str, float]
    common_share: float
    non_dominant_share: float
    shape: Array

    @classmethod
    def from_library(cls, library: Library) -> "JointStrengths":
        """Return the strengths of the shipped tables; `library` may hold changed values (`<function>` scales a row)."""
        table = library.table(TABLE)
        factors = {name: library.factor(TABLE, name) for name in table.texts("function")}
        names = table.texts("function")
        variation = library.values(VARIATION)
        return cls(
            women={n: v * factors[n] for n, v in zip(names, table.numbers("women_nm"), strict=True)},
            men={n: v * factors[n] for n, v in zip(names, table.numbers("men_nm"), strict=True)},
            centre=dict(zip(names, table.texts("centre"), strict=True)),
            variation={n: variation[f"cv_{n}"] for n in names},
            common_share=variation["common_factor_share"],
            non_dominant_share=library.values("stance_parameters")["non_dominant_share"],
            shape=_shapes(table),
        )

    def of(self, people: Operators, library: Library) -> dict[str, Array]:
        """Return each function's strength (n,) [N m; N for the girdle] at its reference posture.

        Lognormal with the row's coefficient of variation; its standard normal is
        sqrt(share) common + sqrt(1 - share) joint, so that the share is the correlation between any two joints.
        """
        age = age_strength_share(people.women, people.age_years, library)
        side = self.non_dominant_share if people.hand == "left" else 1.0
        found = {}
        for name in (*FUNCTIONS, *GIRDLE):
            spread = np.sqrt(np.log1p(self.variation[name] ** 2))
            own = people.strength_joint_z[:, _factor_of(name)]
            z = np.sqrt(self.common_share) * people.strength_common_z + np.sqrt(1.0 - self.common_share) * own
            middle = np.where(people.women, self.women[name], self.men[name])
            if self.centre[name] == "mean":
                middle = middle * np.exp(-0.5 * spread**2)
            found[name] = middle * np.exp(spread * z) * age * side
        return found


def _factor_of(name: str) -> int:
    """Return the column of `strength_joint_z` that a function uses; the girdle shares the shoulder's extension."""
    return {"girdle_pull": 1, "girdle_push": 0}[name] if name in GIRDLE else FUNCTIONS.index(name)


def _shapes(table: Table) -> Array:
    """Return the posture polynomials (4, 5) of the functions in `SHAPED`."""
    rows = [table.row(function=name) for name in SHAPED]
    return np.array([[float(row[column]) for column in _SHAPE_COLUMNS] for row in rows])
