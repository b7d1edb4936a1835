"""What the hand must supply along the stroke: lever, linkage, load and friction put together."""

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from ergo.errors import NothingMovesError, StudyError
from ergo.frames import Array
from ergo.mechanism import friction as rubbing
from ergo.mechanism.contact import NO_FRICTION, PinAndGuide
from ergo.mechanism.friction import HandBalance, hand_balance
from ergo.mechanism.handle_path import HandlePath, MeasuredPath
from ergo.mechanism.lever import Lever
from ergo.mechanism.linkage import FixedPin, Linkage


@dataclass(frozen=True)
class Drive:
    """The drive along the stroke: arrays (P,) over the positions, vectors (P, 3), unless said otherwise.

    stroke, lever_rad, grip_m, work_dir, lever_dir, grip_axis, hand_travel_m : as in `HandlePath`
    slide_m : slide travel from the start, positive in the sense of the whole stroke [m] (lever angle
        [rad] for a shaft)
    ratio : slide travel over hand travel; 1 / lever length [1/m] for a shaft; negative where the slide
        comes back
    load_n : load at the slide, against its travel from start to end [N] (N m for a shaft)
    demand_n : hand force along `work_dir` [N] = ratio x load + weight_n + friction_n; below zero the lever
        pulls the hand along and the hand must hold back by that much; infinite where the slide wedges
    friction_n, weight_n : parts of the demand owed to friction, and to lever weight with return spring
    side_force_n : force of the linkage on the slide, square to its line, magnitude [N]
    pin_force_n : resultant on the pivot pin in the lever's plane, hand force included [N]
    link_pin_force_n : force in each link pin or slot pin [N]
    efficiency : for the load's part: demand without friction over demand with it; 1 where there is no load;
        where the load drives the handle on, what reaches the hand over what would without friction
    back_efficiency : share of the load's force that reaches a hand giving way; 0 or less holds by itself
    self_locking_at, wedged_at : booleans, position by position; `self_locking`, `wedged`: anywhere in the
        stroke
    hand_mass_kg : lever inertia over length squared [kg]
    mobility : freedoms of the linkage; dead_centre_rad : lever angles of the stroke at which the slide turns
        back; notes : what a reader must know
    """

    stroke: Array
    lever_rad: Array
    grip_m: Array
    work_dir: Array
    lever_dir: Array
    grip_axis: Array
    hand_travel_m: Array
    slide_m: Array
    ratio: Array
    load_n: Array
    demand_n: Array
    friction_n: Array
    weight_n: Array
    side_force_n: Array
    pin_force_n: Array
    link_pin_force_n: Array
    efficiency: Array
    back_efficiency: Array
    self_locking_at: np.ndarray
    wedged_at: np.ndarray
    self_locking: bool
    wedged: bool
    hand_mass_kg: float
    mobility: int
    dead_centre_rad: tuple[float, ...]
    notes: tuple[str, ...]


def drive(
    path: HandlePath,
    lever: Lever,
    linkage: Linkage | FixedPin,
    load: Callable[[Array], Array],
    friction: PinAndGuide = NO_FRICTION,
) -> Drive:
    """Return what the hand must supply at every position of a handle path.

    Parameters
    ----------
    path : from `handle_path(lever, grip, stroke)`
    lever, linkage, friction : the mechanism
    load : force at the slide [N] (N m for a shaft) as a function of the slide travel from the start (P,) [m]

    Returns
    -------
    Drive
        The load resists the slide's travel from start to end. Where the linkage passes a dead centre and the
        slide comes back, that same load drives the handle on.

    Raises
    ------
    NothingMovesError
        For a fixed pin, with the reason.
    StudyError
        If the linkage cannot make the stroke.
    """
    linkage = _moving(lever, linkage, friction)
    a, way, sense = path.lever_rad, lever.way, travel_sense(lever, linkage)
    slide, dead = slide_travel_m(lever, linkage, a), linkage.dead_centres_rad(lever.start_rad, lever.end_rad)
    force = np.broadcast_to(np.asarray(load(slide), dtype=float), slide.shape).copy()
    ratio = sense * way * linkage.slide_per_rad_m(a) / lever.length_m
    weight = -way * (lever.weight_torque_nm(a) + lever.spring_torque_nm(a)) / lever.length_m
    full = hand_balance(lever, linkage, a, way, sense * force, friction)
    rubbed = np.zeros_like(slide) if friction.is_none else full.hand_n - (ratio * force + weight)
    loaded = hand_balance(lever, linkage, a, way, sense * force, friction, with_weight=False)
    back_n = -hand_balance(lever, linkage, a, -way, sense * force, friction, with_weight=False).hand_n
    forward_eff, back_eff, locks = _efficiencies(ratio * force, loaded.hand_n, back_n, friction)
    return Drive(
        **_path_fields(path),
        slide_m=slide,
        ratio=ratio,
        load_n=force,
        demand_n=ratio * force + weight + rubbed,
        friction_n=rubbed,
        weight_n=weight,
        side_force_n=full.side_n,
        pin_force_n=full.pivot_n,
        link_pin_force_n=full.link_pin_n,
        efficiency=forward_eff,
        back_efficiency=back_eff,
        self_locking_at=locks,
        wedged_at=full.wedged,
        self_locking=bool(locks.any()),
        wedged=bool(full.wedged.any()),
        hand_mass_kg=lever.hand_mass_kg(),
        mobility=linkage.mobility.count,
        dead_centre_rad=dead,
        notes=_notes(path, linkage, full, dead, locks),
    )


def path_drive(measured: MeasuredPath, path: HandlePath) -> Drive:
    """Return the drive of a measured path: the hand force is the measured one, and there is no linkage.

    Parameters
    ----------
    measured : the points and forces
    path : from `measured.along(stroke, ...)`
    """
    force = measured.force_along_n(path.stroke)
    none, ones = np.zeros_like(force), np.ones_like(force)
    never = np.zeros(len(force), dtype=bool)
    return Drive(
        **_path_fields(path),
        slide_m=path.hand_travel_m,
        ratio=ones,
        load_n=force,
        demand_n=force,
        friction_n=none,
        weight_n=none,
        side_force_n=none,
        pin_force_n=none,
        link_pin_force_n=none,
        efficiency=ones,
        back_efficiency=ones,
        self_locking_at=never,
        wedged_at=never,
        self_locking=False,
        wedged=False,
        hand_mass_kg=0.0,
        mobility=1,
        dead_centre_rad=(),
        notes=(
            "measured path: the force is the hand's own, so friction, weight, side and pin forces and the "
            "lever's inertia are not known and count as zero; there is no lever angle",
        ),
    )


def travel_sense(lever: Lever, linkage: Linkage) -> float:
    """Return the sense of the slide's travel from start to end, +1 or -1 along the slide direction.

    Where start and end are the same place (a stroke that straddles a dead centre evenly), the sense at
    the start.
    """
    first, last = linkage.slide_m(np.array([lever.start_rad, lever.end_rad]))
    size = abs(first) + abs(last)
    if abs(last - first) > 1e-12 * size:
        return 1.0 if last > first else -1.0
    slope = float(linkage.slide_per_rad_m(np.array([lever.start_rad]))[0]) * lever.way
    return 1.0 if slope >= 0.0 else -1.0


def slide_travel_m(lever: Lever, linkage: Linkage, lever_rad: Array) -> Array:
    """Return the slide travel (P,) [m] from the start at lever angles (P,), positive in the stroke's sense.

    It tells where a load will be asked for, before `drive` asks it (`reach_problems` of the load).
    """
    start = linkage.slide_m(np.array([lever.start_rad]))
    return travel_sense(lever, linkage) * (linkage.slide_m(lever_rad) - start)


def _moving(lever: Lever, linkage: Linkage | FixedPin, friction: PinAndGuide) -> Linkage:
    """Return the linkage once it is known to make the stroke; raise what keeps it from it."""
    if isinstance(linkage, FixedPin):
        raise NothingMovesError(" ".join(linkage.answer(lever.start_rad, lever.end_rad).sentences()))
    found = lever.problems() or (
        *linkage.problems(lever.start_rad, lever.end_rad),
        *rubbing.problems(friction, lever),
    )
    if found:
        raise StudyError(found)
    return linkage


def _path_fields(path: HandlePath) -> dict[str, Array]:
    names = ("stroke", "lever_rad", "grip_m", "work_dir", "lever_dir", "grip_axis", "hand_travel_m")
    return {name: getattr(path, name) for name in names}


def _efficiencies(
    ideal: Array, forward: Array, held: Array, friction: PinAndGuide
) -> tuple[Array, Array, np.ndarray]:
    """Return efficiency forward, efficiency back, and where the load holds itself, for the load alone."""
    ones = np.ones_like(ideal)
    if friction.is_none:
        return ones, ones.copy(), np.zeros(len(ideal), dtype=bool)
    resists, drives = ideal > 0.0, ideal < 0.0
    eff = np.divide(ideal, forward, out=ones.copy(), where=resists)
    eff = np.divide(forward, ideal, out=eff, where=drives)
    # all that is put in is lost at a dead centre, and where a jam takes whatever the hand gives
    eff = np.where(((ideal == 0.0) & (forward > 0.0)) | np.isinf(forward), 0.0, eff)
    back = np.divide(held, ideal, out=ones.copy(), where=resists & np.isfinite(held))
    back = np.where(np.isinf(held), 0.0, back)
    return eff, back, resists & (held <= 0.0)


def _notes(
    path: HandlePath, linkage: Linkage, full: HandBalance, dead: tuple[float, ...], locks: np.ndarray
) -> tuple[str, ...]:
    notes = list(linkage.notes)
    notes.extend(
        f"dead centre at lever angle {np.rad2deg(angle):.1f} deg: the slide stops there, and beyond it the "
        "load drives the handle on"
        for angle in dead
    )
    if full.wedged.any():
        notes.append(
            f"the slide wedges at stroke {_where(path, full.wedged)}: no hand force moves it; shorten the "
            "overhang, lengthen the guide, lower the friction or the pressure angle"
        )
    if locks.any():
        where = _where(path, locks)
        notes.append(f"self-locking at stroke {where}: the load alone cannot move the handle back")
    return tuple(notes)


def _where(path: HandlePath, mask: np.ndarray) -> str:
    at = path.stroke[mask]
    return f"{at.min():.2f}" if len(at) == 1 else f"{at.min():.2f} to {at.max():.2f}"
