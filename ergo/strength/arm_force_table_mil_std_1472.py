"""The handbook's seated one-arm force of P5 men by elbow angle and direction: a second opinion."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Table

Array = NDArray[np.float64]
TABLE = "arm_force_mil_std_1472"
DIRECTIONS = ("pull", "push", "up", "down", "in", "out")
LOWEST_DEG, HIGHEST_DEG = 60.0, 180.0


@dataclass(frozen=True)
class TableForce:
    """Force of P5 men [N] (NaN where not covered), where it is covered, and why not elsewhere."""

    force_n: Array
    covered: NDArray[np.bool_]
    reason: str


def arm_force_table_mil_std_1472(elbow_rad: Array, pull: Array, up: Array, inward: Array, hand: str,
                                 library: Library) -> TableForce:  # fmt: skip
    """Return the table's force along a direction.

    Parameters
    ----------
    elbow_rad : Array
        (...) included elbow angle [rad]; 180 degrees is straight.
    pull, up, inward : Array
        (...) parts of the unit direction of the hand's force on the handle: toward the trunk, up, toward the
        middle of the body.
    hand : str
        right or left.

    Returns
    -------
    TableForce

    Notes
    -----
    Between directions an ellipsoid: 1/F^2 = sum of (part / F of the direction's sign)^2; between elbow angles
    straight lines. Valid range: 60 to 180 degrees, seated with a backrest, vertical handgrip.
    Source: mil_std_1472, arm strength table, status memory.
    """
    rows = library.table(TABLE).where(hand=hand)
    elbow = np.rad2deg(np.asarray(elbow_rad, dtype=float))
    total = np.zeros(np.broadcast(elbow, pull).shape)
    for part, (plus, minus) in ((pull, ("pull", "push")), (up, ("up", "down")), (inward, ("in", "out"))):
        force = np.where(np.asarray(part) >= 0.0, _column(rows, plus, elbow), _column(rows, minus, elbow))
        total = total + (np.asarray(part) / force) ** 2
    covered = (elbow >= LOWEST_DEG) & (elbow <= HIGHEST_DEG) & (total > 0.0)
    force = np.where(covered, 1.0 / np.sqrt(np.where(total > 0.0, total, 1.0)), np.nan)
    return TableForce(force, covered, "the table holds for elbow angles of 60 to 180 degrees")


def _column(rows: Table, direction: str, elbow_deg: Array) -> Array:
    chosen = rows.where(direction=direction)
    angles, forces = chosen.numbers("elbow_deg"), chosen.numbers("p5_men_n")
    order = np.argsort(angles)
    return np.interp(elbow_deg, angles[order], forces[order])
