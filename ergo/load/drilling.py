"""Thrust and torque of a twist drill, Machinery's Handbook 31, after Shaw and Oxford 1957."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.datasets import Library, Parameter
from ergo.errors import Problem
from ergo.frames import Array
from ergo.sources import weakest

CURVES = "drilling_mh31"
CONSTANTS = "drilling_mh31_constants"
MATERIALS = "drilling_materials_mh31"
POINTS = ("standard", "split")


def materials(library: Library) -> tuple[str, ...]:
    """Return the names of the work materials that have a factor."""
    return tuple(library.parameters(MATERIALS))


def wear_grades(library: Library) -> dict[str, float]:
    """Return the wear factors by the name of the drill's state."""
    values = library.values(CONSTANTS)
    return {name.removeprefix("wear."): value for name, value in values.items() if name.startswith("wear.")}


@dataclass(frozen=True)
class DrillFactors:
    """The printed columns (K,): feed factor against feed [mm/rev], thrust factor against diameter [mm]."""

    feed_mm: tuple[float, ...]
    feed_factor: tuple[float, ...]
    diameter_mm: tuple[float, ...]
    thrust_factor: tuple[float, ...]

    @classmethod
    def from_library(cls, library: Library) -> "DrillFactors":
        """Return the columns of the shipped table."""
        curves = library.table(CURVES)
        feed, diameter = curves.where(factor="feed_factor"), curves.where(factor="thrust_factor")
        columns = (
            feed.numbers("at"),
            feed.numbers("value"),
            diameter.numbers("at"),
            diameter.numbers("value"),
        )
        return cls(*(tuple(float(v) for v in column) for column in columns))


@dataclass(frozen=True)
class Drilling:
    """A twist drill fed into solid metal.

    Parameters
    ----------
    diameter_m : drill diameter [m]
    feed_m_per_rev : feed [m per turn]
    material, point : a name of `materials`, a name of `POINTS`
    wear : wear factor, 1 for a sharp drill
    factors, rows : the tables (`from_library` fills them); `rows` are the constants by short name

    Valid range: inside the printed feeds (0.01 to 0.5 mm per turn) and diameters (1.6 to 16 mm), straight
    lines between printed values; `problems` says "not covered" outside. No value for the peak at
    break-through.
    Equation: T = 0.05 Kd Ff FT B W + 0.007 Kd D^2 J W; M = 0.000025 Kd Ff FM A W with FM = D^1.8 (D in mm).
    Source: machinerys_handbook_31, pp. 1151-1153; the exponent of FM: shaw_oxford_1957, memory.
    """

    diameter_m: float
    feed_m_per_rev: float
    material: str
    point: str
    wear: float
    factors: DrillFactors
    rows: dict[str, Parameter]
    kind: ClassVar[str] = "drilling"

    @classmethod
    def from_library(
        cls,
        library: Library,
        *,
        diameter_m: float,
        feed_m_per_rev: float,
        material: str,
        point: str = "standard",
        wear: str | float = "sharp",
    ) -> "Drilling":
        """Return the drill with the library's rows; `wear` is a grade of `wear_grades` or a factor.

        Raises
        ------
        ValueError
            If material, point or wear grade is unknown.
        """
        constants, kinds = library.parameters(CONSTANTS), library.parameters(MATERIALS)
        for what, name, known in (
            ("material", material, tuple(kinds)),
            ("point", point, POINTS),
            ("wear", wear, tuple(wear_grades(library)) if isinstance(wear, str) else (wear,)),
        ):
            if name not in known:
                msg = f"drilling {what} {name!r} is none of {', '.join(str(k) for k in known)}"
                raise ValueError(msg)
        rows = {
            "cutting": constants["thrust.cutting"],
            "chisel": constants["thrust.chisel"],
            "turning": constants["torque.cutting"],
            "exponent": constants["torque.diameter_exponent"],
            **{name: constants[f"{point}.{name}"] for name in ("a", "b", "j")},
            "kd": kinds[material],
        }
        if isinstance(wear, str):
            rows["wear"] = constants[f"wear.{wear}"]
        factor = rows["wear"].value if isinstance(wear, str) else float(wear)
        factors = DrillFactors.from_library(library)
        return cls(diameter_m, feed_m_per_rev, material, point, factor, factors, rows)

    @property
    def parameters(self) -> tuple[Parameter, ...]:
        """The rows that the thrust rests on; the torque's own rows are left out."""
        return tuple(row for name, row in self.rows.items() if name not in ("turning", "exponent", "a"))

    @property
    def status(self) -> str:
        """The weakest status among the rows that the thrust rests on."""
        return weakest([row.status for row in self.parameters])

    def problems(self) -> tuple[Problem, ...]:
        """Return what is not covered: feed or diameter outside the printed rows, wear below one."""
        found = []
        for key, got, printed, unit in (
            ("feed_mm_per_rev", self.feed_m_per_rev * 1e3, self.factors.feed_mm, "mm per turn"),
            ("diameter_mm", self.diameter_m * 1e3, self.factors.diameter_mm, "mm"),
        ):
            low, high = min(printed), max(printed)
            if not low - 1e-9 <= got <= high + 1e-9:
                what = "not covered: the printed table of Machinery's Handbook 31 does not reach it"
                found.append(Problem(f"load.{key}", what, f"{got:g}", f"{low:g} to {high:g} {unit}"))
        if not 1.0 <= self.wear < np.inf:
            found.append(
                Problem("load.wear", "must be a finite factor, 1 for a sharp drill", f"{self.wear:g}")
            )
        return tuple(found)

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] the load is not covered: nowhere."""
        return ()

    def _feed_factor(self) -> float:
        if found := self.problems():
            raise ValueError("; ".join(p.sentence() for p in found))
        return float(np.interp(self.feed_m_per_rev * 1e3, self.factors.feed_mm, self.factors.feed_factor))

    def thrust_n(self) -> float:
        """Return the thrust [N] of the full drill; ValueError where it is not covered."""
        ff, d = self._feed_factor(), self.diameter_m * 1e3
        ft = float(np.interp(d, self.factors.diameter_mm, self.factors.thrust_factor))
        v = {name: row.value for name, row in self.rows.items()}
        return self.wear * v["kd"] * (v["cutting"] * ff * ft * v["b"] + v["chisel"] * d**2 * v["j"])

    def torque_nm(self) -> float:
        """Return the torque [N m] on the drill, its diameter factor `memory`; ValueError outside."""
        ff, d = self._feed_factor(), self.diameter_m * 1e3
        v = {name: row.value for name, row in self.rows.items()}
        return self.wear * v["turning"] * v["kd"] * ff * d ** v["exponent"] * v["a"]

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the thrust (P,) [N] at slide travels (P,): the full drill cuts all along.

        The travel until break-through is set by wrapping the load in `lets_go.LetsGo`.
        """
        return np.full(np.shape(slide_m), self.thrust_n())
