"""Lever and slide as free bodies with friction: the hand force that keeps the load moving.

Two bodies are cut free. The slide carries the load, the contact force and the guide's two end reactions;
the lever carries the hand, its weight, the return spring, the contact force and the pivot pin. Friction in a
pin is its radius x coefficient x resultant pin force, in the guide its coefficient x the sum of the end
reactions. On the slide all of it is proportional to one contact force, and on the lever it leaves a
quadratic, so both balances close without iteration.
"""

from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from ergo.datasets import Library, Parameter
from ergo.errors import Problem
from ergo.frames import Array
from ergo.mechanism.contact import NO_FRICTION, Contact, PinAndGuide, in_plane
from ergo.mechanism.lever import Lever
from ergo.mechanism.linkage import Linkage

FRICTION_TABLE = "sliding_friction"
__all__ = ["FRICTION_TABLE", "NO_FRICTION", "HandBalance", "PinAndGuide", "bands", "hand_balance", "problems"]


@dataclass(frozen=True)
class HandBalance:
    """Hand force and reactions at the lever angles asked for: arrays (P,).

    hand_n : hand force along the sense of the motion [N], negative where the hand must hold back, infinite
        where the slide wedges
    side_n : force of the linkage on the slide square to its line [N], magnitude
    pivot_n : resultant of the pivot pin in the lever's plane [N]
    link_pin_n : force in each link pin [N]
    wedged : True where no hand force moves the slide
    """

    hand_n: Array
    side_n: Array
    pivot_n: Array
    link_pin_n: Array
    wedged: Array


def problems(friction: PinAndGuide, lever: Lever) -> tuple[Problem, ...]:
    """Return what makes pins and guide meaningless, in the study file's keys; empty when nothing does."""
    found = []
    for name in ("pin_radius_m", "pin_friction", "slide_friction", "slide_bearing_m", "slide_overhang_m"):
        value = getattr(friction, name)
        if not value >= 0.0:
            key = name.removesuffix("_m") + ("_mm" if name.endswith("_m") else "")
            got = value * 1e3 if name.endswith("_m") else value
            found.append(Problem(f"linkage.{key}", "must not be below zero", f"{got:g}"))
    if friction.slide_overhang_m > 0.0 and not friction.slide_bearing_m > 0.0:
        what = "is needed where the driving force overhangs the guide"
        found.append(
            Problem("linkage.slide_bearing_mm", what, f"{friction.slide_bearing_m * 1e3:g}", "above zero")
        )
    if not found and friction.friction_radius_m >= lever.length_m > 0.0:
        got = f"{friction.pin_radius_m * 1e3:g} mm at a coefficient of {friction.pin_friction:g}"
        found.append(
            Problem("linkage.pin_radius_mm", "the pivot pin's friction is longer than the lever", got)
        )
    return tuple(found)


def bands(library: Library) -> Mapping[str, Parameter]:
    """Return the published bands of sliding friction for pins and slides, by pairing of materials."""
    return library.parameters(FRICTION_TABLE)


def hand_balance(
    lever: Lever,
    linkage: Linkage,
    lever_rad: Array,
    way: float,
    resist_n: Array,
    friction: PinAndGuide,
    *,
    with_weight: bool = True,
) -> HandBalance:
    """Return the hand force along the motion, and the reactions, while the lever turns slowly.

    Parameters
    ----------
    lever, linkage, friction : the mechanism
    lever_rad : (P,) lever angles [rad]
    way : sense in which the lever turns, +1 or -1
    resist_n : (P,) force that the linkage must put on the slide, along the slide direction, to balance the
        load [N] (N m about the pivot for a shaft)
    with_weight : False leaves the lever's weight and return spring out

    Returns
    -------
    HandBalance
        From T = D L - c Q, with T the torque of all but hand and pivot friction, c the pin's friction radius
        and Q the resultant pin force, which holds D itself: a quadratic in D whose larger root is the
        motion's.
    """
    contact, force, wedged = _slide(linkage, lever_rad, way, resist_n, friction)
    torque = force * contact.lever_torque_m
    other = force[:, None] * contact.on_lever if contact.direction_known else np.zeros((len(lever_rad), 2))
    extra = (
        np.zeros_like(force) if contact.direction_known else force * np.linalg.norm(contact.on_lever, axis=1)
    )
    if with_weight:
        torque = torque + lever.weight_torque_nm(lever_rad) + lever.spring_torque_nm(lever_rad)
        other = other + lever.weight_in_plane_n()
    arm, c = lever.length_m, friction.friction_radius_m
    needed = -way * torque + c * extra
    hand_dir = way * in_plane(lever_rad + 0.5 * np.pi)
    inline = np.sum(hand_dir * other, axis=1)
    square = np.sum(other * other, axis=1)
    middle = arm * needed + c**2 * inline
    root = np.sqrt(np.maximum((needed + arm * inline) ** 2 + (arm**2 - c**2) * (square - inline**2), 0.0))
    hand = (middle + c * root) / (arm**2 - c**2)
    pivot = np.linalg.norm(hand[:, None] * hand_dir + other, axis=1) + extra
    endless = np.where(wedged, np.inf, 0.0)
    return HandBalance(
        hand_n=hand + endless,
        side_n=np.abs(force * contact.across) + endless,
        pivot_n=pivot + endless,
        link_pin_n=force * contact.link_pin + endless,
        wedged=wedged,
    )


def _slide(
    linkage: Linkage, lever_rad: Array, way: float, resist_n: Array, friction: PinAndGuide
) -> tuple[Contact, Array, Array]:
    """Return the contact, its force (P,) [N] and where the slide wedges, from the slide's balance.

    Contact force G times (its part along the load's sense, less mu x end reactions per newton against the
    motion) = load. The side force acts in mid-guide and the driving force at the overhang a, so the end
    reactions add up to max(side, 2 a / L x drive).
    """
    ones = np.ones_like(lever_rad)
    plain = linkage.contact(lever_rad, way, ones, NO_FRICTION)
    sense = np.where(resist_n < 0.0, -1.0, 1.0)
    push = sense * np.where(plain.along < 0.0, -1.0, 1.0)
    contact = linkage.contact(lever_rad, way, push, friction)
    useful = contact.along * sense
    if contact.has_guide:
        moving = np.sign(linkage.slide_per_rad_m(lever_rad) * way) * sense
        pressed = np.maximum(np.abs(contact.across), friction.tilt_share * np.abs(contact.along))
        useful = useful - moving * friction.slide_friction * pressed
    wedged = (useful <= 1e-12) & (resist_n != 0.0)
    force = np.where(wedged, 0.0, np.abs(resist_n) / np.where(useful > 1e-12, useful, 1.0))
    return contact, force, wedged
