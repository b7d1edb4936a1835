"""The bare kernels' columns and the geometry of body and arm.

Everything is scalar arithmetic on the right hand (a left hand is mirrored by the face before it comes here);
`ergo.strength.hand_capability` checks, packs, calls and unpacks. Lengths m, forces N, moments N m.
"""

import math

from numba import njit

from ergo.arm import compiled  # noqa: F401  (sets numba's cache folder, so it comes first)

# Columns of the operator array (n, OPERATOR_COLUMNS): body, then strengths.
UPPER, FOREARM, WRIST, HALF_BREADTH, ANKLE_Z, LEG, TRUNK, BODY_FRONT, CHEST_HALF = range(9)
FOOT, TOE_AHEAD, MASS, UPPER_MASS, FOREARM_MASS, HAND_MASS, UPPER_COM, FOREARM_COM = range(9, 17)
COM_LEG, COM_TRUNK, BACK_Y, FRONT_Y, HAND_DEPTH, PROTRACTION, SEAT_FRONT = range(17, 24)
GIRDLE_PULL, GIRDLE_PUSH, BREAKAWAY, SLIDE = range(24, 28)
FLEXION, EXTENSION, ABDUCTION, ADDUCTION, HORIZONTAL_FLEXION, HORIZONTAL_EXTENSION = range(28, 34)
MEDIAL, LATERAL, ELBOW_FLEXION, ELBOW_EXTENSION = range(34, 38)
WRIST_FLEXION, WRIST_EXTENSION, RADIAL, ULNAR = range(38, 42)
OPERATOR_COLUMNS = 42

# What set the capability, or kept the hand from the handle.
(LIMIT_SHOULDER_RAISE, LIMIT_SHOULDER_ACROSS, LIMIT_HUMERUS, LIMIT_ELBOW, LIMIT_WRIST, LIMIT_GIRDLE,
 LIMIT_GRIP, LIMIT_TIPPING, LIMIT_SLIPPING, LIMIT_REACH, LIMIT_TOO_CLOSE, LIMIT_RANGE, LIMIT_TRUNK_IN_WAY,
 LIMIT_BENCH) = range(14)  # fmt: skip

# Entries of the scene vector: what all operators share.
(SURFACE_Z, FRICTION, SEATED, SEAT_Z, HIP_Y, BRACE_BENCH, BRACE_BACK, BEND_MIN, BEND_MAX, COM_SLACK, LEAN_MAX,
 SIDE_BASE, BALL, SWIVEL_LOW, SWIVEL_HIGH, TOE_LIMIT, REACH_EASE) = range(17)  # fmt: skip
# Entries of the range vector: cosines, sines and tangents of joint ranges (see ergo.arm.joints).
(COS_ELBOW_MIN, TAN_EXTENSION, TAN_BEHIND, TAN_ADDUCTION, COS_MEDIAL, COS_LATERAL, COS_PRONATION, COS_SUPINATION,
 SIN_RADIAL, SIN_ULNAR, SIN_NATURAL) = range(11)  # fmt: skip

# Divisions are guarded where they can vanish, so numba's own checks would only cost branches. No fast arithmetic: the
# compiler would order sums by where a function is inlined, and the run that compiles would differ from those that load.
bare = njit(cache=True, error_model="numpy")
bare_parallel = njit(cache=True, error_model="numpy", parallel=True)

GRAVITY = 9.80665
NO_LIMIT = 1.0e9
DEGREES = 180.0 / math.pi
# The elbow hangs down, a little back and outward: the swivel counts from there (see DEVELOPERS.md, frames).
REST_X, REST_Y, REST_Z = 0.35, -0.45, -0.8216

@bare
def angle_deg(cosine):
    """Arc cosine in degrees, Abramowitz and Stegun 4.4.45 (error below 0.004 degrees)."""
    x = min(abs(cosine), 1.0)
    a = math.sqrt(1.0 - x) * (1.5707288 + x * (-0.2121144 + x * (0.0742610 - 0.0187293 * x))) * DEGREES
    return a if cosine >= 0.0 else 180.0 - a


@bare
def shaped(shape, row, elbow_deg, elevation_deg):
    """Posture factor of one strength: polynomial in elbow angle and elevation, 1 at its reference posture."""
    past = max(elevation_deg - 45.0, 0.0)
    value = shape[row, 0] + elbow_deg * (shape[row, 1] + elbow_deg * shape[row, 2])
    return max(value + shape[row, 3] * elevation_deg + shape[row, 4] * past, 0.0)


@bare
def arm_lines(dx, dy, dz, upper, fore, cos_swivel, sin_swivel):
    """Unit vectors of upper arm u, forearm v and elbow hinge h for a shoulder-to-grip vector and a swivel."""
    d = math.sqrt(dx * dx + dy * dy + dz * dz)
    lx, ly, lz = dx / d, dy / d, dz / d
    along = (upper * upper - fore * fore + d * d) / (2.0 * d)
    out = math.sqrt(max(upper * upper - along * along, 0.0))
    dot = REST_X * lx + REST_Y * ly + REST_Z * lz
    ax, ay, az = REST_X - dot * lx, REST_Y - dot * ly, REST_Z - dot * lz
    size = 1.0 / math.sqrt(max(ax * ax + ay * ay + az * az, 1e-12))
    ax, ay, az = ax * size, ay * size, az * size
    bx, by, bz = ay * lz - az * ly, az * lx - ax * lz, ax * ly - ay * lx
    cx, cy, cz = cos_swivel * ax + sin_swivel * bx, cos_swivel * ay + sin_swivel * by, cos_swivel * az + sin_swivel * bz
    ux, uy, uz = (along * lx + out * cx) / upper, (along * ly + out * cy) / upper, (along * lz + out * cz) / upper
    vx, vy, vz = (dx - upper * ux) / fore, (dy - upper * uy) / fore, (dz - upper * uz) / fore
    return ux, uy, uz, vx, vy, vz, cy * lz - cz * ly, cz * lx - cx * lz, cx * ly - cy * lx


@bare
def shoulder_axes(ux, uy, uz, sin_t, cos_t):
    """Trunk components of u (forward, out, down), raising axis e1, across axis e2 (outward positive), plane azimuth."""
    forward, down = uy * cos_t - uz * sin_t, -uy * sin_t - uz * cos_t
    # Near the hanging arm the plane of elevation is taken as the sagittal plane, without a jump.
    af, ao = forward + (0.02 if forward >= 0.0 else -0.02), ux
    size = 1.0 / math.sqrt(af * af + ao * ao)
    af, ao = af * size, ao * size
    # Raising axis: trunk-down x plane direction (af forward, ao outward), made square to u.
    ex, ey, ez = af, -ao * cos_t, ao * sin_t
    dot = ex * ux + ey * uy + ez * uz
    ex, ey, ez = ex - dot * ux, ey - dot * uy, ez - dot * uz
    size = 1.0 / math.sqrt(max(ex * ex + ey * ey + ez * ez, 1e-12))
    ex, ey, ez = ex * size, ey * size, ez * size
    qx, qy, qz = uy * ez - uz * ey, uz * ex - ux * ez, ux * ey - uy * ex
    return forward, down, af, ao, ex, ey, ez, qx, qy, qz


@bare
def arm_moments(op, lines, rx, ry, rz, dx, dy, dz):
    """What the muscles must give for a hand force F along d, as slope x F + weight.

    Returns (elbow slope, elbow weight) about the hinge, flexion positive, and the shoulder's moment per newton (3)
    and the part of it that the arm's weight asks for (x, y; it has no upright part).
    """
    upper = op[UPPER_MASS] * op[UPPER_COM] * op[UPPER] + (op[FOREARM_MASS] + op[HAND_MASS]) * op[UPPER]
    fore = op[FOREARM_MASS] * op[FOREARM_COM] * (op[FOREARM] - op[WRIST]) + op[HAND_MASS] * op[FOREARM]
    fx, fy = GRAVITY * fore * lines[4], -GRAVITY * fore * lines[3]
    ax, ay, az = op[FOREARM] * lines[3], op[FOREARM] * lines[4], op[FOREARM] * lines[5]
    slope = lines[6] * (ay * dz - az * dy) + lines[7] * (az * dx - ax * dz) + lines[8] * (ax * dy - ay * dx)
    moment = (ry * dz - rz * dy, rz * dx - rx * dz, rx * dy - ry * dx)
    weight = (fx + GRAVITY * upper * lines[1], fy - GRAVITY * upper * lines[0])
    return slope, lines[6] * fx + lines[7] * fy, moment, weight


@bare
def place_body(op, scene, stand_y, com_share, bend):
    """Hip, trunk direction, shoulder and centre of mass for a centre-of-mass place over the feet and a bend.

    Returns (hip_y, hip_z, sin trunk, cos trunk, shoulder_y, shoulder_z, com_y past the ankle, sin lean).
    """
    sin_b, cos_b = math.sin(bend), math.cos(bend)
    if scene[SEATED] > 0.0:
        hip_y, hip_z, sin_l, com = stand_y, op[ANKLE_Z], 0.0, op[COM_LEG] + op[COM_TRUNK] * sin_b
        sin_t, cos_t = sin_b, cos_b
    else:
        slack = scene[COM_SLACK]
        com = op[BACK_Y] - slack + com_share * (op[FRONT_Y] - op[BACK_Y] + 2.0 * slack)
        main, side = op[COM_LEG] + op[COM_TRUNK] * cos_b, op[COM_TRUNK] * sin_b
        size = math.sqrt(main * main + side * side)
        k = com / size
        w = math.sqrt(max(1.0 - k * k, 0.0))
        sin_l, cos_l = (k * main - w * side) / size, (w * main + k * side) / size
        hip_y, hip_z = stand_y + op[LEG] * sin_l, op[ANKLE_Z] + op[LEG] * cos_l
        sin_t, cos_t = sin_l * cos_b + cos_l * sin_b, cos_l * cos_b - sin_l * sin_b
    return hip_y, hip_z, sin_t, cos_t, hip_y + op[TRUNK] * sin_t, hip_z + op[TRUNK] * cos_t, com, sin_l


@bare
def front_at(op, scene, stand_y, hip_y, hip_z, sin_t, cos_t, shoulder_z):
    """How far the front of the body passes the bench edge at the height of the bench surface (negative: free)."""
    z = scene[SURFACE_Z]
    if z >= shoulder_z:
        return -1.0
    if z >= hip_z:
        return hip_y + (z - hip_z) * sin_t / cos_t + op[BODY_FRONT]
    if scene[SEATED] > 0.0:
        return -1.0
    share = max(z - op[ANKLE_Z], 0.0) / max(hip_z - op[ANKLE_Z], 1e-6)
    return stand_y + share * (hip_y - stand_y) + op[BODY_FRONT]
