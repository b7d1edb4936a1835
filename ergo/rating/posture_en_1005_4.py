"""Posture points after the bands of EN 1005-4 for upper arm and trunk, with comfort of wrist and forearm."""

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library

Array = NDArray[np.float64]


@dataclass(frozen=True)
class PostureBands:
    """Band edges [rad] and shares; `frequent` says that the job repeats often enough for the stricter reading."""

    upper_arm_good: float
    upper_arm_limit: float
    trunk_good: float
    trunk_limit: float
    wrist_good: float
    forearm_good: float
    frequent: bool
    target: float

    @classmethod
    def from_library(cls, library: Library, strokes_per_minute: float) -> "PostureBands":
        """Return the bands of the shipped table for a rate of strokes."""
        rows = library.values("posture_bands")
        return cls(
            upper_arm_good=float(np.deg2rad(rows["upper_arm_good_deg"])),
            upper_arm_limit=float(np.deg2rad(rows["upper_arm_limit_deg"])),
            trunk_good=float(np.deg2rad(rows["trunk_good_deg"])),
            trunk_limit=float(np.deg2rad(rows["trunk_limit_deg"])),
            wrist_good=rows["wrist_good_share"],
            forearm_good=rows["forearm_good_share"],
            frequent=strokes_per_minute >= rows["frequent_per_minute"],
            target=rows["posture_target"],
        )


PARTS = ("upper arm", "trunk", "wrist", "forearm")


def posture_en_1005_4(elevation: Array, backward: NDArray[np.bool_], trunk: Array, wrist_share: Array,
                      forearm_share: Array, bands: PostureBands) -> Array:  # fmt: skip
    """Return points 0..100 of each part of the body.

    Parameters
    ----------
    elevation, trunk : Array
        (...) elevation of the upper arm and inclination of the trunk [rad].
    backward : array
        (...) whether the upper arm points behind the trunk.
    wrist_share, forearm_share : Array
        (...) wrist deviation and forearm turn as shares of their range of motion, 0 at rest, 1 at its end.

    Returns
    -------
    Array
        (..., 4) points of `PARTS`: 100 inside the acceptable band, 50 at the end of the conditionally acceptable
        band (0 where the job is frequent, since it is then not acceptable), 0 a third of that band further on.

    Notes
    -----
    Straight lines between the bands' edges are this project's; the bands are the standard's (status memory).
    An upper arm behind the trunk is not acceptable in the standard beyond a small angle: its band is halved.
    Source: en_1005_4; wrist and forearm: common practice, no source.
    """
    shrink = np.where(backward, 0.5, 1.0)
    end = 0.0 if bands.frequent else 50.0
    arm = _falling(elevation, bands.upper_arm_good * shrink, bands.upper_arm_limit * shrink, end)
    body = _falling(np.abs(trunk), bands.trunk_good, bands.trunk_limit, end)
    wrist = _falling(wrist_share, bands.wrist_good, 1.0, 50.0)
    fore = _falling(forearm_share, bands.forearm_good, 1.0, 50.0)
    return np.stack([arm, body, wrist, fore], axis=-1)


def _falling(value: Array, good: "Array | float", limit: "Array | float", end: float) -> Array:
    inside = 100.0 - (100.0 - end) * (value - good) / (np.asarray(limit) - good)
    beyond = end - end * (value - limit) / ((np.asarray(limit) - good) / 3.0)
    return np.where(value <= good, 100.0, np.where(value <= limit, inside, np.maximum(beyond, 0.0)))
