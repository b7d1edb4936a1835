"""Bare kernels for distances to solid convex bodies: point, and nearest point of a segment.

A body is a row of ten numbers: kind (0 box, 1 cylinder, 2 ball), middle (3), then for a box its half sizes
(3); for a cylinder its unit axis (3), half length, radius; for a ball its radius at place 4. The signed
distance to a convex body is convex along any straight line, so its lowest value over a segment is bracketed
by the sign of its slope.
"""

import math

import numpy as np
from numba import njit

BOX, CYLINDER, BALL = 0, 1, 2
_STEPS = 120
_CLOSE = 1e-12  # m


@njit(cache=True, nogil=True)
def _box(body, p, grad):
    outside = 0.0
    worst, axis = -1e300, 0
    for k in range(3):
        r = p[k] - body[1 + k]
        over = abs(r) - body[4 + k]
        grad[k] = 0.0
        if over > worst:
            worst, axis = over, k
        if over > 0.0:
            outside += over * over
            grad[k] = over if r > 0.0 else -over
    if outside > 0.0:
        d = math.sqrt(outside)
        for k in range(3):
            grad[k] /= d
        return d
    grad[axis] = 1.0 if p[axis] >= body[1 + axis] else -1.0
    return worst


@njit(cache=True, nogil=True)
def _cylinder(body, p, grad):
    z = 0.0
    for k in range(3):
        z += (p[k] - body[1 + k]) * body[4 + k]
    square = 0.0
    for k in range(3):
        grad[k] = p[k] - body[1 + k] - z * body[4 + k]
        square += grad[k] * grad[k]
    rho = math.sqrt(square)
    over_r, over_z = rho - body[8], abs(z) - body[7]
    end = 1.0 if z >= 0.0 else -1.0
    if over_r <= 0.0 and over_z <= 0.0:
        d = max(over_r, over_z)
        w_r, w_z = (1.0, 0.0) if over_r >= over_z else (0.0, 1.0)
    else:
        up_r, up_z = max(over_r, 0.0), max(over_z, 0.0)
        d = math.hypot(up_r, up_z)
        w_r, w_z = up_r / d, up_z / d
    for k in range(3):
        radial = grad[k] / rho if rho > 0.0 else 0.0
        grad[k] = w_r * radial + w_z * end * body[4 + k]
    return d


@njit(cache=True, nogil=True)
def _ball(body, p, grad):
    square = 0.0
    for k in range(3):
        grad[k] = p[k] - body[1 + k]
        square += grad[k] * grad[k]
    d = math.sqrt(square)
    for k in range(3):
        grad[k] = grad[k] / d if d > 0.0 else 0.0
    return d - body[4]


@njit(cache=True, nogil=True)
def _distance(body, p, grad):
    kind = int(body[0])
    if kind == 0:
        return _box(body, p, grad)
    if kind == 1:
        return _cylinder(body, p, grad)
    return _ball(body, p, grad)


@njit(cache=True, nogil=True)
def _at(body, a, b, t, p, grad):
    for k in range(3):
        p[k] = a[k] + t * (b[k] - a[k])
    d = _distance(body, p, grad)
    slope = 0.0
    for k in range(3):
        slope += grad[k] * (b[k] - a[k])
    return d, slope


@njit(cache=True, nogil=True)
def _segment(body, a, b, p, grad):
    """Lowest signed distance over one segment, to 1e-12 m.

    A convex curve lies above its end tangents, so their crossing bounds it from below: that tells when to
    stop. The next place tried is in turn the secant's (exact along a face, where slope x distance is a
    straight line), the crossing's (exact where faces meet) and the middle.
    """
    low, high = 0.0, 1.0
    d_low, s_low = _at(body, a, b, low, p, grad)
    if s_low >= 0.0:
        return d_low
    d_high, s_high = _at(body, a, b, high, p, grad)
    if s_high <= 0.0:
        return d_high
    best = min(d_low, d_high)
    for step in range(_STEPS):
        crossing = (d_high - s_high * high - d_low + s_low * low) / (s_low - s_high)
        if best - (d_low + s_low * (crossing - low)) < _CLOSE:
            break
        t = 0.5 * (low + high)
        if step % 3 == 0:
            g_low, g_high = s_low * abs(d_low), s_high * abs(d_high)
            tried = low - g_low * (high - low) / (g_high - g_low) if g_high > g_low else t
        else:
            tried = crossing if step % 3 == 1 else t
        if low < tried < high:
            t = tried
        d, s = _at(body, a, b, t, p, grad)
        best = min(best, d)
        if s == 0.0 or not low < t < high:
            break
        if s < 0.0:
            low, d_low, s_low = t, d, s
        else:
            high, d_high, s_high = t, d, s
    return best


@njit(cache=True, nogil=True)
def point_distances(body, points, distance, gradient):
    """Fill `distance` (M,) and its `gradient` (M, 3) at `points` (M, 3)."""
    for m in range(points.shape[0]):
        distance[m] = _distance(body, points[m], gradient[m])


@njit(cache=True, nogil=True)
def segment_distances(body, start, end, distance):
    """Fill `distance` (M,) with the lowest signed distance over each segment `start` to `end` (M, 3)."""
    p, grad = np.empty(3), np.empty(3)
    for m in range(start.shape[0]):
        distance[m] = _segment(body, start[m], end[m], p, grad)
