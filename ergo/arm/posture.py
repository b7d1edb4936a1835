"""The postures that the search chose, as points and angles a person can read."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.arm.outlines import describe

Array = NDArray[np.float64]
_ROW = 24


@dataclass(frozen=True)
class Posture:
    """Points [m] in station coordinates and angles [rad] of n operators at P positions.

    Points are (n, P, 3): hip (middle of the hips), shoulder, elbow, wrist; `ankle` is the middle of the feet at
    ankle (or hip, seated) height. Angles are (n, P): `trunk` from upright (forward positive), `lean` about the
    ankles, `bend` at the hips, `elevation` of the upper arm from straight down, `elbow` included angle (pi is
    straight), `turn` of the forearm from neutral (supination positive), `deviation` of the wrist from its
    natural grip (ulnar positive), `swivel`. `com_y_m` is the centre of mass ahead of the ankles' middle.
    """

    ankle: Array
    hip: Array
    shoulder: Array
    elbow: Array
    wrist: Array
    trunk: Array
    lean: Array
    bend: Array
    elevation: Array
    elbow_angle: Array
    turn: Array
    deviation: Array
    swivel: Array
    com_y_m: Array


def describe_postures(ops: Array, scene: Array, limits: Array, stance: Array, targets: Array, postures: Array,
                      mirror: float, natural_grip_rad: float, ankle_z_m: Array) -> Posture:  # fmt: skip
    """Return points and angles of chosen postures.

    Parameters
    ----------
    ops, scene, limits, targets
        The packed problem (see `ergo.strength.hand_capability.Bench`).
    stance : Array
        (n, 2) midline x and ankle y [m], in the kernel's right-handed mirror.
    postures : Array
        (n, P, 3) centre-of-mass share, bend [rad], swivel [rad].
    mirror : float
        -1 for a left hand, whose x is turned round again here.
    natural_grip_rad : float
        Forward slant of a bar held with a straight wrist [rad].
    ankle_z_m : Array
        (n,) height of the ankles, or of the hips when seated [m].

    Returns
    -------
    Posture
    """
    n, positions = postures.shape[:2]
    rows = np.zeros((n, positions, _ROW))
    describe(ops, scene, limits, stance, targets, postures, rows)
    flip = np.array([mirror, 1.0, 1.0])
    wide = np.broadcast_to(stance[:, None, 0], (n, positions))
    trunk = np.arctan2(rows[..., 2], rows[..., 3])
    lean = np.arcsin(np.clip(rows[..., 23], -1.0, 1.0))
    ankle = np.stack(
        [wide, np.broadcast_to(stance[:, None, 1], (n, positions)), np.broadcast_to(ankle_z_m[:, None], (n, positions))],
        axis=-1,
    )
    cosine = np.sum(rows[..., 13:16] * rows[..., 16:19], axis=-1)
    return Posture(
        ankle=ankle * flip,
        hip=np.stack([wide, rows[..., 0], rows[..., 1]], axis=-1) * flip,
        shoulder=rows[..., 4:7] * flip,
        elbow=rows[..., 7:10] * flip,
        wrist=rows[..., 10:13] * flip,
        trunk=trunk,
        lean=lean,
        bend=trunk - lean,
        elevation=np.arccos(np.clip(-rows[..., 15], -1.0, 1.0)),
        elbow_angle=np.pi - np.arccos(np.clip(cosine, -1.0, 1.0)),
        turn=np.arctan2(rows[..., 20], rows[..., 19]),
        deviation=np.arcsin(np.clip(rows[..., 21], -1.0, 1.0)) - natural_grip_rad,
        swivel=postures[..., 2].copy(),
        com_y_m=rows[..., 22],
    )
