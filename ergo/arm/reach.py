"""How far a hand can get: the line that one operator can still reach from a stance, in side view."""

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k

Array = NDArray[np.float64]
STEPS = 7


def reach_line_m(op: Array, scene: Array, stand_y: float, angles_rad: Array) -> Array:
    """Return the farthest places that the grip centre gets to, in the plane of the shoulder.

    Parameters
    ----------
    op : Array
        One operator's row of the packed problem.
    scene : Array
        The scene vector.
    stand_y : float
        Ankles' (or hips') y [m].
    angles_rad : Array
        (K,) directions from the upright shoulder [rad], 0 straight ahead, positive up.

    Returns
    -------
    Array
        (K, 2) y and z [m].

    Notes
    -----
    Over all leans and bends that the stance rule and the bench leave, the shoulder brought fully forward; the
    sideways offset of the handle is not in it.
    """
    shoulders = _shoulders(op, scene, stand_y)
    centre = shoulders[0]
    ray = np.stack([np.cos(angles_rad), np.sin(angles_rad)], axis=1)
    longest = 0.999 * (op[k.UPPER] + op[k.FOREARM])
    offset = shoulders[:, None, :] - centre
    along = np.sum(offset * ray, axis=-1)
    square = longest**2 - np.sum(offset * offset, axis=-1) + along**2
    far = np.where(square >= 0.0, along + np.sqrt(np.maximum(square, 0.0)), 0.0)
    return centre + np.max(far, axis=0)[:, None] * ray


def _shoulders(op: Array, scene: Array, stand_y: float) -> Array:
    """Return the places (S, 2) that the shoulder can take, the least bent first."""
    found = []
    for bend in np.linspace(max(scene[k.BEND_MIN], 0.0), scene[k.BEND_MAX], STEPS):
        for share in np.linspace(0.0, 1.0, STEPS):
            hip_y, hip_z, sin_t, cos_t, y, z, _, sin_l = k.place_body(op, scene, stand_y, share, bend)
            free = k.front_at(op, scene, stand_y, hip_y, hip_z, sin_t, cos_t, z) <= 0.0
            if free and abs(sin_l) <= scene[k.LEAN_MAX]:
                found.append((y + op[k.PROTRACTION] * cos_t, z - op[k.PROTRACTION] * sin_t))
    return np.array(found or [(stand_y, op[k.ANKLE_Z] + op[k.LEG] + op[k.TRUNK])])
