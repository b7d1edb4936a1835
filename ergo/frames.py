"""The station frame, lever angles and units at the edges.

Right-handed: origin on the floor straight below the middle of the bench's front edge,
x to the operator's right, y away from the operator into the machine, z up. Inside: SI.
"""

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]

GRAVITY_M_S2 = 9.80665  # standard gravity, ISO 80000-3
X_RIGHT = np.array([1.0, 0.0, 0.0])
Y_AWAY = np.array([0.0, 1.0, 0.0])
Z_UP = np.array([0.0, 0.0, 1.0])
NAMED_AXES = {"sideways": (1.0, 0.0, 0.0), "fore-aft": (0.0, 1.0, 0.0), "upright": (0.0, 0.0, 1.0)}


def mm_to_m(value_mm: ArrayLike) -> Array:
    """Return millimetres as metres."""
    return np.asarray(value_mm, dtype=float) * 1e-3


def m_to_mm(value_m: ArrayLike) -> Array:
    """Return metres as millimetres."""
    return np.asarray(value_m, dtype=float) * 1e3


def unit(vector: ArrayLike) -> Array:
    """Return `vector` (..., 3) at length one.

    Raises
    ------
    ValueError
        If a vector has no length.
    """
    v = np.asarray(vector, dtype=float)
    length = np.linalg.norm(v, axis=-1, keepdims=True)
    if np.any(length < 1e-12):
        msg = "a vector without length has no direction"
        raise ValueError(msg)
    return v / length


def pivot_axis(axis: str | ArrayLike) -> Array:
    """Return the pivot axis as a unit vector (3,): a name of `NAMED_AXES`, or any vector."""
    return unit(NAMED_AXES[axis] if isinstance(axis, str) else axis)


def zero_direction(axis: ArrayLike) -> Array:
    """Return the lever's direction (3,) at lever angle 0 for a pivot `axis` (3,).

    Straight up, made square to the axis; straight toward the operator where the axis is upright.
    """
    n = unit(axis)
    start = Z_UP if abs(n[2]) < 0.999 else -Y_AWAY
    return unit(start - (start @ n) * n)


def rotate(vector: ArrayLike, axis: ArrayLike, angle_rad: ArrayLike) -> Array:
    """Turn `vector` (3,) about the unit `axis` (3,) by `angle_rad` (P,) or a number: (P, 3) or (3,).

    Rodrigues' formula, right-handed.
    """
    v, n = np.asarray(vector, dtype=float), np.asarray(axis, dtype=float)
    a = np.asarray(angle_rad, dtype=float)[..., None]
    return v * np.cos(a) + np.cross(n, v) * np.sin(a) + n * (n @ v) * (1.0 - np.cos(a))


def lever_direction(axis: ArrayLike, lever_angle_rad: ArrayLike) -> Array:
    """Return the unit direction (P, 3) from the pivot along the lever at `lever_angle_rad` (P,).

    Positive angles turn the handle toward the operator (sideways axis), to the right (fore-aft axis),
    counter-clockwise seen from above (upright axis).
    """
    return rotate(zero_direction(axis), unit(axis), lever_angle_rad)
