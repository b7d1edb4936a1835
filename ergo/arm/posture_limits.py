"""The bare limits of one posture: how much of each limit a newton at the hand uses up, and the room to each bound.

A force limit is kept as its load q [1/N]: the capability is 1 / max q. A load, unlike a force, stays smooth where a
limit stops mattering (q = 0), so a search may follow its slope. A bound (reach, joint range, bench) is kept as the
room left to it [m, or as a cosine or sine]: zero or more where the posture is possible.
"""

import math

from ergo.arm import kernels as k
from ergo.arm.kernels import angle_deg, arm_lines, arm_moments, bare, front_at, place_body, shaped, shoulder_axes

# Columns of a row of limits: loads, then rooms, then the smallest force that the stance holds, and the discomfort.
(RAISE, ACROSS, HUMERUS, ELBOW, BEND, TILT, GRIP, GIRDLE, FORWARD, BACKWARD, RIGHT, LEFT, LIFT, SLIP) = range(14)
LOADS = 14
(LEAN, BENCH, REACH, CLOSE, HAND_CLEAR, BEHIND, INWARD, TURNING, FOREARM_TURN, RADIAL, ULNAR, ELBOW_CLEAR) = range(14, 26)
ROOMS_END = 26
LOW, EASE = 26, 27
COLUMNS = 28
OVERLOADED = 1.0e4  # load of a limit that is used up before the hand pulls at all
TOUCHING_GAP = 0.03  # m: a body this near the bench edge leans on it when braced
TIE = 0.98  # share of the largest load from which a stance limit counts as meeting it
BEYOND = 0.04  # m past full reach up to which the arm's other limits are still worked out


@bare
def used(slope, offset, plus, minus):
    """Load q of a moment slope F + offset that has to stay between -minus and plus."""
    if offset >= plus or offset <= -minus:
        return OVERLOADED
    left = plus - offset
    if slope < 0.0:
        slope, left = -slope, minus + offset
    return min(slope / left, OVERLOADED)


@bare
def held(slope, limit):
    """Load q of a condition slope F <= limit."""
    if slope > 1e-9:
        return min(slope / limit, OVERLOADED) if limit > 0.0 else OVERLOADED
    return 0.0 if limit >= 0.0 or slope < -1e-9 else OVERLOADED


@bare
def least(slope, limit):
    """Smallest F >= 0 with slope F <= limit where the slope falls."""
    return max(limit / slope, 0.0) if slope < -1e-9 and limit < 0.0 else 0.0


@bare
def shoulder_loads(op, shape, arm, moment, weight, elbow_deg, elevation_deg, row):
    """Loads of the shoulder: raising/lowering in the plane of elevation, across/outward, turning."""
    forward, down, af, ao, ex, ey, ez, qx, qy, qz = arm[9:]
    ux, uy, uz = arm[0], arm[1], arm[2]
    ahead = elevation_deg if forward >= 0.0 else 0.0
    flex, extend = op[k.FLEXION] * shaped(shape, 0, elbow_deg, ahead), op[k.EXTENSION] * shaped(shape, 1, elbow_deg, ahead)
    fore, side = af * af, ao * ao
    up_fore, down_fore = (flex, extend) if af >= 0.0 else (extend, flex)
    up_side, down_side = (op[k.ABDUCTION], op[k.ADDUCTION]) if ao >= 0.0 else (op[k.ADDUCTION], op[k.ABDUCTION])
    mx, my, mz = moment
    gx, gy = weight
    row[RAISE] = used(mx * ex + my * ey + mz * ez, gx * ex + gy * ey, fore * up_fore + side * up_side,
                      fore * down_fore + side * down_side)  # fmt: skip
    # Across the body: horizontal strengths at a raised arm; at a hanging arm what raises it square to the plane.
    turn = max(1.0 - down * down, 0.0)
    out_fore, in_fore = (extend, flex) if ao >= 0.0 else (flex, extend)
    out_side, in_side = (op[k.ABDUCTION], op[k.ADDUCTION]) if af >= 0.0 else (op[k.ADDUCTION], op[k.ABDUCTION])
    outward = turn * op[k.HORIZONTAL_EXTENSION] + (1.0 - turn) * (side * out_fore + fore * out_side)
    inward = turn * op[k.HORIZONTAL_FLEXION] + (1.0 - turn) * (side * in_fore + fore * in_side)
    row[ACROSS] = used(mx * qx + my * qy + mz * qz, gx * qx + gy * qy, outward, inward)
    row[HUMERUS] = used(mx * ux + my * uy + mz * uz, gx * ux + gy * uy, op[k.LATERAL], op[k.MEDIAL])


@bare
def range_rooms(arm, body, limits, row):
    """Rooms to the ends of the shoulder's range and of the humerus' turning range."""
    ux, uy, uz, vx, vy, vz = arm[0:6]
    forward, down, outward = arm[9], arm[10], arm[0]
    sin_t, cos_t = body[2], body[3]
    row[BEHIND] = forward + limits[k.TAN_EXTENSION] * max(down, 0.0) + limits[k.TAN_BEHIND] * max(outward, 0.0)
    row[INWARD] = outward + limits[k.TAN_ADDUCTION] * (max(forward, 0.0) + max(down, 0.0))
    # Where the forearm would point without turning: trunk-forward carried along by the shortest swing from
    # hanging to u, v0 = f - (f.u)/(1 + down) (u + trunk-down).
    g = forward / max(1.0 + down, 1e-6)
    fx, fy, fz = -g * ux, cos_t - g * (uy - sin_t), -sin_t - g * (uz - cos_t)
    along = vx * ux + vy * uy + vz * uz
    px, py, pz = vx - along * ux, vy - along * uy, vz - along * uz
    size = math.sqrt(px * px + py * py + pz * pz)
    row[TURNING] = 1.0
    if size >= 0.05:  # at a straight arm turning the humerus and turning the forearm are one motion
        medial = px * (fy * uz - fz * uy) + py * (fz * ux - fx * uz) + pz * (fx * uy - fy * ux)
        end = limits[k.COS_MEDIAL] if medial >= 0.0 else limits[k.COS_LATERAL]
        row[TURNING] = (px * fx + py * fy + pz * fz) / size - end


@bare
def hand_axis(arm, target, ball):
    """Thumb-side axis of the hand, sine of the bar's slant along the forearm, cosine of the forearm's turn, its sign."""
    vx, vy, vz, hx, hy, hz = arm[3:9]
    wx, wy, wz = hy * vz - hz * vy, hz * vx - hx * vz, hx * vy - hy * vx
    if ball:
        return wx, wy, wz, 0.0, 1.0, 1.0
    bx, by, bz = target[6], target[7], target[8]
    if bx * wx + by * wy + bz * wz < 0.0:  # a bar has no sign: the thumb goes to the nearer end
        bx, by, bz = -bx, -by, -bz
    sine = bx * vx + by * vy + bz * vz
    px, py, pz = bx - sine * vx, by - sine * vy, bz - sine * vz
    size = 1.0 / math.sqrt(max(px * px + py * py + pz * pz, 1e-12))
    px, py, pz = px * size, py * size, pz * size
    return px, py, pz, sine, px * wx + py * wy + pz * wz, px * hx + py * hy + pz * hz


@bare
def hand_limits(op, arm, target, ball, limits, row):
    """Rooms of wrist and forearm, loads of wrist and grip; returns how far the wrist is from rest."""
    tx, ty, tz, sine, cosine, supine = hand_axis(arm, target, ball)
    dx, dy, dz = target[3], target[4], target[5]
    bent = 0.0
    if ball:
        row[FOREARM_TURN] = row[RADIAL] = row[ULNAR] = 1.0
    else:
        row[FOREARM_TURN] = cosine - (limits[k.COS_SUPINATION] if supine >= 0.0 else limits[k.COS_PRONATION])
        row[RADIAL], row[ULNAR] = sine - limits[k.SIN_RADIAL], limits[k.SIN_ULNAR] - sine
        end = limits[k.SIN_ULNAR] if sine > limits[k.SIN_NATURAL] else limits[k.SIN_RADIAL]
        bent = (sine - limits[k.SIN_NATURAL]) / (end - limits[k.SIN_NATURAL])
        bent = bent * bent + 1.0 - cosine
    # Wrist: flexion/extension about the thumb axis, radial/ulnar about the palm's normal.
    vx, vy, vz = arm[3:6]
    mx, my, mz = vy * dz - vz * dy, vz * dx - vx * dz, vx * dy - vy * dx
    nx, ny, nz = vy * tz - vz * ty, vz * tx - vx * tz, vx * ty - vy * tx
    row[BEND] = used(op[k.WRIST] * (mx * tx + my * ty + mz * tz), 0.0, op[k.WRIST_FLEXION], op[k.WRIST_EXTENSION])
    row[TILT] = used(op[k.WRIST] * (mx * nx + my * ny + mz * nz), 0.0, op[k.RADIAL], op[k.ULNAR])
    # Grip: fingers pulled open square to the bar, the hand sliding along it.
    open_share = min(max(1.0 - (dx * vx + dy * vy + dz * vz), 0.0), 1.0)
    along = 0.0 if ball else dx * target[6] + dy * target[7] + dz * target[8]
    across = open_share * math.sqrt(max(1.0 - along * along, 0.0)) / op[k.BREAKAWAY]
    slide = along / op[k.SLIDE]
    row[GRIP] = math.sqrt(across * across + slide * slide)
    return bent


@bare
def arm_limits(op, shape, limits, ball, place, body, target, cos_swivel, sin_swivel, row):
    """Loads and rooms of one arm posture into `row`; returns its discomfort."""
    shoulder_x, shoulder_y, shoulder_z, stand_x = place
    rx, ry, rz = target[0] - shoulder_x, target[1] - shoulder_y, target[2] - shoulder_z
    lines = arm_lines(rx, ry, rz, op[k.UPPER], op[k.FOREARM], cos_swivel, sin_swivel)
    arm = lines + shoulder_axes(lines[0], lines[1], lines[2], body[2], body[3])
    range_rooms(arm, body, limits, row)
    bent = hand_limits(op, arm, target, ball, limits, row)
    # The elbow stays out of the trunk: beside it, below, above, or past its front or back.
    ex, ey, ez = shoulder_x + op[k.UPPER] * lines[0], shoulder_y + op[k.UPPER] * lines[1], shoulder_z + op[k.UPPER] * lines[2]
    line = body[0] + (ez - body[1]) * body[2] / max(body[3], 0.2)
    upright = max(body[1] - ez, ez - shoulder_z)
    aside = max(ex - stand_x - 0.6 * op[k.HALF_BREADTH], abs(ey - line) - op[k.BODY_FRONT])
    row[ELBOW_CLEAR] = max(upright, aside)
    elevation, elbow = angle_deg(arm[10]), 180.0 - angle_deg(
        lines[0] * lines[3] + lines[1] * lines[4] + lines[2] * lines[5]
    )
    slope, offset, moment, weight = arm_moments(op, lines, rx, ry, rz, target[3], target[4], target[5])
    row[ELBOW] = used(slope, offset, op[k.ELBOW_FLEXION] * shaped(shape, 2, elbow, elevation),
                      op[k.ELBOW_EXTENSION] * shaped(shape, 3, elbow, elevation))  # fmt: skip
    shoulder_loads(op, shape, arm, moment, weight, elbow, elevation, row)
    return 2.0 * (1.0 + lines[2]) + bent + 0.5 * (1.0 - cos_swivel)


@bare
def stance_loads(op, scene, stand_y, com_y, com_x, touching, gx, gy, gz, dx, dy, dz, row):
    """Loads of tipping and slipping, and the smallest force where the body hangs on the handle.

    `gx` counts from the body's midline.
    """
    load, mu = op[k.MASS] * k.GRAVITY, scene[k.FRICTION]
    rise, base = gz - scene[k.SEAT_Z], scene[k.SIDE_BASE]
    # Pressure point: N c = W com + F (g dz - rise d), N = W + F dz.
    forward = (gy - stand_y - op[k.FRONT_Y]) * dz - rise * dy
    backward = -(gy - stand_y - op[k.BACK_Y]) * dz + rise * dy
    forward_room, backward_room = load * (op[k.FRONT_Y] - com_y), load * (com_y - op[k.BACK_Y])
    slip, slip_room = math.sqrt(dx * dx + dy * dy) - mu * dz, mu * load
    if scene[k.BRACE_BENCH] > 0.0 and touching and dy < 0.0:
        edge = scene[k.SURFACE_Z]
        forward += edge * (dy - mu * dz)
        forward_room += edge * mu * load
        slip = abs(dx) - mu * dz
    elif scene[k.BRACE_BACK] > 0.0 and dy > 0.0:
        backward, slip = 0.0, abs(dx) - mu * dz
    side = gx * dz - rise * dx
    row[FORWARD], row[BACKWARD] = held(forward, forward_room), held(backward, backward_room)
    row[RIGHT], row[LEFT] = held(side - base * dz, load * (base - com_x)), held(-side - base * dz, load * (base + com_x))
    row[LIFT], row[SLIP] = held(-dz, load), held(slip, slip_room)
    row[LOW] = max(least(forward, forward_room), least(backward, backward_room))


@bare
def body_limits(op, scene, limits, stand_x, stand_y, target, com_share, bend, row):
    """Loads and rooms that a posture has before the arm swivels, into `row`.

    Returns (shoulder with the midline's x, hip and trunk direction, discomfort).
    """
    hip_y, hip_z, sin_t, cos_t, y, z, com, sin_l = place_body(op, scene, stand_y, com_share, bend)
    x, body = stand_x + op[k.HALF_BREADTH], (hip_y, hip_z, sin_t, cos_t)
    passes = front_at(op, scene, stand_y, hip_y, hip_z, sin_t, cos_t, z)
    row[LEAN], row[BENCH] = scene[k.LEAN_MAX] - abs(sin_l), 1e-9 - passes
    line = hip_y + (target[2] - hip_z) * sin_t / max(cos_t, 0.2)
    aside = max(abs(target[0] - stand_x) - op[k.CHEST_HALF], target[1] - line - op[k.BODY_FRONT] - op[k.HAND_DEPTH])
    row[HAND_CLEAR] = max(aside, max(hip_z - target[2], target[2] - z))
    rx, ry, rz = target[0] - x, target[1] - y, target[2] - z
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    longest = op[k.UPPER] + op[k.FOREARM]
    # The shoulder comes forward only as far as the reach asks for it.
    toward = max((ry * cos_t - rz * sin_t) / far, 0.2)
    forward = min(max((far - scene[k.REACH_EASE] * longest) / toward, 0.0), op[k.PROTRACTION])
    y, z = y + forward * cos_t, z - forward * sin_t
    ry, rz = target[1] - y, target[2] - z
    far = math.sqrt(rx * rx + ry * ry + rz * rz)
    nearest = op[k.UPPER] ** 2 + op[k.FOREARM] ** 2 - 2.0 * op[k.UPPER] * op[k.FOREARM] * limits[k.COS_ELBOW_MIN]
    row[REACH], row[CLOSE] = 0.999 * longest - far, far - math.sqrt(nearest)
    arm_share = (op[k.UPPER_MASS] + op[k.FOREARM_MASS] + op[k.HAND_MASS]) / op[k.MASS]
    stance_loads(op, scene, stand_y, com + 0.5 * arm_share * ry, 0.5 * arm_share * rx, passes > -TOUCHING_GAP,
                 target[0] - stand_x, target[1], target[2], target[3], target[4], target[5], row)  # fmt: skip
    along = (rx * target[3] + ry * target[4] + rz * target[5]) / far
    row[GIRDLE] = max(along / op[k.GIRDLE_PUSH], -along / op[k.GIRDLE_PULL])
    discomfort = 2.0 * (1.0 - cos_t) + 4.0 * sin_l * sin_l + 4.0 * forward * forward
    return (x, y, z, stand_x), body, discomfort


@bare
def arm_is_formed(row):
    """Whether the hand is near enough to the handle's distance for an arm posture to have a meaning."""
    return row[REACH] > -BEYOND and row[CLOSE] > -BEYOND


@bare
def posture_limits(op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, row):
    """All limits of one posture into `row`."""
    place, body, ease = body_limits(op, scene, limits, stand_x, stand_y, target, com_share, bend, row)
    if arm_is_formed(row):
        ball = scene[k.BALL] > 0.0
        row[EASE] = ease + arm_limits(
            op, shape, limits, ball, place, body, target, math.cos(swivel), math.sin(swivel), row
        )
        return
    for n in range(GIRDLE):
        row[n] = 0.0
    for n in range(BEHIND, ROOMS_END):
        row[n] = 1.0
    row[EASE] = ease + 4.0


@bare
def limit_of(n):
    """Name of the limit in column n."""
    if n <= ELBOW:
        return (k.LIMIT_SHOULDER_RAISE, k.LIMIT_SHOULDER_ACROSS, k.LIMIT_HUMERUS, k.LIMIT_ELBOW)[n]
    if n <= TILT:
        return k.LIMIT_WRIST
    if n <= GIRDLE:
        return k.LIMIT_GRIP if n == GRIP else k.LIMIT_GIRDLE
    return k.LIMIT_SLIPPING if n == SLIP else k.LIMIT_TIPPING


@bare
def verdict(row):
    """(force [N], its limit) of a row; below 0 where the hand does not get there: how far from it."""
    if row[LEAN] < 0.0 or row[BENCH] < 0.0:
        return -4.0, (k.LIMIT_TIPPING if row[LEAN] < 0.0 else k.LIMIT_BENCH)
    if row[REACH] < 0.0 or row[CLOSE] < 0.0:
        return -1.0 + min(row[REACH], row[CLOSE]), (k.LIMIT_REACH if row[REACH] < 0.0 else k.LIMIT_TOO_CLOSE)
    if row[HAND_CLEAR] < 0.0:
        return -0.6, k.LIMIT_TRUNK_IN_WAY
    for n in range(BEHIND, ELBOW_CLEAR):
        if row[n] < 0.0:
            return -0.5, k.LIMIT_RANGE
    if row[ELBOW_CLEAR] < 0.0:
        return -0.6, k.LIMIT_TRUNK_IN_WAY
    top = 0
    for n in range(1, LOADS):
        if row[n] > row[top]:
            top = n
    # At the best posture limits meet. Of those that do, the one that no posture would lift is named: the floor first.
    named = top
    for n in range(FORWARD, LOADS):
        if row[n] >= TIE * row[top] and (named < FORWARD or n == SLIP or row[n] > row[named]):
            named = n
    force = 0.0 if row[top] >= 0.1 * OVERLOADED else 1.0 / max(row[top], 1.0 / k.NO_LIMIT)
    return (force if force >= row[LOW] else 0.0), limit_of(named)


@bare
def judge_posture(op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, row):
    """One posture as it is: (force or shortfall, limit); `row` is left filled."""
    posture_limits(op, shape, scene, limits, stand_x, stand_y, target, com_share, bend, swivel, row)
    return verdict(row)
