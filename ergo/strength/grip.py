"""What a hand can hold: grip strength by sex, age and hand, and what a handle makes of it."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library

Array = NDArray[np.float64]
NORMS, HANDLE = "grip_mathiowetz_1985", "grip_on_handle"
SURFACES = ("bare metal", "rubber")
_DIAMETERS_MM = (38.1, 50.8, 63.5, 76.2)
_DIAMETER_ROWS = ("grip_share_38_mm", "grip_share_51_mm", "grip_share_64_mm", "grip_share_76_mm")


@dataclass(frozen=True)
class GripCapability:
    """What n hands can hold on one grip; `not_covered` says where a published range was left."""

    grip_strength_n: Array
    breakaway_across_n: Array
    slide_along_n: Array
    not_covered: str


def grip_strength_n(women: NDArray[np.bool_], age_years: Array, hand: str, z: Array, library: Library) -> Array:
    """Return grip strength of n people.

    Parameters
    ----------
    women, age_years : arrays
        (n,) sex and age [years].
    hand : str
        right or left.
    z : Array
        (n,) standard normal of the person's grip.

    Returns
    -------
    Array
        (n,) [N], lognormal with the table's mean and SD between the middles of its age bands.

    Notes
    -----
    Valid range: 20 to 75 years and over; below 22 the youngest band counts.
    Source: mathiowetz_1985, all bands.
    """
    found = np.zeros(women.size)
    for sex, chosen in (("female", women), ("male", ~women)):
        rows = library.table(NORMS).where(sex=sex, hand=hand)
        middle = np.array([int(a[:2]) + 2.5 for a in rows.texts("age")])
        mean = np.interp(age_years, middle, rows.numbers("mean_n"))
        spread = np.sqrt(np.log1p((np.interp(age_years, middle, rows.numbers("sd_n")) / mean) ** 2))
        found = np.where(chosen, mean * np.exp(spread * z - 0.5 * spread**2), found)
    return found


def grip_capability(women: NDArray[np.bool_], age_years: Array, hand: str, common_z: Array, own_z: Array, *, kind: str,
                    surface: str, diameter_m: float, glove: str, library: Library) -> GripCapability:  # fmt: skip
    """Return what each hand can hold, square to a grip and along it.

    Parameters
    ----------
    women, age_years, common_z, own_z : arrays
        (n,) sex, age, common strength factor and the grip's own factor.
    hand, kind, surface, glove : str
        Hand used; ball, bar or crossbar; bare metal or rubber; none, thin or heavy.
    diameter_m : float
        Diameter of the grip [m].

    Returns
    -------
    GripCapability
        `breakaway_across_n`: pulled square to the grip until the fingers open. `slide_along_n`: along a plain
        bar; a ball has no such direction.

    Notes
    -----
    across = share x grip strength, share 1.58 on a high-friction bar (rubber), 1.26 on a low-friction one (bare
    metal), 1.0 on a ball; along = published push x own grip / mean grip x friction / friction of the bare hand.
    Diameter counts between 38 and 76 mm; a thinner grip takes the 38 mm value, a thicker one the 76 mm value, and
    `not_covered` says so.
    Source: young_2009 (abstract), seo_2008 table 2, grip_cylinder_pmc3855544 (abstract); ball: memory.
    """
    rows = library.values(HANDLE)
    variation = library.values("strength_variation")
    share = variation["common_factor_share"]
    z = np.sqrt(share) * common_z + np.sqrt(1.0 - share) * own_z
    strength = grip_strength_n(women, age_years, hand, z, library)
    if glove != "none":
        strength = strength * rows[f"glove_grip_share_{glove}"]
    size = float(np.interp(diameter_m * 1e3, _DIAMETERS_MM, [rows[r] for r in _DIAMETER_ROWS]))
    friction = rows["friction_bare"] if glove == "none" else rows[f"friction_glove_{glove}"]
    rubber = surface == "rubber"
    if kind == "ball":
        across = rows["breakaway_ball_share"]
    else:
        across = rows["breakaway_high_friction_share"] if rubber else rows["breakaway_low_friction_share"]
    push = rows["slide_rubber_n"] if rubber else rows["slide_bare_metal_n"]
    along = push * strength / rows["slide_reference_grip_n"] * friction / rows["friction_bare"]
    return GripCapability(strength, across * size * strength, size * along, _diameter_note(diameter_m * 1e3))


def _diameter_note(diameter_mm: float) -> str:
    if _DIAMETERS_MM[0] <= diameter_mm <= _DIAMETERS_MM[-1]:
        return ""
    end = _DIAMETERS_MM[0] if diameter_mm < _DIAMETERS_MM[0] else _DIAMETERS_MM[-1]
    return f"a grip of {diameter_mm:.0f} mm is outside the published 38 to 76 mm; the value at {end:.0f} mm is used"
