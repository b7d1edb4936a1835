"""The hand after let-go: how far it runs on, how fast, and what it meets first."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library
from ergo.frames import Array
from ergo.letgo import kernels as k
from ergo.letgo.parameters import SCENARIOS, SEED, rows

TABLE = "letgo_hand"
NAMES = (
    "reflex_latency_s",
    "relaxation_s",
    "stiffness_per_muscle_force_per_m",
    "muscle_arm_share",
    "damping_time_s",
    "relaxed_stiffness_n_per_m",
    "arm_mass_factor",
    "watched_s",
)
SHOULDER = "body_behind_shoulder_share"
NOT_COVERED, NOTHING, END_OF_TRAVEL, ZONE, OWN_BODY = range(-1, 4)
MET_WORDS = {
    NOT_COVERED: "not covered: no posture or no moving mass here",
    NOTHING: "nothing",
    END_OF_TRAVEL: "the end of travel",
    ZONE: "a zone",
    OWN_BODY: "the operator's own body",
}
HEADINGS = (("to the right", "to the left"), ("toward the machine", "away from the machine"), ("up", "down"))


def parameter_names() -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that the hand's overrun rests on."""
    return tuple((TABLE, name) for name in (*NAMES, SHOULDER))


def shoulder_mass_kg(mass_kg: ArrayLike, library: Library) -> Array:
    """Return the mass (n,) [kg] with which the shoulder gives way, from body mass (n,) [kg].

    Source: table `letgo_hand`.
    """
    share = rows(library, TABLE, [SHOULDER], "the mass behind the shoulder").values()[SHOULDER]
    return share * np.asarray(mass_kg, dtype=float)


@dataclass(frozen=True)
class Muscle:
    """The arm's muscles after let-go, in S ways: the first as the rows stand, the others over their ranges.

    latency_s : (S,) time for which the muscle force holds [s]
    relaxation_s : (S,) time in which it then falls by a factor e [s]
    stiffness_per_m : (S,) hand stiffness over hand force [1/m]
    damping_time_s : (S,) hand damping over hand stiffness [s]
    relaxed_n_per_m : (S,) hand stiffness without force [N/m]
    mass_factor : (S,) factor on the arm's effective mass
    watched_s : (S,) time that is followed [s]

    Equation: hand stiffness = muscle stiffness x (moment arm / forearm)^2 and muscle force = hand force x
    forearm / moment arm, so hand stiffness over hand force = 75 /m x moment arm / forearm.
    Source: pmc2784227 table 1 (stiffness, damping); the other rows of table `letgo_hand`.
    """

    latency_s: Array
    relaxation_s: Array
    stiffness_per_m: Array
    damping_time_s: Array
    relaxed_n_per_m: Array
    mass_factor: Array
    watched_s: Array

    @classmethod
    def from_library(cls, library: Library, scenarios: int = SCENARIOS, seed: int = SEED) -> "Muscle":
        """Return the muscles of table `letgo_hand`; a DataError if a row is missing."""
        spread = rows(library, TABLE, NAMES, "how far the hand runs on after let-go").scenarios(scenarios, seed)
        return cls(
            latency_s=spread["reflex_latency_s"],
            relaxation_s=spread["relaxation_s"],
            stiffness_per_m=spread["stiffness_per_muscle_force_per_m"] * spread["muscle_arm_share"],
            damping_time_s=spread["damping_time_s"],
            relaxed_n_per_m=spread["relaxed_stiffness_n_per_m"],
            mass_factor=spread["arm_mass_factor"],
            watched_s=spread["watched_s"],
        )

    def stiffness_n_per_m(self, force_n: ArrayLike) -> Array:
        """Return the hand's stiffness (..., S) [N/m] at hand forces (...) [N] before let-go."""
        force = np.maximum(np.asarray(force_n, dtype=float), 0.0)
        return self.stiffness_per_m * force[..., None] + self.relaxed_n_per_m

    def damping_ns_per_m(self, force_n: ArrayLike) -> Array:
        """Return the hand's damping (..., S) [N s/m] at hand forces (...) [N] before let-go."""
        return self.damping_time_s * self.stiffness_n_per_m(force_n)


@dataclass(frozen=True)
class HandRun:
    """What the hand does after let-go: arrays (n, P, S) of operators, positions and scenarios.

    overrun_m : travel along the path until the hand turns, meets something, or is no longer watched [m]
    peak_speed_m_s : greatest speed until then
    time_s : time from let-go until then
    met : `END_OF_TRAVEL`, `ZONE`, `OWN_BODY`, `NOTHING` or `NOT_COVERED` (there the others are NaN)
    speed_m_s : speed with which it is met, 0 where nothing is
    energy_j : kinetic energy of arm, lever and tool there
    press_n : force with which the muscles still press there
    moving_mass_kg : arm, lever and tool, referred to the hand
    moving_on : True where the hand was still moving when no longer watched
    """

    overrun_m: Array
    peak_speed_m_s: Array
    time_s: Array
    met: NDArray[np.int8]
    speed_m_s: Array
    energy_j: Array
    press_n: Array
    moving_mass_kg: Array
    moving_on: NDArray[np.bool_]

    def band(self, values: Array, who: ArrayLike | None = None) -> Array:
        """Return P5, P50 and P95 (3, P) of `values` (n, P, S) over operators `who` (n,) and scenarios.

        NaN at a position where nobody of `who` is covered.
        """
        chosen = values if who is None else values[np.asarray(who, dtype=bool)]
        flat = np.moveaxis(chosen, 1, 0).reshape(values.shape[1], -1)
        found = np.full((3, values.shape[1]), np.nan)
        if not np.isnan(flat).any() and flat.shape[1]:
            return np.percentile(flat, (5.0, 50.0, 95.0), axis=1)
        for position, row in enumerate(flat):
            known = row[~np.isnan(row)]
            if known.size:
                found[:, position] = np.percentile(known, (5.0, 50.0, 95.0))
        return found

    def met_shares(self, who: ArrayLike | None = None) -> dict[str, Array]:
        """Return by words what is met first: shares (P,) of the covered operators `who` and scenarios."""
        chosen = self.met if who is None else self.met[np.asarray(who, dtype=bool)]
        covered = np.maximum(np.sum(chosen != NOT_COVERED, axis=(0, 2)), 1)
        wanted = (NOTHING, END_OF_TRAVEL, ZONE, OWN_BODY)
        return {MET_WORDS[code]: np.sum(chosen == code, axis=(0, 2)) / covered for code in wanted}


def tool_mass_at_hand_kg(tool_mass_kg: ArrayLike, ratio: ArrayLike) -> Array:
    """Return the tool's mass as the hand feels it (P,) [kg]: mass x (tool travel / hand travel)^2."""
    return np.asarray(tool_mass_kg, dtype=float) * np.asarray(ratio, dtype=float) ** 2


def remaining_n(demand_n: ArrayLike, weight_n: ArrayLike, load_after_share: ArrayLike = 0.0) -> Array:
    """Return the resistance at the hand (P,) [N] that is left once the load is gone.

    Parameters
    ----------
    demand_n : hand force before let-go [N]
    weight_n : its part owed to lever weight and return spring [N]
    load_after_share : share of the load that still resists after let-go

    Returns
    -------
    Array
        weight + share x (demand - weight): friction under load is taken to vanish with the load.
    """
    weight = np.asarray(weight_n, dtype=float)
    return weight + np.asarray(load_after_share, dtype=float) * (np.asarray(demand_n, dtype=float) - weight)


def heading(work_dir: ArrayLike) -> tuple[str, ...]:
    """Return where the hand runs on to, from unit directions (P, 3): the largest part in words."""
    found = []
    for d in np.atleast_2d(np.asarray(work_dir, dtype=float)):
        axis = int(np.argmax(np.abs(d)))
        found.append(HEADINGS[axis][0 if d[axis] > 0.0 else 1])
    return tuple(found)


def run_on(
    force_n: ArrayLike,
    arm_mass_kg: ArrayLike,
    muscle: Muscle,
    *,
    fixed_mass_kg: ArrayLike = 0.0,
    remaining_n: ArrayLike = 0.0,
    remaining_n_per_m: ArrayLike = 0.0,
    end_m: ArrayLike = np.inf,
    zone_m: ArrayLike = np.inf,
    body_m: ArrayLike = np.inf,
) -> HandRun:
    """Return how the hand runs on when the load lets go, for n operators at P positions in S scenarios.

    Parameters
    ----------
    force_n : (n, P) or (P,) hand force along the path just before let-go [N]
    arm_mass_kg : (n, P) effective mass of the arm along the path [kg]; NaN where there is no posture
    muscle : the S scenarios
    fixed_mass_kg : (P,) lever inertia over length squared, and the tool's mass at the hand [kg]
    remaining_n, remaining_n_per_m : (P,) resistance that is left, and its growth with travel [N], [N/m]
    end_m, zone_m, body_m : (n, P) or (P,) way along the path to the end of travel, to a zone, and to the
        operator's own trunk or face [m]; infinite where there is none

    Returns
    -------
    HandRun

    Valid range: travels over which the arm's effective mass and the path's direction hardly change; the
    hand does not let the handle go; no will before `watched_s`. What is left of the load only slows.
    Equation: m x'' = F g(t) - R - (K + R') x - B x', g = 1 until the latency, then exp(-(t - latency) /
    relaxation); K and B as F set them before let-go, as the antagonists take over what the agonists drop.
    Source: table `letgo_hand`.
    """
    given = (force_n, arm_mass_kg, fixed_mass_kg, remaining_n, remaining_n_per_m, end_m, zone_m, body_m)
    cells = np.broadcast_arrays(*(np.atleast_2d(np.asarray(v, dtype=float)) for v in given))
    force, arm, fixed, against, rate, *ways = (np.ascontiguousarray(v) for v in cells)
    with np.errstate(invalid="ignore"):
        covered = np.isfinite(force) & (arm + fixed > 0.0) & np.isfinite(against) & np.isfinite(rate)
    # A mass without end, a straight arm whose shoulder is held, is driven nowhere.
    against = np.where(np.isinf(arm + fixed), force, against)
    ahead = np.stack([np.where(np.isnan(way), np.inf, way) for way in ways])
    first = np.argmin(ahead, axis=0)
    answers = _answers(force, against, rate, arm, fixed, ahead.min(axis=0), covered, muscle)
    mass = np.where(covered, arm, np.nan)[..., None] * muscle.mass_factor + fixed[..., None]
    how = answers[..., k.HOW]
    met = np.where(how == k.MET, (first + END_OF_TRAVEL)[..., None], NOTHING)
    speed = answers[..., k.SPEED]
    at_contact = np.where(how == k.STILL_MOVING, 0.0, speed)
    return HandRun(
        overrun_m=answers[..., k.OVERRUN],
        peak_speed_m_s=answers[..., k.PEAK_SPEED],
        time_s=answers[..., k.TIME],
        met=np.where(covered[..., None], met, NOT_COVERED).astype(np.int8),
        speed_m_s=at_contact,
        energy_j=0.5 * np.where(at_contact == 0.0, 0.0, mass) * at_contact**2,
        press_n=answers[..., k.PRESS],
        moving_mass_kg=mass,
        moving_on=how == k.STILL_MOVING,
    )


def _answers(
    force: Array,
    against: Array,
    rate: Array,
    arm: Array,
    fixed: Array,
    ahead: Array,
    covered: NDArray[np.bool_],
    muscle: Muscle,
) -> Array:
    """Call the kernel; cells that are not covered come back as NaN."""
    packed = np.stack(
        [
            muscle.latency_s,
            1.0 / muscle.relaxation_s,
            muscle.stiffness_per_m,
            muscle.damping_time_s,
            muscle.relaxed_n_per_m,
            muscle.mass_factor,
            muscle.watched_s,
        ]
    )
    answers = np.empty((*force.shape, muscle.latency_s.size, k.ANSWERS))
    known = [np.where(covered, v, 0.0) for v in (force, against, rate, fixed)]
    k.all_cases(known[0], known[1], known[2], np.where(covered, arm, 1.0), known[3], ahead, packed, answers)
    answers[~covered] = np.nan
    return answers


def motion(
    times_s: ArrayLike,
    force_n: float,
    moving_mass_kg: float,
    stiffness_n_per_m: float,
    damping_ns_per_m: float,
    latency_s: float,
    relaxation_s: float,
    remaining_n: float = 0.0,
) -> tuple[Array, Array, Array]:
    """Return travel [m], speed [m/s] and drive [N], each (T,), of one hand at times (T,) after let-go.

    Parameters
    ----------
    times_s : (T,) rising times from let-go on [s]
    force_n, moving_mass_kg, stiffness_n_per_m, damping_ns_per_m, latency_s, relaxation_s, remaining_n
        As in `run_on`, one case.

    Returns
    -------
    tuple
        The motion as the equation of `run_on` gives it, met by nothing and followed past its turn.
    """
    times = np.ascontiguousarray(times_s, dtype=float)
    found = np.empty((times.size, 3))
    k.sampled(
        times,
        float(force_n),
        float(remaining_n),
        float(moving_mass_kg),
        float(damping_ns_per_m),
        float(stiffness_n_per_m),
        float(latency_s),
        1.0 / float(relaxation_s),
        found,
    )
    return found[:, 0], found[:, 1], found[:, 2]
