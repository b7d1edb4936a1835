"""Where hand or lever strikes: energy and peak force of the blow against published limits of the body."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library
from ergo.errors import DataError
from ergo.frames import Array
from ergo.letgo.parameters import rows
from ergo.sources import weakest

TABLE = "body_contact_iso_ts_15066_2016"
REGIONS = {
    "skull_forehead": "skull or forehead",
    "face": "face",
    "neck_sides": "sides of the neck",
    "neck_front": "front of the neck",
    "back_shoulders": "back or shoulders",
    "chest": "chest",
    "abdomen": "abdomen",
    "pelvis": "pelvis",
    "upper_arm_elbow": "upper arm or elbow",
    "lower_arm_wrist": "lower arm or wrist",
    "hand_fingers": "hand or fingers",
    "thigh_knee": "thigh or knee",
    "lower_leg": "lower leg",
}
WITHOUT_LIMIT = ("neck_front",)
NEWTONS_PER_METRE = 1e3  # of one N/mm


def parameter_names(region: str) -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that a contact of one region rests on."""
    kinds = ("spring_n_per_mm", "mass_kg")
    if region not in WITHOUT_LIMIT:
        kinds = (*kinds, "quasi_static_n", "transient_factor")
    return tuple((TABLE, f"{region}.{kind}") for kind in kinds)


@dataclass(frozen=True)
class Region:
    """One region of the body as a spring and a mass, with its limits; NaN limits where there are none.

    spring_n_per_m : spring constant [N/m]
    mass_kg : effective mass [kg]
    quasi_static_n : limit of a lasting clamping force [N]
    transient_n : limit of a blow's peak force [N]
    status : the weakest status of its rows

    Source: iso_ts_15066_2016, tables A.2 and A.3.
    """

    name: str
    spring_n_per_m: float
    mass_kg: float
    quasi_static_n: float
    transient_n: float
    status: str

    @classmethod
    def from_library(cls, library: Library, region: str) -> "Region":
        """Return one region of the shipped table; a DataError if the region or one of its rows is missing."""
        if region not in REGIONS:
            msg = f"no region {region} in {TABLE}; there are: {', '.join(REGIONS)}"
            raise DataError(msg)
        names = [name for _, name in parameter_names(region)]
        found = rows(library, TABLE, names, f"contact with the {REGIONS[region]}")
        values = {name.partition(".")[2]: value for name, value in found.values().items()}
        quasi = values.get("quasi_static_n", np.nan)
        return cls(
            name=region,
            spring_n_per_m=values["spring_n_per_mm"] * NEWTONS_PER_METRE,
            mass_kg=values["mass_kg"],
            quasi_static_n=quasi,
            transient_n=quasi * values.get("transient_factor", np.nan),
            status=weakest([row.status for row in found.rows.values()]),
        )

    @property
    def words(self) -> str:
        """The region in words."""
        return REGIONS[self.name]


@dataclass(frozen=True)
class Contact:
    """A contact at many cells, shaped as the speeds given.

    region : the region struck
    energy_j : energy that the blow turns into pressing the region in [J]
    peak_n : peak force of the blow [N]
    pressed_n : force that still presses once the blow is over [N]
    within : True where peak and pressing force stay inside their limits; False where a limit is passed
    covered : False where the region has no limit, or the cell no speed; `within` is False there
    cautions : what the numbers do not say
    """

    region: Region
    energy_j: Array
    peak_n: Array
    pressed_n: Array
    within: NDArray[np.bool_]
    covered: NDArray[np.bool_]
    cautions: tuple[str, ...]


def strike(
    region: Region,
    speed_m_s: ArrayLike,
    striking_mass_kg: ArrayLike,
    pressed_n: ArrayLike = 0.0,
    *,
    region_is_held: ArrayLike = False,
) -> Contact:
    """Return energy and peak force where a mass strikes a region of the body, or the region strikes a fixed thing.

    Parameters
    ----------
    region : what is struck
    speed_m_s : (...) closing speed [m/s]; NaN where nothing is met
    striking_mass_kg : (...) mass that moves: arm, lever and tool at the hand [kg]; infinite for a fixed machine
    pressed_n : (...) force that goes on pressing after the blow [N]
    region_is_held : True where the region cannot give way, or is itself part of the striking mass, as the
        hand is that strikes a guard; then the region's own mass plays no part

    Returns
    -------
    Contact

    Valid range: blunt contact over an area; the region springs as one constant.
    Equation: F = v sqrt(k m), E = m v^2 / 2, 1 / m = 1 / striking mass + 1 / region's mass.
    Source: iso_ts_15066_2016, annex A.
    """
    speed, mass, pressed, held = np.broadcast_arrays(
        np.asarray(speed_m_s, dtype=float),
        np.asarray(striking_mass_kg, dtype=float),
        np.asarray(pressed_n, dtype=float),
        np.asarray(region_is_held, dtype=bool),
    )
    with np.errstate(divide="ignore"):
        reduced = 1.0 / (1.0 / mass + np.where(held, 0.0, 1.0 / region.mass_kg))
    peak = speed * np.sqrt(region.spring_n_per_m * reduced)
    covered = np.isfinite(peak) & np.isfinite(region.transient_n)
    with np.errstate(invalid="ignore"):
        within = covered & (peak <= region.transient_n) & (pressed <= region.quasi_static_n)
    return Contact(
        region=region,
        energy_j=0.5 * reduced * speed**2,
        peak_n=peak,
        pressed_n=pressed.copy(),
        within=within,
        covered=covered,
        cautions=_cautions(region),
    )


def _cautions(region: Region) -> tuple[str, ...]:
    said = [
        "Contact limits are those for collaborating robots, used for want of limits for levers.",
        "Force only: an edge or a point can wound below these forces.",
    ]
    if not np.isfinite(region.transient_n):
        said.append(f"There is no limit for the {region.words}: contact there must not happen.")
    elif region.transient_n == region.quasi_static_n:
        said.append(f"A blow to the {region.words} is not allowed at all; the clamping limit stands in for a limit.")
    if region.status == "memory":
        said.append(f"Numbers for the {region.words} were recalled, not checked against the print.")
    return tuple(said)
