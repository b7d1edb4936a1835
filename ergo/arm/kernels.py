"""The bare kernels: one posture judged, the best posture found, the best stance found.

Everything is scalar arithmetic on the right hand (a left hand is mirrored by the face before it comes here);
`ergo.strength.hand_capability` checks, packs, calls and unpacks. Lengths m, forces N, moments N m.
All functions that call one another stay in this file: numba's cache follows one file's content only.
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

# Divisions are guarded where they can vanish, so numba's own checks would only cost branches.
bare = njit(cache=True, error_model="numpy", fastmath=True)
bare_parallel = njit(cache=True, error_model="numpy", fastmath=True, parallel=True)

GRAVITY = 9.80665
NOT_REACHED = -1.0e3
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
def room(slope, offset, plus, minus):
    """Largest F >= 0 for which -minus <= slope F + offset <= plus."""
    if offset > plus or offset < -minus:
        return 0.0
    if slope > 1e-9:
        return (plus - offset) / slope
    if slope < -1e-9:
        return (minus + offset) / -slope
    return NO_LIMIT


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
def in_joint_range(ux, uy, uz, vx, vy, vz, forward, down, sin_t, cos_t, limits):
    """Whether the upper arm lies inside the shoulder's range and the humerus inside its turning range."""
    outward = ux
    if -forward > limits[TAN_EXTENSION] * max(down, 0.0) + limits[TAN_BEHIND] * max(outward, 0.0):
        return False
    if -outward > limits[TAN_ADDUCTION] * (max(forward, 0.0) + max(down, 0.0)):
        return False
    # Where the forearm would point without turning: trunk-forward carried along by the shortest swing from
    # hanging to u, v0 = f - (f.u)/(1 + down) (u + trunk-down).
    k = forward / max(1.0 + down, 1e-6)
    fx, fy, fz = -k * ux, cos_t - k * (uy - sin_t), -sin_t - k * (uz - cos_t)
    along = vx * ux + vy * uy + vz * uz
    px, py, pz = vx - along * ux, vy - along * uy, vz - along * uz
    size = math.sqrt(px * px + py * py + pz * pz)
    if size < 0.05:
        return True  # a straight arm: turning the humerus and turning the forearm are one motion
    cosine = px * fx + py * fy + pz * fz
    medial = px * (fy * uz - fz * uy) + py * (fz * ux - fx * uz) + pz * (fx * uy - fy * ux)
    return cosine >= (limits[COS_MEDIAL] if medial >= 0.0 else limits[COS_LATERAL]) * size


@bare
def shoulder_limit(op, shape, arm, moment, weight, elbow_deg, elevation_deg, best, code):
    """Lower `best` by the shoulder: raising/lowering in the plane of elevation, across/outward, turning."""
    forward, down, af, ao, ex, ey, ez, qx, qy, qz = arm[9:]
    ux, uy, uz = arm[0], arm[1], arm[2]
    flex = op[FLEXION] * shaped(shape, 0, elbow_deg, elevation_deg if forward >= 0.0 else 0.0)
    extend = op[EXTENSION] * shaped(shape, 1, elbow_deg, elevation_deg if forward >= 0.0 else 0.0)
    fore, side = af * af, ao * ao
    up_fore, down_fore = (flex, extend) if af >= 0.0 else (extend, flex)
    up_side, down_side = (op[ABDUCTION], op[ADDUCTION]) if ao >= 0.0 else (op[ADDUCTION], op[ABDUCTION])
    mx, my, mz = moment
    gx, gy = weight
    f = room(mx * ex + my * ey + mz * ez, gx * ex + gy * ey, fore * up_fore + side * up_side,
             fore * down_fore + side * down_side)  # fmt: skip
    if f < best:
        best, code = f, LIMIT_SHOULDER_RAISE
    # Across the body: horizontal strengths at a raised arm; at a hanging arm what raises it square to the plane.
    turn = max(1.0 - down * down, 0.0)
    out_fore, in_fore = (extend, flex) if ao >= 0.0 else (flex, extend)
    out_side, in_side = (op[ABDUCTION], op[ADDUCTION]) if af >= 0.0 else (op[ADDUCTION], op[ABDUCTION])
    outward = turn * op[HORIZONTAL_EXTENSION] + (1.0 - turn) * (side * out_fore + fore * out_side)
    inward = turn * op[HORIZONTAL_FLEXION] + (1.0 - turn) * (side * in_fore + fore * in_side)
    f = room(mx * qx + my * qy + mz * qz, gx * qx + gy * qy, outward, inward)
    if f < best:
        best, code = f, LIMIT_SHOULDER_ACROSS
    f = room(mx * ux + my * uy + mz * uz, gx * ux + gy * uy, op[LATERAL], op[MEDIAL])
    if f < best:
        best, code = f, LIMIT_HUMERUS
    return best, code


@bare
def hand_axis(arm, target, ball, limits):
    """Thumb-side axis of the hand, whether wrist and forearm can take it, and how far they are from rest."""
    vx, vy, vz, hx, hy, hz = arm[3:9]
    wx, wy, wz = hy * vz - hz * vy, hz * vx - hx * vz, hx * vy - hy * vx
    if ball:
        return True, wx, wy, wz, 0.0
    bx, by, bz = target[6], target[7], target[8]
    if bx * wx + by * wy + bz * wz < 0.0:  # a bar has no sign: the thumb goes to the nearer end
        bx, by, bz = -bx, -by, -bz
    sine = bx * vx + by * vy + bz * vz
    px, py, pz = bx - sine * vx, by - sine * vy, bz - sine * vz
    size = math.sqrt(max(px * px + py * py + pz * pz, 1e-12))
    px, py, pz = px / size, py / size, pz / size
    cosine = px * wx + py * wy + pz * wz
    supine = px * hx + py * hy + pz * hz
    if cosine < (limits[COS_SUPINATION] if supine >= 0.0 else limits[COS_PRONATION]):
        return False, px, py, pz, 0.0
    if sine < limits[SIN_RADIAL] or sine > limits[SIN_ULNAR]:
        return False, px, py, pz, 0.0
    end = limits[SIN_ULNAR] if sine > limits[SIN_NATURAL] else limits[SIN_RADIAL]
    bent = (sine - limits[SIN_NATURAL]) / (end - limits[SIN_NATURAL])
    return True, px, py, pz, bent * bent + (1.0 - cosine)


@bare
def wrist_limit(op, arm, thumb, dx, dy, dz, best, code):
    """Lower `best` by the wrist: flexion/extension about the thumb axis, radial/ulnar about the palm's normal."""
    vx, vy, vz = arm[3:6]
    tx, ty, tz = thumb
    mx, my, mz = vy * dz - vz * dy, vz * dx - vx * dz, vx * dy - vy * dx
    nx, ny, nz = vy * tz - vz * ty, vz * tx - vx * tz, vx * ty - vy * tx
    f = room(op[WRIST] * (mx * tx + my * ty + mz * tz), 0.0, op[WRIST_FLEXION], op[WRIST_EXTENSION])
    g = room(op[WRIST] * (mx * nx + my * ny + mz * nz), 0.0, op[RADIAL], op[ULNAR])
    f = min(f, g)
    return (f, LIMIT_WRIST) if f < best else (best, code)


@bare
def grip_limit(op, arm, target, ball, best, code):
    """Lower `best` by the grip: fingers pulled open square to the bar, the hand sliding along it."""
    dx, dy, dz = target[3], target[4], target[5]
    open_share = min(max(1.0 - (dx * arm[3] + dy * arm[4] + dz * arm[5]), 0.0), 1.0)
    along = 0.0 if ball else dx * target[6] + dy * target[7] + dz * target[8]
    across = open_share * math.sqrt(max(1.0 - along * along, 0.0)) / op[BREAKAWAY]
    slide = along / op[SLIDE]
    load = math.sqrt(across * across + slide * slide)
    f = 1.0 / load if load > 1e-9 else NO_LIMIT
    return (f, LIMIT_GRIP) if f < best else (best, code)


@bare
def elbow_in_trunk(op, arm, shoulder_x, shoulder_y, shoulder_z, stand_x, body):
    """Whether the elbow would lie inside the trunk."""
    ex, ey = shoulder_x + op[UPPER] * arm[0], shoulder_y + op[UPPER] * arm[1]
    ez = shoulder_z + op[UPPER] * arm[2]
    if ex - stand_x >= 0.6 * op[HALF_BREADTH] or ez < body[1] or ez > shoulder_z:
        return False
    line = body[0] + (ez - body[1]) * body[2] / max(body[3], 0.2)
    return ey < line + op[BODY_FRONT] and ey > line - op[BODY_FRONT]


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
def judge_arm(op, shape, limits, ball, place, body, target, cos_swivel, sin_swivel, best, code):
    """Capability of one arm posture under a ceiling `best` set by stance and girdle: force, limit, discomfort."""
    shoulder_x, shoulder_y, shoulder_z, stand_x = place
    rx, ry, rz = target[0] - shoulder_x, target[1] - shoulder_y, target[2] - shoulder_z
    lines = arm_lines(rx, ry, rz, op[UPPER], op[FOREARM], cos_swivel, sin_swivel)
    arm = lines + shoulder_axes(lines[0], lines[1], lines[2], body[2], body[3])
    if not in_joint_range(lines[0], lines[1], lines[2], lines[3], lines[4], lines[5], arm[9], arm[10], body[2],
                          body[3], limits):  # fmt: skip
        return -0.5, LIMIT_RANGE, 9.0
    reachable, tx, ty, tz, bent = hand_axis(arm, target, ball, limits)
    if not reachable:
        return -0.5, LIMIT_RANGE, 9.0
    if elbow_in_trunk(op, arm, shoulder_x, shoulder_y, shoulder_z, stand_x, body):
        return -0.6, LIMIT_TRUNK_IN_WAY, 9.0
    best, code = grip_limit(op, arm, target, ball, best, code)
    dx, dy, dz = target[3], target[4], target[5]
    best, code = wrist_limit(op, arm, (tx, ty, tz), dx, dy, dz, best, code)
    elevation, elbow = angle_deg(arm[10]), 180.0 - angle_deg(
        lines[0] * lines[3] + lines[1] * lines[4] + lines[2] * lines[5]
    )
    elbow_slope, elbow_weight, moment, weight = arm_moments(op, lines, rx, ry, rz, dx, dy, dz)
    f = room(elbow_slope, elbow_weight, op[ELBOW_FLEXION] * shaped(shape, 2, elbow, elevation),
             op[ELBOW_EXTENSION] * shaped(shape, 3, elbow, elevation))  # fmt: skip
    if f < best:
        best, code = f, LIMIT_ELBOW
    best, code = shoulder_limit(op, shape, arm, moment, weight, elbow, elevation, best, code)
    return best, code, 2.0 * (1.0 + lines[2]) + bent + 0.5 * (1.0 - cos_swivel)


@bare
def place_body(op, scene, stand_y, com_share, bend):
    """Hip, trunk direction, shoulder and centre of mass for a centre-of-mass place over the feet and a bend.

    Returns (fault, hip_y, hip_z, sin trunk, cos trunk, shoulder_y, shoulder_z, com_y past the ankle, sin lean).
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
        if abs(sin_l) > scene[LEAN_MAX]:
            return LIMIT_TIPPING, 0.0, 0.0, 0.0, 1.0, 0.0, 0.0, com, sin_l
        hip_y, hip_z = stand_y + op[LEG] * sin_l, op[ANKLE_Z] + op[LEG] * cos_l
        sin_t, cos_t = sin_l * cos_b + cos_l * sin_b, cos_l * cos_b - sin_l * sin_b
    shoulder_y, shoulder_z = hip_y + op[TRUNK] * sin_t, hip_z + op[TRUNK] * cos_t
    fault = -1
    if front_at(op, scene, stand_y, hip_y, hip_z, sin_t, cos_t, shoulder_z) > 1e-9:
        fault = LIMIT_BENCH
    return fault, hip_y, hip_z, sin_t, cos_t, shoulder_y, shoulder_z, com, sin_l


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


@bare
def stance_limit(op, scene, stand_y, com_y, com_x, touching, gx, gy, gz, dx, dy, dz):
    """Hand forces at which the body neither tips nor slips: (largest, its limit, smallest).

    `gx` counts from the body's midline; the smallest is above zero where the body hangs on the handle.
    """
    load = op[MASS] * GRAVITY
    mu = scene[FRICTION]
    rise = gz - scene[SEAT_Z]
    # Pressure point: N c = W com + F (g dz - rise d), N = W + F dz.
    forward = (gy - stand_y - op[FRONT_Y]) * dz - rise * dy
    backward = -(gy - stand_y - op[BACK_Y]) * dz + rise * dy
    forward_room, backward_room = load * (op[FRONT_Y] - com_y), load * (com_y - op[BACK_Y])
    slip, slip_room = math.sqrt(dx * dx + dy * dy) - mu * dz, mu * load
    if scene[BRACE_BENCH] > 0.0 and touching and dy < 0.0:
        edge = scene[SURFACE_Z]
        forward += edge * (dy - mu * dz)
        forward_room += edge * mu * load
        slip, slip_room = abs(dx) - mu * dz, mu * load
    elif scene[BRACE_BACK] > 0.0 and dy > 0.0:
        backward, slip, slip_room = 0.0, abs(dx) - mu * dz, mu * load
    f = min(cap(forward, forward_room), cap(backward, backward_room))
    side = gx * dz - rise * dx
    f = min(f, cap(side - scene[SIDE_BASE] * dz, load * (scene[SIDE_BASE] - com_x)))
    f = min(f, cap(-side - scene[SIDE_BASE] * dz, load * (scene[SIDE_BASE] + com_x)))
    f = min(f, cap(-dz, load))
    g = cap(slip, slip_room)
    low = max(least(forward, forward_room), least(backward, backward_room))
    return (g, LIMIT_SLIPPING, low) if g < f else (f, LIMIT_TIPPING, low)


@bare
def cap(slope, limit):
    """Largest F >= 0 with slope F <= limit, 0 where there is none."""
    if slope > 1e-9:
        return max(limit / slope, 0.0)
    return NO_LIMIT if limit >= 0.0 or slope < -1e-9 else 0.0


@bare
def least(slope, limit):
    """Smallest F >= 0 with slope F <= limit where the slope falls."""
    return max(limit / slope, 0.0) if slope < -1e-9 and limit < 0.0 else 0.0
