"""A plain NumPy twin of one judged posture, written from the model with vectors; the oracle of the kernels."""

import numpy as np

from ergo.arm import kernels as k

NONE = 1e9
OUT = np.array([1.0, 0.0, 0.0])
REST = np.array([k.REST_X, k.REST_Y, k.REST_Z])


def unit(v):
    return v / np.linalg.norm(v)


def largest(slope, offset, plus, minus):
    """Largest F >= 0 with -minus <= slope F + offset <= plus."""
    if offset > plus or offset < -minus:
        return 0.0
    if abs(slope) <= 1e-9:
        return NONE
    return (plus - offset) / slope if slope > 0 else (minus + offset) / -slope


def front_of_body(op, scene, feet_y, hip, trunk_up, shoulder):
    """How far the body passes the bench edge at the bench's height."""
    z = scene[k.SURFACE_Z]
    if z >= shoulder[1]:
        return -1.0
    if z >= hip[1]:
        return hip[0] + (z - hip[1]) * trunk_up[0] / trunk_up[1] + op[k.BODY_FRONT]
    if scene[k.SEATED]:
        return -1.0
    share = (z - op[k.ANKLE_Z]) / (hip[1] - op[k.ANKLE_Z])
    return feet_y + max(share, 0.0) * (hip[0] - feet_y) + op[k.BODY_FRONT]


def stance_bounds(op, scene, feet_y, com_y, com_x, touching, hand, side, d):
    """Largest and smallest force by brute force over the balance conditions, linear in F."""
    weight, mu, rise = op[k.MASS] * k.GRAVITY, scene[k.FRICTION], hand[2] - scene[k.SEAT_Z]
    rows = []  # (slope, limit): slope F <= limit
    ahead, behind, half = op[k.FRONT_Y], op[k.BACK_Y], scene[k.SIDE_BASE]
    moment_y = (hand[1] - feet_y) * d[2] - rise * d[1]
    forward = [moment_y - ahead * d[2], weight * (ahead - com_y)]
    backward = [-(moment_y - behind * d[2]), weight * (com_y - behind)]
    slip = [np.hypot(d[0], d[1]) - mu * d[2], mu * weight]
    if scene[k.BRACE_BENCH] and touching and d[1] < 0:
        forward = [forward[0] + scene[k.SURFACE_Z] * (d[1] - mu * d[2]), forward[1] + scene[k.SURFACE_Z] * mu * weight]
        slip = [abs(d[0]) - mu * d[2], mu * weight]
    elif scene[k.BRACE_BACK] and d[1] > 0:
        backward[0] = 0.0
        slip = [abs(d[0]) - mu * d[2], mu * weight]
    moment_x = side * d[2] - rise * d[0]
    rows = [forward, backward, [moment_x - half * d[2], weight * (half - com_x)], [-moment_x - half * d[2], weight * (half + com_x)],
            [-d[2], weight]]  # fmt: skip

    def cap(row):
        if row[0] > 1e-9:
            return max(row[1] / row[0], 0.0)
        return NONE if row[1] >= 0.0 or row[0] < -1e-9 else 0.0

    low = max([row[1] / row[0] for row in (forward, backward) if row[0] < -1e-9 and row[1] < 0.0], default=0.0)
    tip, slide = min(cap(row) for row in rows), cap(slip)
    return (slide, k.LIMIT_SLIPPING, low) if slide < tip else (tip, k.LIMIT_TIPPING, low)


def body_place(op, scene, feet_y, com_share, bend):
    """Hip (y, z), unit trunk-up (y, z), com past the feet; None where the lean is too large."""
    if scene[k.SEATED]:
        up = np.array([np.sin(bend), np.cos(bend)])
        return np.array([feet_y, op[k.ANKLE_Z]]), up, op[k.COM_LEG] + op[k.COM_TRUNK] * up[0]
    slack = scene[k.COM_SLACK]
    com = (op[k.BACK_Y] - slack) + com_share * (op[k.FRONT_Y] - op[k.BACK_Y] + 2 * slack)
    # A sin(lean) + B sin(lean + bend) = com, as one sine
    a, b = op[k.COM_LEG] + op[k.COM_TRUNK] * np.cos(bend), op[k.COM_TRUNK] * np.sin(bend)
    lean = np.arcsin(np.clip(com / np.hypot(a, b), -1, 1)) - np.arctan2(b, a)
    if abs(np.sin(lean)) > scene[k.LEAN_MAX]:
        return None
    hip = np.array([feet_y + op[k.LEG] * np.sin(lean), op[k.ANKLE_Z] + op[k.LEG] * np.cos(lean)])
    return hip, np.array([np.sin(lean + bend), np.cos(lean + bend)]), com


def posture(op, shape, scene, limits, x, feet_y, target, com_share, bend, swivel):
    """Force (below 0: does not get there) and limit of one posture."""
    grip, d, bar = target[:3], target[3:6], target[6:9]
    placed = body_place(op, scene, feet_y, com_share, bend)
    if placed is None:
        return -4.0, k.LIMIT_TIPPING
    hip, up, com = placed
    shoulder = hip + op[k.TRUNK] * up
    passes = front_of_body(op, scene, feet_y, hip, up, shoulder)
    if passes > 1e-9:
        return -4.0, k.LIMIT_BENCH
    fwd = np.array([0.0, up[1], -up[0]])
    longest = op[k.UPPER] + op[k.FOREARM]
    at = np.array([x + op[k.HALF_BREADTH], *shoulder])
    gap = np.linalg.norm(grip - at)
    toward = max(unit(grip - at) @ fwd, 0.2)
    at = at + fwd * np.clip((gap - scene[k.REACH_EASE] * longest) / toward, 0.0, op[k.PROTRACTION])
    reach = grip - at
    far = np.linalg.norm(reach)
    if far > 0.999 * longest:
        return -1.0 - (far - 0.999 * longest), k.LIMIT_REACH
    near = np.sqrt(op[k.UPPER] ** 2 + op[k.FOREARM] ** 2 - 2 * op[k.UPPER] * op[k.FOREARM] * limits[k.COS_ELBOW_MIN])
    if far < near:
        return -1.0 - (near - far), k.LIMIT_TOO_CLOSE
    line_y = hip[0] + (grip[2] - hip[1]) * up[0] / max(up[1], 0.2)
    inside_height = hip[1] <= grip[2] <= shoulder[1]
    if abs(grip[0] - x) <= op[k.CHEST_HALF] and inside_height and grip[1] < line_y + op[k.BODY_FRONT] + op[k.HAND_DEPTH]:
        return -0.6, k.LIMIT_TRUNK_IN_WAY
    arm_share = (op[k.UPPER_MASS] + op[k.FOREARM_MASS] + op[k.HAND_MASS]) / op[k.MASS]
    force, code, low = stance_bounds(op, scene, feet_y, com + 0.5 * arm_share * reach[1], 0.5 * arm_share * reach[0],
                                     passes > -0.03, grip, grip[0] - x, d)  # fmt: skip
    along = unit(reach) @ d
    girdle = op[k.GIRDLE_PUSH] / along if along > 1e-6 else (op[k.GIRDLE_PULL] / -along if along < -1e-6 else NONE)
    found = [(force, code), (girdle, k.LIMIT_GIRDLE)]
    arm = arm_limits(op, shape, scene, limits, at, reach, far, d, bar, fwd, up, swivel, x, hip, shoulder)
    if isinstance(arm, tuple):
        return arm
    value, code = min([*found, *arm], key=lambda row: row[0])
    return (value if value >= low else min(value, 0.0)), code


def arm_limits(op, shape, scene, limits, at, reach, far, d, bar, fwd, up, swivel, x, hip, shoulder):
    """The arm's limits as (force, code) rows, or one failing answer."""
    line = reach / far
    along = (op[k.UPPER] ** 2 - op[k.FOREARM] ** 2 + far**2) / (2 * far)
    square = unit(REST - (REST @ line) * line)
    out = np.cos(swivel) * square + np.sin(swivel) * np.cross(square, line)
    u = (along * line + np.sqrt(op[k.UPPER] ** 2 - along**2) * out) / op[k.UPPER]
    v = (reach - op[k.UPPER] * u) / op[k.FOREARM]
    hinge = np.cross(out, line)
    down = -np.array([0.0, *up])
    forward, outward, hang = u @ fwd, u @ OUT, u @ down
    if -forward > limits[k.TAN_EXTENSION] * max(hang, 0) + limits[k.TAN_BEHIND] * max(outward, 0):
        return -0.5, k.LIMIT_RANGE
    if -outward > limits[k.TAN_ADDUCTION] * (max(forward, 0) + max(hang, 0)):
        return -0.5, k.LIMIT_RANGE
    ahead = fwd - forward / (1 + hang) * (u + down)  # trunk-forward carried along from hanging to u
    square_v = v - (v @ u) * u
    if np.linalg.norm(square_v) >= 0.05:
        medial = square_v @ np.cross(ahead, u)
        bound = limits[k.COS_MEDIAL] if medial >= 0 else limits[k.COS_LATERAL]
        if square_v @ ahead < bound * np.linalg.norm(square_v):
            return -0.5, k.LIMIT_RANGE
    thumb = np.cross(hinge, v)
    if not scene[k.BALL]:
        bar = bar if bar @ thumb >= 0 else -bar
        lean = bar @ v
        across = unit(bar - lean * v)
        bound = limits[k.COS_SUPINATION] if across @ hinge >= 0 else limits[k.COS_PRONATION]
        if across @ thumb < bound or not limits[k.SIN_RADIAL] <= lean <= limits[k.SIN_ULNAR]:
            return -0.5, k.LIMIT_RANGE
        thumb = across
    elbow = at + op[k.UPPER] * u
    trunk_y = hip[0] + (elbow[2] - hip[1]) * up[0] / max(up[1], 0.2)
    if elbow[0] - x < 0.6 * op[k.HALF_BREADTH] and hip[1] <= elbow[2] <= at[2] and abs(elbow[1] - trunk_y) < op[k.BODY_FRONT]:
        return -0.6, k.LIMIT_TRUNK_IN_WAY
    return [grip_row(op, scene, d, v, bar), *wrist_rows(op, d, v, thumb), *joint_rows(op, shape, d, u, v, hinge, reach, fwd, down)]


def grip_row(op, scene, d, v, bar):
    opens = np.clip(1.0 - d @ v, 0.0, 1.0)
    slides = 0.0 if scene[k.BALL] else d @ bar
    load = np.hypot(opens * np.sqrt(max(1 - slides**2, 0)) / op[k.BREAKAWAY], slides / op[k.SLIDE])
    return (1 / load if load > 1e-9 else NONE), k.LIMIT_GRIP


def wrist_rows(op, d, v, thumb):
    moment = op[k.WRIST] * np.cross(v, d)
    bends = largest(moment @ thumb, 0.0, op[k.WRIST_FLEXION], op[k.WRIST_EXTENSION])
    tilts = largest(moment @ np.cross(v, thumb), 0.0, op[k.RADIAL], op[k.ULNAR])
    return [(min(bends, tilts), k.LIMIT_WRIST)]


def joint_rows(op, shape, d, u, v, hinge, reach, fwd, down):
    up_axis = np.array([0.0, 0.0, k.GRAVITY])
    bone = op[k.FOREARM_COM] * (op[k.FOREARM] - op[k.WRIST])
    parts = [(op[k.UPPER_MASS], op[k.UPPER_COM] * op[k.UPPER] * u), (op[k.FOREARM_MASS], op[k.UPPER] * u + bone * v),
             (op[k.HAND_MASS], op[k.UPPER] * u + op[k.FOREARM] * v)]  # fmt: skip
    at_shoulder = sum(np.cross(r, m * up_axis) for m, r in parts)
    at_elbow = sum(np.cross(r - op[k.UPPER] * u, m * up_axis) for m, r in parts[1:])
    raised, bent = np.degrees(np.arccos(np.clip(u @ down, -1, 1))), 180 - np.degrees(np.arccos(np.clip(u @ v, -1, 1)))

    def factor(row, elevation=raised):
        c = shape[row]
        return max(c[0] + c[1] * bent + c[2] * bent**2 + c[3] * elevation + c[4] * max(elevation - 45, 0), 0)

    elbow = largest(np.cross(op[k.FOREARM] * v, d) @ hinge, at_elbow @ hinge, op[k.ELBOW_FLEXION] * factor(2),
                    op[k.ELBOW_EXTENSION] * factor(3))  # fmt: skip
    forward, outward, hang = u @ fwd, u @ OUT, u @ down
    plane = np.array([forward + (0.02 if forward >= 0 else -0.02), outward])
    plane = plane / np.linalg.norm(plane)
    raising = np.cross(down, plane[0] * fwd + plane[1] * OUT)
    raising = unit(raising - (raising @ u) * u)
    across = np.cross(u, raising)
    ahead = raised if forward >= 0 else 0.0
    flex, extend = op[k.FLEXION] * factor(0, ahead), op[k.EXTENSION] * factor(1, ahead)
    fore, side = plane**2
    pair = (flex, extend) if plane[0] >= 0 else (extend, flex)
    beside = (op[k.ABDUCTION], op[k.ADDUCTION]) if plane[1] >= 0 else (op[k.ADDUCTION], op[k.ABDUCTION])
    moment = np.cross(reach, d)
    lift = largest(moment @ raising, at_shoulder @ raising, fore * pair[0] + side * beside[0], fore * pair[1] + side * beside[1])
    turned = 1 - hang**2
    out_fore, in_fore = (extend, flex) if plane[1] >= 0 else (flex, extend)
    out_side, in_side = (op[k.ABDUCTION], op[k.ADDUCTION]) if plane[0] >= 0 else (op[k.ADDUCTION], op[k.ABDUCTION])
    outward_nm = turned * op[k.HORIZONTAL_EXTENSION] + (1 - turned) * (side * out_fore + fore * out_side)
    inward_nm = turned * op[k.HORIZONTAL_FLEXION] + (1 - turned) * (side * in_fore + fore * in_side)
    sweep = largest(moment @ across, at_shoulder @ across, outward_nm, inward_nm)
    roll = largest(moment @ u, at_shoulder @ u, op[k.LATERAL], op[k.MEDIAL])
    return [(elbow, k.LIMIT_ELBOW), (lift, k.LIMIT_SHOULDER_RAISE), (sweep, k.LIMIT_SHOULDER_ACROSS), (roll, k.LIMIT_HUMERUS)]
