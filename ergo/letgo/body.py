"""The body after let-go: does it keep its balance, take a step, or is it thrown, and which way."""

import dataclasses
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.datasets import Library
from ergo.frames import GRAVITY_M_S2, Array
from ergo.letgo.parameters import SCENARIOS, SEED, rows

TABLE = "letgo_body"
NAMES = (
    "postural_latency_s",
    "pendulum_over_com_height",
    "forward_step_lean_deg",
    "forward_step_lean_older_deg",
    "backward_step_lean_deg",
    "backward_step_lean_older_deg",
    "lean_base_ahead_m",
    "lean_base_behind_m",
    "older_from_years",
    "step_landing_s",
)
NOT_COVERED, KEPT, STEP, THROWN = range(-1, 3)
OUTCOME_WORDS = {
    NOT_COVERED: "not covered: no posture here, or one that could not have held the force",
    KEPT: "kept",
    STEP: "step",
    THROWN: "thrown",
}
# A pressure point this far outside the base before let-go counts as rounding, not as a stance that failed.
BASE_SLACK_M = 0.005


def parameter_names() -> tuple[tuple[str, str], ...]:
    """Return the (table, row) of every number that the body's balance rests on."""
    return tuple((TABLE, name) for name in NAMES)


@dataclass(frozen=True)
class Recovery:
    """How balance is recovered, in S ways: the first as the rows stand, the others over their ranges.

    latency_s : (S,) time for which the pressure under the feet stays where it was [s]
    pendulum_factor : (S,) length of the equivalent pendulum over the height of the centre of mass
    forward_lean_rad, backward_lean_rad : (2, S) greatest lean from which one step recovers, younger and older
    lean_base_ahead_m, lean_base_behind_m : (S,) base ahead of and behind the ankle in those trials [m]
    older_from_years : (S,) age from which the older entries hold
    step_landing_s : (S,) time from let-go until the stepping foot bears [s]

    Source: table `letgo_body`, one source and status a row.
    """

    latency_s: Array
    pendulum_factor: Array
    forward_lean_rad: Array
    backward_lean_rad: Array
    lean_base_ahead_m: Array
    lean_base_behind_m: Array
    older_from_years: Array
    step_landing_s: Array

    @classmethod
    def from_library(cls, library: Library, scenarios: int = SCENARIOS, seed: int = SEED) -> "Recovery":
        """Return the recovery of table `letgo_body`; a DataError if a row is missing."""
        spread = rows(library, TABLE, NAMES, "whether balance is kept after let-go").scenarios(scenarios, seed)

        def lean(way: str) -> Array:
            both = (spread[f"{way}_step_lean_deg"], spread[f"{way}_step_lean_older_deg"])
            return np.deg2rad(np.stack(both))

        return cls(
            latency_s=spread["postural_latency_s"],
            pendulum_factor=spread["pendulum_over_com_height"],
            forward_lean_rad=lean("forward"),
            backward_lean_rad=lean("backward"),
            lean_base_ahead_m=spread["lean_base_ahead_m"],
            lean_base_behind_m=spread["lean_base_behind_m"],
            older_from_years=spread["older_from_years"],
            step_landing_s=spread["step_landing_s"],
        )


@dataclass(frozen=True)
class Surroundings:
    """What holds the body and where it can go; arrays (n,), (n, P) or numbers, lengths along y [m].

    back_m, front_m : ends of the functional base of support
    can_step : False for a seated operator
    room_behind_m, room_ahead_m : free floor for a step behind the base and ahead of it; a bench in front
        leaves the toe space
    held_ahead, held_behind : True where the body leans on a bench edge, or against a seat back: it carries
        the hand's reaction that way and stops the body
    bench_gap_m : way of the body's front to the bench edge, taken at the height of the centre of mass;
        infinite where there is none
    """

    back_m: ArrayLike
    front_m: ArrayLike
    can_step: ArrayLike = True
    room_behind_m: ArrayLike = np.inf
    room_ahead_m: ArrayLike = np.inf
    held_ahead: ArrayLike = False
    held_behind: ArrayLike = False
    bench_gap_m: ArrayLike = np.inf


@dataclass(frozen=True)
class Balance:
    """What the body does after let-go: arrays (n, P, S) of operators, positions and scenarios.

    outcome : `KEPT`, `STEP`, `THROWN` or `NOT_COVERED`
    toward : True where the body moves toward the machine
    pressure_m : (n, P) pressure point that held the force before let-go, y [m]
    extrapolated_m : extrapolated centre of mass at the postural latency, y [m]
    margin_m : its way inside the nearer end of the base, Hof's margin of stability; negative outside [m]
    needed_step_m : length of the step that would catch the body, 0 where none is needed [m]
    no_room : True where a step would have caught the body but the floor is not free
    bench_speed_m_s : speed with which the body's front meets the bench edge, NaN where it does not
    """

    outcome: NDArray[np.int8]
    toward: NDArray[np.bool_]
    pressure_m: Array
    extrapolated_m: Array
    margin_m: Array
    needed_step_m: Array
    no_room: NDArray[np.bool_]
    bench_speed_m_s: Array

    def shares(self, who: ArrayLike | None = None) -> dict[str, Array]:
        """Return the shares kept, step and thrown (P,) over the covered operators `who` (n,) and scenarios."""
        return self._shares(np.ones(self.outcome.shape, dtype=bool), who)

    def shares_toward(self, who: ArrayLike | None = None) -> dict[str, Array]:
        """Return the shares (P,) that keep, step or are thrown while moving toward the machine."""
        return self._shares(self.toward, who)

    def _shares(self, counted: NDArray[np.bool_], who: ArrayLike | None) -> dict[str, Array]:
        chosen = slice(None) if who is None else np.asarray(who, dtype=bool)
        outcome, counted = self.outcome[chosen], counted[chosen]
        covered = np.maximum(np.sum(outcome != NOT_COVERED, axis=(0, 2)), 1)
        wanted = (KEPT, STEP, THROWN)
        return {OUTCOME_WORDS[code]: np.sum(counted & (outcome == code), axis=(0, 2)) / covered for code in wanted}


def extrapolated_com_m(com_m: ArrayLike, speed_m_s: ArrayLike, pendulum_m: ArrayLike) -> Array:
    """Return the extrapolated centre of mass [m]: position + speed / sqrt(g / length).

    Source: hof_2005.
    """
    rate = np.sqrt(GRAVITY_M_S2 / np.asarray(pendulum_m, dtype=float))
    return np.asarray(com_m, dtype=float) + np.asarray(speed_m_s, dtype=float) / rate


def pressure_point_m(
    com_y_m: ArrayLike,
    mass_kg: ArrayLike,
    hand_y_m: ArrayLike,
    hand_height_m: ArrayLike,
    force_y_n: ArrayLike,
    force_z_n: ArrayLike,
) -> Array:
    """Return where the floor presses on a body at rest that puts a force on a handle, y [m]; arrays alike.

    Parameters
    ----------
    com_y_m, mass_kg : centre of mass [m] and mass [kg] of the body, arm included
    hand_y_m, hand_height_m : the hand, its height counted from the floor or seat [m]
    force_y_n, force_z_n : force that the hand puts ON the handle, away from the operator and up [N]

    Returns
    -------
    Array
        From moments about the pressure point: p = (m g y - Fy h + Fz yh) / (m g + Fz); infinite where the
        hand carries the whole body.
    """
    given = (com_y_m, mass_kg, hand_y_m, hand_height_m, force_y_n, force_z_n)
    y, mass, hand_y, height, away, up = (np.asarray(v, dtype=float) for v in given)
    weight = mass * GRAVITY_M_S2
    bears = weight + up
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.where(bears > 0.0, (weight * y - away * height + up * hand_y) / bears, np.inf)


def balance(
    com_y_m: ArrayLike,
    com_height_m: ArrayLike,
    mass_kg: ArrayLike,
    age_years: ArrayLike,
    hand_y_m: ArrayLike,
    hand_height_m: ArrayLike,
    force_y_n: ArrayLike,
    force_z_n: ArrayLike,
    around: Surroundings,
    recovery: Recovery,
) -> Balance:
    """Return what the body of n operators does when the load lets go at P positions, in S scenarios.

    Parameters
    ----------
    com_y_m : (n, P) centre of mass of the body, arm included, y [m]; NaN where there is no posture
    com_height_m : (n,) or (n, P) its height above the ankles, or above the seat [m]
    mass_kg, age_years : (n,)
    hand_y_m, hand_height_m : (P,) or (n, P), height counted from the floor or seat [m]
    force_y_n, force_z_n : (P,) or (n, P) force of the hand ON the handle before let-go [N]
    around : base, room and contacts
    recovery : the S scenarios

    Returns
    -------
    Balance

    Valid range: fore and aft; the base does not slip; arms, hips and the arm's own swing give no help; a bench
    edge or seat back holds at about the height of the centre of mass.
    Equation: y'' = w^2 (y - p), w^2 = g / pendulum, with p the pressure point that held the force; so
    X = y + y' / w = p + (y - p) exp(w latency) against the base. One step catches the body while X lies no
    further past the base than it would after release from the greatest lean that one step recovers, and
    while the floor is free for a step of (X - end of base) exp(w (landing - latency)).
    Source: hof_2005 (condition for dynamic stability); table `letgo_body`.
    """
    y = np.atleast_2d(np.asarray(com_y_m, dtype=float))
    hy, hz, fy, fz = _cells(y, hand_y_m, hand_height_m, force_y_n, force_z_n, by_operator=False)
    height, mass, age, *given = _cells(
        y, com_height_m, mass_kg, age_years, *dataclasses.astuple(around), by_operator=True
    )
    back, front, can_step, behind_room, ahead_room, ahead_held, behind_held, gap = given
    # Where bench edge or seat back takes the hand's reaction, the feet had no part in holding it.
    carried = ((ahead_held > 0.5) & (fy < 0.0)) | ((behind_held > 0.5) & (fy > 0.0))
    p = _if_held(pressure_point_m(y, mass, hy, hz, np.where(carried, 0.0, fy), fz), back, front, height)
    rate = np.sqrt(GRAVITY_M_S2 / (height[..., None] * recovery.pendulum_factor))
    x = p[..., None] + (y - p)[..., None] * np.exp(rate * recovery.latency_s)
    toward = x > y[..., None]
    past = np.where(toward, x - front[..., None], back[..., None] - x)
    held = np.where(toward, ahead_held[..., None], behind_held[..., None]) > 0.5
    catches = (can_step[..., None] > 0.5) & (past <= _step_limit(height, age, rate, recovery, toward))
    needed = np.where(held, 0.0, _needed_step(past, rate, recovery))
    has_room = needed <= np.where(toward, ahead_room[..., None], behind_room[..., None])
    kept = held | (past <= 0.0)
    outcome = np.where(kept, KEPT, np.where(catches & has_room, STEP, THROWN))
    return Balance(
        outcome=np.where(np.isnan(p)[..., None], NOT_COVERED, outcome).astype(np.int8),
        toward=toward,
        pressure_m=p,
        extrapolated_m=x,
        margin_m=np.minimum(front[..., None] - x, x - back[..., None]),
        needed_step_m=needed,
        no_room=~kept & catches & ~has_room,
        bench_speed_m_s=_bench_speed(y, p, front, gap, rate, recovery.latency_s),
    )


def _cells(like: Array, *values: ArrayLike, by_operator: bool) -> tuple[Array, ...]:
    """Return values as cells (n, P) shaped `like`; a plain row (n,) or (P,) is told apart by `by_operator`."""
    cells = (np.asarray(value, dtype=float) for value in values)
    return tuple(np.broadcast_to(c[:, None] if by_operator and c.ndim == 1 else c, like.shape) for c in cells)


def _if_held(p: Array, back: Array, front: Array, height: Array) -> Array:
    """Return the pressure point (n, P), NaN where it lies outside the base: that stance could not hold the force."""
    with np.errstate(invalid="ignore"):
        held = (p >= back - BASE_SLACK_M) & (p <= front + BASE_SLACK_M) & (height > 0.0)
    return np.where(held, p, np.nan)


def _needed_step(past: Array, rate: Array, recovery: Recovery) -> Array:
    """Return the step (n, P, S) [m] that takes the base to the extrapolated centre of mass when the foot bears."""
    until_landing = np.maximum(recovery.step_landing_s - recovery.latency_s, 0.0)
    return np.maximum(past, 0.0) * np.exp(rate * until_landing)


def _step_limit(height: Array, age: Array, rate: Array, recovery: Recovery, toward: NDArray[np.bool_]) -> Array:
    """Return how far past the base (n, P, S) [m] one step still catches the extrapolated centre of mass."""
    older = age[..., None] >= recovery.older_from_years

    def past(lean_rad: Array, base_m: Array) -> Array:
        lean = np.where(older, lean_rad[1], lean_rad[0])
        return np.maximum(height[..., None] * np.sin(lean) - base_m, 0.0)

    forward = past(recovery.forward_lean_rad, recovery.lean_base_ahead_m)
    backward = past(recovery.backward_lean_rad, recovery.lean_base_behind_m)
    return np.where(toward, forward, backward) * np.exp(rate * recovery.latency_s)


def _bench_speed(y: Array, p: Array, front: Array, gap: Array, rate: Array, latency: Array) -> Array:
    """Return the speed (n, P, S) [m/s] at a bench edge `gap` ahead, NaN where the body does not get there.

    Until the latency the pressure stays at p, then it stands at the front of the base; in both phases
    y'^2 - w^2 (y - pressure)^2 is constant.
    """
    off = (y - p)[..., None]
    edge, end = (y + gap)[..., None], front[..., None]
    late_y, late_v = p[..., None] + off * np.cosh(rate * latency), off * rate * np.sinh(rate * latency)
    with np.errstate(invalid="ignore", over="ignore"):
        early = rate**2 * ((edge - p[..., None]) ** 2 - off**2)
        # Past the base's end the body only gathers speed, so it gets there if it gets past the end.
        turn = np.minimum(edge, np.maximum(end, late_y))
        slowest = late_v**2 + rate**2 * ((turn - end) ** 2 - (late_y - end) ** 2)
        late = late_v**2 + rate**2 * ((edge - end) ** 2 - (late_y - end) ** 2)
        square = np.where(edge <= late_y, early, np.where(slowest > 0.0, late, np.nan))
        comes = (off > 0.0) & np.isfinite(edge)
        return np.sqrt(np.where(comes, np.maximum(square, 0.0), np.nan))
