"""Closed surfaces for CAD: a hand swept along the handle path, and the region a hand can reach."""

import itertools

import numpy as np
from numpy.typing import ArrayLike, NDArray

Array = NDArray[np.float64]
RING = 48
CAP = 12


def swept_ball(path_mm: ArrayLike, radius_mm: float) -> Array:
    """Return the surface of a ball swept along a path as triangles.

    Parameters
    ----------
    path_mm : (k, 3) [mm]
        Centre of the ball, at least two different points.
    radius_mm : float [mm]
        Radius of the ball.

    Returns
    -------
    Array
        (t, 3, 3) corners [mm], outward right-handed, closed.

    Valid range: the path's radius of curvature exceeds the ball's radius, so that the tube does not cut itself.
    Equation: rings square to the path, carried along without twist (rotation-minimising frame), half balls at the ends.
    """
    path = _thinned(np.asarray(path_mm, dtype=float))
    way = np.gradient(path, axis=0)
    way /= np.linalg.norm(way, axis=1)[:, None]
    first, second = _frames(way)
    turn = 2.0 * np.pi * np.arange(RING) / RING
    circle = np.cos(turn)[None, :, None] * first[:, None, :] + np.sin(turn)[None, :, None] * second[:, None, :]
    rise = np.pi / 2.0 * np.arange(1, CAP) / CAP
    start = [path[0] + radius_mm * (np.cos(a) * circle[0] - np.sin(a) * way[0]) for a in rise[::-1]]
    end = [path[-1] + radius_mm * (np.cos(a) * circle[-1] + np.sin(a) * way[-1]) for a in rise]
    rings = np.array([*start, *(path[:, None, :] + radius_mm * circle), *end])
    poles = path[0] - radius_mm * way[0], path[-1] + radius_mm * way[-1]
    return _skin(rings, *poles)


def _thinned(path: Array) -> Array:
    """Drop points that repeat the one before, so that every ring has a direction."""
    kept = np.concatenate([[True], np.linalg.norm(np.diff(path, axis=0), axis=1) > 1e-6])
    if kept.sum() < 2:
        msg = "a path of one point sweeps nothing"
        raise ValueError(msg)
    return path[kept]


def _frames(way: Array) -> tuple[Array, Array]:
    """Two directions square to each tangent, carried along by the smallest turn from one to the next."""
    seed = np.eye(3)[int(np.argmin(np.abs(way[0])))]
    first = [np.cross(way[0], seed) / np.linalg.norm(np.cross(way[0], seed))]
    for k in range(1, len(way)):
        flat = first[-1] - (first[-1] @ way[k]) * way[k]
        first.append(flat / np.linalg.norm(flat))
    stacked = np.array(first)
    return stacked, np.cross(way, stacked)


def _skin(rings: Array, first_pole: Array, last_pole: Array) -> Array:
    """Triangles between rings (m, RING, 3), closed by a pole at each end; normals outward."""
    following = np.roll(np.arange(RING), -1)
    faces = []
    for low, high in itertools.pairwise(rings):
        faces.append(np.stack([low, low[following], high[following]], axis=1))
        faces.append(np.stack([low, high[following], high], axis=1))
    faces.append(np.stack([np.broadcast_to(first_pole, (RING, 3)), rings[0][following], rings[0]], axis=1))
    faces.append(np.stack([np.broadcast_to(last_pole, (RING, 3)), rings[-1], rings[-1][following]], axis=1))
    return np.concatenate(faces)


def plate(outline_mm: ArrayLike, thickness_mm: float) -> Array:
    """Return a flat plate over a closed outline in a plane of constant x as triangles.

    Parameters
    ----------
    outline_mm : (k, 3) [mm]
        Corners of a simple polygon, all at the same x; the last is joined to the first.
    thickness_mm : float [mm]
        Thickness, half to each side.

    Returns
    -------
    Array
        (t, 3, 3) corners [mm], outward right-handed, closed.
    """
    outline = np.asarray(outline_mm, dtype=float)
    flat = outline[:, 1:]
    if _area(flat) < 0.0:
        outline, flat = outline[::-1], flat[::-1]
    half = np.array([thickness_mm / 2.0, 0.0, 0.0])
    front, back = outline + half, outline - half
    faces = []
    for a, b, c in _ears(flat):
        faces.append([front[a], front[b], front[c]])
        faces.append([back[a], back[c], back[b]])
    for a in range(len(outline)):
        b = (a + 1) % len(outline)
        faces.append([back[a], back[b], front[b]])
        faces.append([back[a], front[b], front[a]])
    return np.array(faces)


def _area(flat: Array) -> float:
    x, y = flat[:, 0], flat[:, 1]
    return 0.5 * float(np.sum(x * np.roll(y, -1) - np.roll(x, -1) * y))


def _ears(flat: Array) -> list[tuple[int, int, int]]:
    """Triangulate a simple polygon, anti-clockwise, by cutting ears."""
    left = list(range(len(flat)))
    found = []
    while len(left) > 3:
        for n in range(len(left)):
            a, b, c = left[n - 1], left[n], left[(n + 1) % len(left)]
            if _area(flat[[a, b, c]]) > 1e-9 and not _holds_any(flat, (a, b, c), left):
                found.append((a, b, c))
                left.pop(n)
                break
        else:
            # Only corners in one line remain: cutting any keeps the outline.
            found.append((left[-1], left[0], left[1]))
            left.pop(0)
    return [*found, (left[0], left[1], left[2])]


def _holds_any(flat: Array, corner: tuple[int, int, int], left: list[int]) -> bool:
    a, b, c = (flat[i] for i in corner)
    others = flat[[i for i in left if i not in corner]]
    if not len(others):
        return False
    inside = np.ones(len(others), dtype=bool)
    for p, q in ((a, b), (b, c), (c, a)):
        inside &= (q[0] - p[0]) * (others[:, 1] - p[1]) - (q[1] - p[1]) * (others[:, 0] - p[0]) > -1e-12
    return bool(inside.any())
