"""The strong end: lever root and pins under the force of the strongest operators."""

import math
from dataclasses import dataclass

from ergo.datasets import Library
from ergo.errors import DataError
from ergo.letgo.parameters import rows
from ergo.sources import weakest

TABLE = "strong_end_parameters"
MATERIALS = "lever_materials"
THREADS = "metric_threads_coarse"
PASCALS = 1e6  # of one MPa
# A section or shear plane as it is made, and the row of its notch factor.
FINISHES = {
    "plain": "notch_plain",
    "shoulder": "notch_shoulder",
    "cross hole": "notch_cross_hole",
    "rolled thread": "notch_thread_rolled",
    "cut thread": "notch_thread_cut",
}
SHEAR_PLANES = {"single": 1, "double": 2}


def parameter_names(material: str, finish: str, thread: str = "") -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that one part of a material and finish rests on."""
    found = [(MATERIALS, material), (TABLE, FINISHES[finish]), (TABLE, "shear_yield_share"), (TABLE, "safety_wanted")]
    if thread:
        found += [(THREADS, thread), (TABLE, "stress_area_flank")]
    return tuple(found)


def materials(library: Library) -> tuple[str, ...]:
    """Return the names of the materials that have a yield or proof stress."""
    return tuple(library.parameters(MATERIALS))


def threads(library: Library) -> tuple[str, ...]:
    """Return the names of the coarse metric threads."""
    return tuple(library.parameters(THREADS))


@dataclass(frozen=True)
class Material:
    """A material by its yield or proof stress [Pa], in tension and in shear."""

    name: str
    yield_pa: float
    shear_yield_pa: float
    status: str

    @classmethod
    def from_library(cls, library: Library, name: str) -> "Material":
        """Return a material of table `lever_materials`; a DataError if it is not there."""
        found = rows(library, MATERIALS, [name], f"the strength of {name}")
        share = rows(library, TABLE, ["shear_yield_share"], "strength in shear")
        yield_pa = found.values()[name] * PASCALS
        status = weakest([found.rows[name].status, share.rows["shear_yield_share"].status])
        return cls(name, yield_pa, yield_pa * share.values()["shear_yield_share"], status)


@dataclass(frozen=True)
class Finish:
    """How a section is made, and the factor by which its notch raises the stress."""

    name: str
    notch: float
    status: str

    @classmethod
    def from_library(cls, library: Library, name: str) -> "Finish":
        """Return a finish of table `strong_end_parameters`; a DataError if there is none of that name."""
        if name not in FINISHES:
            msg = f"no finish {name}; there are: {', '.join(FINISHES)}"
            raise DataError(msg)
        row = rows(library, TABLE, [FINISHES[name]], f"the notch of a {name}").rows[FINISHES[name]]
        return cls(name, row.value, row.status)


@dataclass(frozen=True)
class Part:
    """One part of the strong end.

    name : which part
    stress_pa : greatest nominal stress [Pa], in bending or shear
    notched_pa : the same times the notch factor
    bears_pa : yield or proof stress that it is held against, in shear where the part shears
    kind : `bending` or `shear`
    status : the weakest status of the rows behind it
    """

    name: str
    stress_pa: float
    notched_pa: float
    bears_pa: float
    kind: str
    status: str

    @property
    def safety(self) -> float:
        """Strength over notched stress; infinite without load."""
        return self.bears_pa / self.notched_pa if self.notched_pa > 0.0 else math.inf


@dataclass(frozen=True)
class StrongEnd:
    """All parts under the strongest operators' force, and which is weak.

    force_n : hand force that was taken [N]
    wanted : safety that is asked for
    """

    force_n: float
    parts: tuple[Part, ...]
    wanted: float

    @property
    def weak(self) -> Part:
        """The part with the least safety."""
        return min(self.parts, key=lambda part: part.safety)

    @property
    def safety(self) -> float:
        """The least safety of all parts."""
        return self.weak.safety

    @property
    def enough(self) -> bool:
        """True where every part has the wanted safety."""
        return self.safety >= self.wanted

    def sentence(self) -> str:
        """Return the verdict in one sentence that names the weak part."""
        verdict = "is enough" if self.enough else "is too little"
        return (
            f"At {self.force_n:.0f} N the weak part is the {self.weak.name}, in {self.weak.kind}, with a safety of "
            f"{self.safety:.2f} against yield, which {verdict} for the {self.wanted:g} asked."
        )


def round_modulus_m3(diameter_m: float) -> float:
    """Return the section modulus of a round bar [m3]: pi d^3 / 32."""
    return math.pi * diameter_m**3 / 32.0


def tube_modulus_m3(outer_m: float, inner_m: float) -> float:
    """Return the section modulus of a round tube [m3]: pi (D^4 - d^4) / (32 D); inner below outer diameter."""
    if not 0.0 <= inner_m < outer_m:
        msg = f"a tube's bore must lie between 0 and its outer diameter, got {inner_m:g} in {outer_m:g} m"
        raise ValueError(msg)
    return math.pi * (outer_m**4 - inner_m**4) / (32.0 * outer_m)


def rectangle_modulus_m3(along_force_m: float, across_m: float) -> float:
    """Return the section modulus of a flat bar [m3]: b h^2 / 6, h along the hand force."""
    return across_m * along_force_m**2 / 6.0


def stress_diameter_m(library: Library, thread: str) -> float:
    """Return the diameter of a coarse metric thread's stress area [m].

    Equation: d - 0.9382 P. Source: iso_898_1; pitches iso_261.
    """
    pitch = rows(library, THREADS, [thread], f"the stress area of {thread}").values()[thread]
    flank = rows(library, TABLE, ["stress_area_flank"], "a thread's stress area").values()["stress_area_flank"]
    return (float(thread.removeprefix("M")) - flank * pitch) * 1e-3


def stress_area_m2(library: Library, thread: str) -> float:
    """Return the stress area of a coarse metric thread [m2].

    Equation: A = pi/4 (d - 0.9382 P)^2. Source: iso_898_1.
    """
    return math.pi / 4.0 * stress_diameter_m(library, thread) ** 2


def bent(name: str, force_n: float, arm_m: float, modulus_m3: float, material: Material, finish: Finish) -> Part:
    """Return a section in bending, such as the lever's root under the hand force.

    Parameters
    ----------
    name : which part
    force_n : force square to the lever [N]
    arm_m : from the force to the section [m]
    modulus_m3 : of the section [m3]; of the stress diameter where the section is threaded
    material, finish : of the section

    Returns
    -------
    Part

    Valid range: slender levers, elastic up to yield; the shear of the section is small beside its bending.
    Equation: stress = force x arm / modulus. Source: shigley (bending).
    """
    stress = abs(force_n) * arm_m / modulus_m3
    status = weakest([material.status, finish.status])
    return Part(name, stress, finish.notch * stress, material.yield_pa, "bending", status)


def sheared(name: str, force_n: float, area_m2: float, planes: int, material: Material, finish: Finish) -> Part:
    """Return a pin in single or double shear.

    Parameters
    ----------
    name : which part
    force_n : force across the pin [N]
    area_m2 : of one shear plane [m2]; the stress area where the thread lies in the plane
    planes : 1 in single, 2 in double shear
    material, finish : of the pin at the shear plane

    Returns
    -------
    Part

    Valid range: pins that fit without play worth bending; mean shear over the plane.
    Equation: stress = force / (planes x area), against yield / sqrt(3). Source: shigley (pins in shear).
    """
    stress = abs(force_n) / (planes * area_m2)
    status = weakest([material.status, finish.status])
    return Part(name, stress, finish.notch * stress, material.shear_yield_pa, "shear", status)


def strong_end(force_n: float, parts: "tuple[Part, ...] | list[Part]", library: Library) -> StrongEnd:
    """Return the verdict over all parts at the strongest operators' hand force [N]; parts must not be empty."""
    if not parts:
        msg = "the strong end needs at least one part"
        raise ValueError(msg)
    wanted = rows(library, TABLE, ["safety_wanted"], "the verdict on the strong end").values()["safety_wanted"]
    return StrongEnd(float(force_n), tuple(parts), wanted)
