"""How heavy the arm is to a push at the hand: operational-space mass along a direction."""

import numpy as np
from numpy.typing import ArrayLike, NDArray

from ergo.arm.segments import ArmMasses

Array = NDArray[np.float64]
# Below this share of the easiest direction's mobility a direction counts as locked: a straight arm in line.
LOCKED_SHARE = 1e-12


def hand_mass_along(
    shoulder_m: ArrayLike,
    elbow_m: ArrayLike,
    grip_m: ArrayLike,
    work_dir: ArrayLike,
    masses: ArmMasses,
    *,
    shoulder_mass_kg: ArrayLike = np.inf,
) -> Array:
    """Return the effective mass (...) [kg] of the arm at a free hand that is pushed along `work_dir`.

    Parameters
    ----------
    shoulder_m, elbow_m, grip_m : (..., 3) joint centres and grip centre [m], for instance (n, P, 3)
    work_dir : (..., 3) unit vectors, broadcast to the points
    masses : arrays of the points' leading shape, or of its first axes, such as (n,)
    shoulder_mass_kg : mass with which the shoulder gives way, alike in every direction [kg], shaped as the
        masses; infinite where the shoulder is held

    Returns
    -------
    Array
        m in d.a = F / m for a force F along d on a hand that nothing guides; infinite along a straight arm
        whose shoulder is held.

    Valid range: two rigid links, rigid wrist, three freedoms at the shoulder and a hinge at the elbow, whose
    axis stands square to the arm's plane; the arm at rest; muscles give no inertia.
    Equation: m = 1 / (d^T W d), W = J M^-1 J^T + 1 / shoulder mass.
    Source: khatib_1987, operational-space inertia; de_leva_1996 for the masses.
    """
    d, mobility = _mobility(shoulder_m, elbow_m, grip_m, work_dir, masses, shoulder_mass_kg)
    along = np.einsum("...i,...ij,...j->...", d, mobility, d)
    locked = along <= LOCKED_SHARE * np.trace(mobility, axis1=-2, axis2=-1)
    return np.where(locked, np.inf, 1.0 / np.where(locked, 1.0, along))


def guided_hand_mass_along(
    shoulder_m: ArrayLike,
    elbow_m: ArrayLike,
    grip_m: ArrayLike,
    work_dir: ArrayLike,
    masses: ArmMasses,
    *,
    shoulder_mass_kg: ArrayLike = np.inf,
) -> Array:
    """Return the effective mass (...) [kg] of the arm at a hand that a handle keeps on its path.

    Parameters
    ----------
    shoulder_m, elbow_m, grip_m, work_dir, masses, shoulder_mass_kg
        As in `hand_mass_along`.

    Returns
    -------
    Array
        Twice the least kinetic energy over the square of the hand's speed along d, with no speed across d;
        never less than the free hand's mass; infinite where the arm cannot move along d alone.

    Valid range: as in `hand_mass_along`; the grip lets the fist turn about its centre.
    Equation: m = d^T W^-1 d, W = J M^-1 J^T + 1 / shoulder mass.
    Source: khatib_1987, operational-space inertia; de_leva_1996 for the masses.
    """
    d, mobility = _mobility(shoulder_m, elbow_m, grip_m, work_dir, masses, shoulder_mass_kg)
    ease, axes = np.linalg.eigh(mobility)
    part = np.einsum("...ij,...i->...j", axes, d) ** 2
    locked = ease <= LOCKED_SHARE * ease[..., -1:]
    mass = np.sum(np.where(locked, 0.0, part) / np.where(locked, 1.0, ease), axis=-1)
    return np.where(np.any(locked & (part > LOCKED_SHARE), axis=-1), np.inf, mass)


def _mobility(
    shoulder_m: ArrayLike,
    elbow_m: ArrayLike,
    grip_m: ArrayLike,
    work_dir: ArrayLike,
    masses: ArmMasses,
    shoulder_mass_kg: ArrayLike,
) -> tuple[Array, Array]:
    """Return the work direction (..., 3) and W (..., 3, 3) [1/kg]: hand acceleration per hand force."""
    points = (np.asarray(p, dtype=float) for p in (shoulder_m, elbow_m, grip_m, work_dir))
    s, e, g, d = np.broadcast_arrays(*points)
    upper, lower, reach = e - s, g - e, g - s
    axis = _hinge(upper, lower, d)
    inertia = _inertia_matrix(upper, lower, axis, masses)
    jacobian = np.zeros((*s.shape[:-1], 4, 3))
    # Hand velocity: shoulder turning x reach + elbow turning x forearm; row k is what freedom k gives.
    jacobian[..., :3, :] = np.cross(np.eye(3), reach[..., None, :])
    jacobian[..., 3, :] = np.cross(axis, lower)
    ease = np.swapaxes(jacobian, -1, -2) @ np.linalg.solve(inertia, jacobian)
    give = 1.0 / _spread(shoulder_mass_kg, s.ndim - 1)
    return d, 0.5 * (ease + np.swapaxes(ease, -1, -2)) + give[..., None, None] * np.eye(3)


def _inertia_matrix(upper: Array, lower: Array, axis: Array, masses: ArmMasses) -> Array:
    """Return the arm's mass matrix (..., 4, 4) for the shoulder's turning (world axes) and the elbow's."""
    points = upper.ndim - 1
    m1, m2 = _spread(masses.upper_arm_kg, points), _spread(masses.forearm_hand_kg, points)
    from_elbow = _spread(masses.forearm_hand_com, points)[..., None] * lower
    com1, com2 = _spread(masses.upper_arm_com, points)[..., None] * upper, upper + from_elbow
    own1 = _link_inertia(upper, axis, m1, masses.upper_arm_gyration)
    own2 = _link_inertia(lower, axis, m2, masses.forearm_hand_gyration)
    swing = np.cross(axis, from_elbow)
    matrix = np.zeros((*upper.shape[:-1], 4, 4))
    matrix[..., :3, :3] = own1 + own2 + _point_inertia(com1, m1) + _point_inertia(com2, m2)
    coupling = np.einsum("...ij,...j->...i", own2, axis) + m2[..., None] * np.cross(com2, swing)
    matrix[..., :3, 3] = matrix[..., 3, :3] = coupling
    matrix[..., 3, 3] = np.einsum("...i,...ij,...j->...", axis, own2, axis) + m2 * np.sum(swing**2, axis=-1)
    return matrix


def _link_inertia(link: Array, axis: Array, mass: Array, gyration: Array) -> Array:
    """Return a link's inertia (..., 3, 3) about its centre of mass; its transverse axis is the elbow's."""
    length = np.linalg.norm(link, axis=-1)
    long = link / length[..., None]
    frame = np.stack([np.cross(axis, long), axis, long], axis=-1)
    radii = _spread(gyration, link.ndim - 1, trailing=1) * length[..., None]
    return np.einsum("...ik,...k,...jk->...ij", frame, mass[..., None] * radii**2, frame)


def _point_inertia(at: Array, mass: Array) -> Array:
    square = np.sum(at**2, axis=-1)[..., None, None] * np.eye(3)
    return mass[..., None, None] * (square - at[..., :, None] * at[..., None, :])


def _hinge(upper: Array, lower: Array, work_dir: Array) -> Array:
    """Return the elbow's axis (..., 3): square to the arm's plane.

    A straight arm has no plane: it is taken to bend in the plane of the work direction, and where that too
    lies along the arm, about the level line square to it.
    """
    scale = np.linalg.norm(upper, axis=-1) * np.linalg.norm(lower, axis=-1)
    axis = np.cross(upper, lower) / scale[..., None]
    for other in (work_dir, np.array([0.0, 0.0, 1.0]), np.array([0.0, 1.0, 0.0])):
        size = np.linalg.norm(axis, axis=-1, keepdims=True)
        axis = np.where(size < 1e-9, np.cross(upper, other), axis)
    return axis / np.linalg.norm(axis, axis=-1, keepdims=True)


def _spread(values: ArrayLike, points: int, trailing: int = 0) -> Array:
    """Return values shaped (n,) or (n, ..) so that they meet points (n, P), keeping `trailing` last axes."""
    found = np.asarray(values, dtype=float)
    lead = found.shape[: found.ndim - trailing]
    if not lead:
        return found
    return found.reshape(lead + (1,) * (points - len(lead)) + found.shape[len(lead) :])
