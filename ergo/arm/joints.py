"""Ranges of the joints as the kernel wants them: cosines, sines and tangents, so that no arc is taken while searching."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.datasets import Library

Array = NDArray[np.float64]
TABLE = "joint_ranges"


@dataclass(frozen=True)
class JointRanges:
    """Ranges of motion [rad] with the allowances of a held bar; the same for all operators.

    Valid range: healthy adults of 18 to 64 years; ranges fall with age, which is not modelled.
    Source: table `joint_ranges`, one source and status a row.
    """

    elbow_flexion_rad: float
    shoulder_extension_rad: float
    horizontal_extension_rad: float
    shoulder_adduction_rad: float
    medial_rotation_rad: float
    lateral_rotation_rad: float
    pronation_rad: float
    supination_rad: float
    radial_deviation_rad: float
    ulnar_deviation_rad: float
    natural_grip_angle_rad: float
    oblique_grip_rad: float
    protraction_m: float
    reach_ease_share: float

    @classmethod
    def from_library(cls, library: Library) -> "JointRanges":
        """Return the ranges of the shipped table, or of a changed one."""
        values = library.values(TABLE)
        fields = {}
        for name, value in values.items():
            if name.endswith("_deg"):
                fields[name.removesuffix("_deg") + "_rad"] = float(np.deg2rad(value))
            elif name.endswith("_mm"):
                fields[name.removesuffix("_mm") + "_m"] = value * 1e-3
            else:
                fields[name] = value
        return cls(**fields)

    def vector(self) -> Array:
        """Return the kernel's range vector (11,)."""
        found = np.zeros(11)
        found[k.COS_ELBOW_MIN] = np.cos(np.pi - self.elbow_flexion_rad)
        found[k.TAN_EXTENSION] = np.tan(self.shoulder_extension_rad)
        found[k.TAN_BEHIND] = np.tan(self.horizontal_extension_rad)
        found[k.TAN_ADDUCTION] = np.tan(self.shoulder_adduction_rad)
        found[k.COS_MEDIAL] = np.cos(self.medial_rotation_rad)
        found[k.COS_LATERAL] = np.cos(self.lateral_rotation_rad)
        found[k.COS_PRONATION] = np.cos(self.pronation_rad)
        found[k.COS_SUPINATION] = np.cos(self.supination_rad)
        rest, slack = self.natural_grip_angle_rad, self.oblique_grip_rad
        found[k.SIN_RADIAL] = np.sin(max(rest - self.radial_deviation_rad - slack, -np.pi / 2))
        found[k.SIN_ULNAR] = np.sin(min(rest + self.ulnar_deviation_rad + slack, np.pi / 2))
        found[k.SIN_NATURAL] = np.sin(rest)
        return found
