"""Pressing a shaft into a hub: contact pressure by Lame's thick-walled cylinders, force by friction."""

from dataclasses import dataclass
from typing import ClassVar

import numpy as np
from numpy.typing import ArrayLike

from ergo.datasets import Library, Parameter
from ergo.errors import Problem
from ergo.frames import Array
from ergo.sources import weakest

CONSTANTS = "elastic_constants"


def materials(library: Library) -> tuple[str, ...]:
    """Return the names of the materials that have elastic constants."""
    names = library.parameters(CONSTANTS)
    return tuple(dict.fromkeys(name.split(":")[0] for name in names))


@dataclass(frozen=True)
class Metal:
    """Elastic constants of one part: modulus [Pa] and Poisson's ratio, with the rows they come from."""

    modulus_pa: float
    poisson: float
    parameters: tuple[Parameter, ...] = ()

    @classmethod
    def from_library(cls, library: Library, name: str) -> "Metal":
        """Return a shipped material.

        Raises
        ------
        ValueError
            If it is unknown.
        """
        if name not in materials(library):
            msg = f"press fit material {name!r} is none of {', '.join(materials(library))}"
            raise ValueError(msg)
        rows = library.parameters(CONSTANTS)
        modulus, poisson = rows[f"{name}: modulus"], rows[f"{name}: poisson"]
        return cls(modulus.value, poisson.value, (modulus, poisson))


@dataclass(frozen=True)
class PressFit:
    """A shaft pressed into a hub of the same length of fit.

    Parameters
    ----------
    shaft_m, hub_m, length_m : fit diameter d, outer diameter of the hub D, length of the fit L [m]
    interference_m : shaft diameter less bore diameter [m], on diameter
    shaft, hub : their metals
    friction : coefficient of friction while pressing in
    shaft_bore_m : bore of a hollow shaft [m], 0 for a solid one
    engages_at_m : slide travel from the start at which the shaft enters the hub [m]

    Valid range: elastic, smooth, long enough for plane stress to hold on average; roughness that is
    pressed flat is not taken off the interference.
    Equation: p = delta / (d (C_hub + C_shaft)), C_hub = ((D^2 + d^2) / (D^2 - d^2) + nu) / E,
    C_shaft = ((d^2 + b^2) / (d^2 - b^2) - nu) / E; F = mu pi d p times the engaged length, which grows
    with the slide's travel up to L and stays there.
    Source: lame_1852, thick-walled cylinder.
    """

    shaft_m: float
    hub_m: float
    length_m: float
    interference_m: float
    shaft: Metal
    hub: Metal
    friction: float
    shaft_bore_m: float = 0.0
    engages_at_m: float = 0.0
    kind: ClassVar[str] = "press fit"

    @classmethod
    def from_library(
        cls,
        library: Library,
        *,
        shaft_m: float,
        hub_m: float,
        length_m: float,
        interference_m: float,
        material_shaft: str,
        material_hub: str,
        friction: float,
        shaft_bore_m: float = 0.0,
        engages_at_m: float = 0.0,
    ) -> "PressFit":
        """Return the fit with the library's elastic constants; ValueError for an unknown material."""
        shaft, hub = Metal.from_library(library, material_shaft), Metal.from_library(library, material_hub)
        sizes = (shaft_m, hub_m, length_m, interference_m)
        return cls(*sizes, shaft, hub, friction, shaft_bore_m, engages_at_m)

    @property
    def parameters(self) -> tuple[Parameter, ...]:
        """The rows that the force rests on."""
        return tuple(dict.fromkeys((*self.shaft.parameters, *self.hub.parameters)))

    @property
    def status(self) -> str:
        """The weakest status among those rows; `derived` where the metals were given as numbers."""
        return weakest([row.status for row in self.parameters] or ["derived"])

    def problems(self) -> tuple[Problem, ...]:
        """Return what makes the fit meaningless; empty when nothing does."""
        checks = (
            ("shaft_mm", self.shaft_m > 0.0, self.shaft_m * 1e3, "above zero"),
            (
                "hub_mm",
                self.hub_m > self.shaft_m,
                self.hub_m * 1e3,
                f"above shaft_mm, {self.shaft_m * 1e3:g}",
            ),
            ("length_mm", self.length_m > 0.0, self.length_m * 1e3, "above zero"),
            ("interference_um", self.interference_m >= 0.0, self.interference_m * 1e6, "zero or above"),
            ("friction", self.friction >= 0.0, self.friction, "zero or above"),
            (
                "shaft_bore_mm",
                0.0 <= self.shaft_bore_m < self.shaft_m,
                self.shaft_bore_m * 1e3,
                "below shaft_mm",
            ),
        )
        return tuple(
            Problem(f"load.{key}", "is outside what a press fit can be", f"{got:g}", allowed)
            for key, good, got, allowed in checks
            if not (good and np.isfinite(got))
        )

    def reach_problems(self, slide_m: ArrayLike) -> tuple[Problem, ...]:
        """Return where along the travel (P,) [m] the load is not covered: nowhere."""
        return ()

    def pressure_pa(self) -> float:
        """Return the contact pressure [Pa]."""
        d2, big2, bore2 = self.shaft_m**2, self.hub_m**2, self.shaft_bore_m**2
        hub = ((big2 + d2) / (big2 - d2) + self.hub.poisson) / self.hub.modulus_pa
        shaft = ((d2 + bore2) / (d2 - bore2) - self.shaft.poisson) / self.shaft.modulus_pa
        return self.interference_m / (self.shaft_m * (hub + shaft))

    def hub_stress_pa(self) -> float:
        """Return the hoop stress [Pa] in the hub's bore, p (D^2 + d^2) / (D^2 - d^2)."""
        d2, big2 = self.shaft_m**2, self.hub_m**2
        return self.pressure_pa() * (big2 + d2) / (big2 - d2)

    def force_n(self, slide_m: ArrayLike) -> Array:
        """Return the pressing force (P,) [N] at slide travels (P,) from the start [m]."""
        engaged = np.clip(np.asarray(slide_m, dtype=float) - self.engages_at_m, 0.0, self.length_m)
        return self.friction * np.pi * self.shaft_m * self.pressure_pa() * engaged
