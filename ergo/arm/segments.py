"""Segment masses, centres of mass and radii of gyration by sex, as shares of body mass and segment length."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library

Array = NDArray[np.float64]
TABLE = "segment_parameters_de_leva_1996"
SEXES = ("male", "female")
_RADII = ("rg_sagittal_pct", "rg_transverse_pct", "rg_longitudinal_pct")


@dataclass(frozen=True)
class Segment:
    """One segment; the first entry of every array is men's, the second women's.

    mass : (2,) share of body mass
    com : (2,) centre of mass from the first-named end, share of segment length
    gyration : (2, 3) radii of gyration about the sagittal, transverse and long axis, shares of length
    length_m : (2,) mean length in the sample [m]
    """

    mass: Array
    com: Array
    gyration: Array
    length_m: Array


@dataclass(frozen=True)
class ArmMasses:
    """Masses of one arm, as two rigid links from shoulder to elbow to grip; arrays (n,) or numbers.

    upper_arm_kg, forearm_hand_kg : masses [kg]
    upper_arm_com, forearm_hand_com : centre of mass from the upper end, share of link length
    upper_arm_gyration, forearm_hand_gyration : (..., 3) radii of gyration about the link's sagittal,
        transverse (the elbow's axis) and long axis, shares of link length
    """

    upper_arm_kg: Array
    forearm_hand_kg: Array
    upper_arm_com: Array
    forearm_hand_com: Array
    upper_arm_gyration: Array
    forearm_hand_gyration: Array


@dataclass(frozen=True)
class Segments:
    """The segments that the models use.

    upper_arm : shoulder joint centre to elbow joint centre
    forearm : elbow joint centre to wrist joint centre
    hand : wrist joint centre to the third knuckle
    trunk_3 : middle of the shoulder joint centres to middle of the hip joint centres
    head_2 : top of the head to the seventh neck vertebra
    thigh, shank, foot : hip to knee, knee to ankle, heel to toe tip

    Valid range: adults; the sample was young and fit.
    Source: de_leva_1996, table 4.
    """

    upper_arm: Segment
    forearm: Segment
    hand: Segment
    trunk_3: Segment
    head_2: Segment
    thigh: Segment
    shank: Segment
    foot: Segment

    @classmethod
    def from_library(cls, library: Library) -> "Segments":
        """Return the segments of the shipped table."""
        table = library.table(TABLE)
        found = {}
        for name in cls.__dataclass_fields__:
            rows = [table.row(sex=sex, segment=name) for sex in SEXES]
            found[name] = Segment(
                mass=np.array([float(r["mass_pct_body"]) for r in rows]) / 100.0,
                com=np.array([float(r["com_pct_from_first_endpoint"]) for r in rows]) / 100.0,
                gyration=np.array([[float(r[axis]) for axis in _RADII] for r in rows]) / 100.0,
                length_m=np.array([float(r["mean_length_mm"]) for r in rows]) / 1000.0,
            )
        return cls(**found)

    def _of(self, name: str, women: ArrayLike) -> tuple[Segment, NDArray[np.intp]]:
        return getattr(self, name), np.asarray(women, dtype=bool).astype(np.intp)

    def mass_share(self, name: str, women: ArrayLike) -> Array:
        """Return a segment's share of body mass (n,) for operators who are women (n,) or not."""
        segment, sex = self._of(name, women)
        return segment.mass[sex]

    def com_share(self, name: str, women: ArrayLike) -> Array:
        """Return a segment's centre of mass (n,) from its first-named end, as a share of its length."""
        segment, sex = self._of(name, women)
        return segment.com[sex]

    def gyration_share(self, name: str, women: ArrayLike) -> Array:
        """Return a segment's radii of gyration (n, 3): sagittal, transverse, long axis, shares of length."""
        segment, sex = self._of(name, women)
        return segment.gyration[sex]

    def arm(
        self, women: ArrayLike, mass_kg: ArrayLike, forearm_grip_m: ArrayLike, wrist_grip_m: ArrayLike
    ) -> ArmMasses:
        """Return the masses of the working arm, forearm and fist as one rigid link from elbow to grip.

        Parameters
        ----------
        women : (n,) True for a woman
        mass_kg : (n,) body mass [kg]
        forearm_grip_m : (n,) elbow joint centre to grip centre [m]
        wrist_grip_m : (n,) wrist joint centre to grip centre [m]

        Returns
        -------
        ArmMasses
            Two bodies in line joined by the parallel-axis rule; the hand's length is taken in de Leva's
            proportion to the forearm, and the wrist is rigid.

        Source: de_leva_1996, table 4.
        """
        body = np.asarray(mass_kg, dtype=float)
        link, forearm = np.asarray(forearm_grip_m, dtype=float), self._of("forearm", women)
        wrist = link - np.asarray(wrist_grip_m, dtype=float)
        hand_length = wrist * (self.hand.length_m / self.forearm.length_m)[forearm[1]]
        parts = []
        for name, start, length in (("forearm", 0.0 * wrist, wrist), ("hand", wrist, hand_length)):
            share = self.mass_share(name, women)
            at = start + self.com_share(name, women) * length
            parts.append((share * body, at, (self.gyration_share(name, women) * length[..., None]) ** 2))
        total = parts[0][0] + parts[1][0]
        centre = (parts[0][0] * parts[0][1] + parts[1][0] * parts[1][1]) / total
        square = np.zeros(parts[0][2].shape)
        for mass, at, radius_square in parts:
            square += (mass / total)[..., None] * radius_square
            square[..., :2] += (mass / total * (at - centre) ** 2)[..., None]
        return ArmMasses(
            upper_arm_kg=self.mass_share("upper_arm", women) * body,
            forearm_hand_kg=total,
            upper_arm_com=self.com_share("upper_arm", women),
            forearm_hand_com=centre / link,
            upper_arm_gyration=self.gyration_share("upper_arm", women),
            forearm_hand_gyration=np.sqrt(square) / link[..., None],
        )
