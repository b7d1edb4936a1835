"""Results written by hand, so that pictures and report can be tested against numbers that are known beforehand.

The lever turns about a sideways axis, so the grip lies on a circle that is worked out here from sine and cosine.
"""

import math
from dataclasses import replace

import numpy as np

from ergo.evaluation.results import PeopleTable, Person, Results, StrokeTable
from ergo.rating.ratings import Rating

POSITIONS = 21
PIVOT = (120.0, 250.0, 1110.0)
LENGTH = 300.0
START, END = -10.0, 60.0
SOURCES = (
    {"table": "joint_strength", "title": "Isometric strength at each joint", "row": "elbow_flexion", "value": "77",
     "unit": "N m", "source": "askew_1987", "locator": "table 1", "status": "memory"},
    {"table": "joint_ranges", "title": "Ranges of motion", "row": "elbow", "value": "142", "unit": "deg",
     "source": "boone_azen_1979", "locator": "", "status": "seen"},
    {"table": "mechanism_practice", "title": "Practice of the trade", "row": "rack.pressure_angle", "value": "20",
     "unit": "deg", "source": "iso_53", "locator": "", "status": "seen"},
)  # fmt: skip


def study(**changes):
    """The study of the made results, as the plain dict that results carry."""
    made = {
        "study": {"title": "Made lever", "revision": "C", "prepared_by": "Ines", "reviewed_by": "", "notes": "",
                  "positions": POSITIONS},
        "bench": {"surface_height_mm": 900.0, "edge_thickness_mm": 45.0, "toe_space_mm": 110.0, "floor_friction": 0.5},
        "operators": {"population": "us_adults_2015", "women_share": 0.5, "count": 8, "seed": 3, "hand": "right",
                      "age_years": [18.0, 65.0], "shoes_mm": 25.0, "glove": "none", "posture": "standing",
                      "seat_height_mm": 450.0, "seat_y_mm": -350.0, "stance_rule": "steady", "brace": "none",
                      "stand_x_mm": [-300.0, 300.0], "stand_off_mm": [-100.0, 400.0], "trunk_bend_max_deg": 40.0},
        "lever": {"pivot_mm": list(PIVOT), "axis": "sideways", "length_mm": LENGTH, "start_deg": START, "end_deg": END,
                  "mass_kg": 1.2, "return_spring_nm_per_rad": 0.0},
        "grip": {"kind": "ball", "diameter_mm": 40.0, "length_mm": 110.0, "tilt_deg": 0.0, "offset_mm": 0.0,
                 "surface": "bare metal", "turns": False, "twist_torque_nm": 0.0, "twist_at": []},
        "linkage": {"kind": "connecting link", "arm_mm": 45.0, "arm_offset_deg": 75.0, "link_mm": 110.0,
                    "slide_direction_deg": 180.0, "slide_offset_mm": 0.0, "branch": "open", "pin_radius_mm": 6.0,
                    "pin_friction": 0.12, "slide_friction": 0.12, "slide_bearing_mm": 80.0, "slide_overhang_mm": 20.0,
                    "tool_mass_kg": 1.5},
        "load": {"kind": "constant", "force_n": 420.0, "lets_go_at": 0.8},
        "zones": [
            {"name": "punch", "role": "hazard", "shape": "box", "centre_mm": [120.0, 250.0, 950.0],
             "size_mm": [70.0, 60.0, 80.0]},
            {"name": "guide post", "role": "obstacle", "shape": "cylinder", "from_mm": [120.0, 420.0, 900.0],
             "to_mm": [120.0, 420.0, 1250.0], "radius_mm": 30.0},
        ],
        "touch_points": [{"name": "spindle switch", "at_mm": [-80.0, 40.0, 1000.0]}],
        "duty": {"strokes_per_minute": 4.0, "stroke_s": 1.5, "hold_s": 0.0, "hours_per_shift": 3.0},
        "targets": {"served_share": 0.95, "pull_share_min": 0.8, "pull_where_force_above_n": 50.0, "gap_min_mm": 25.0,
                    "margin_min": 1.0, "free": {}},
        "variants": [],
    }  # fmt: skip
    for path, value in changes.items():
        section, name = path.split("__")
        made[section][name] = value
    return made


def grip_mm():
    """The grip's path: pivot + length (toward the operator: sine, up: cosine)."""
    rows = []
    for n in range(POSITIONS):
        a = math.radians(START + (END - START) * n / (POSITIONS - 1))
        rows.append((PIVOT[0], PIVOT[1] - LENGTH * math.sin(a), PIVOT[2] + LENGTH * math.cos(a)))
    return np.array(rows)


def stroke_table():
    """A stroke whose needed force rises to 140 N and lets go at 80 %, pulled all the way but for its start."""
    at = np.linspace(0.0, 1.0, POSITIONS)
    angle = np.radians(START + (END - START) * at)
    demand = np.where(at <= 0.8, 40.0 + 125.0 * at, 4.0)
    weak = 95.0 + 45.0 * np.sin(np.pi * at)
    allowed = {"women_p05": weak, "women_p50": 1.6 * weak, "women_p95": 2.4 * weak, "men_p05": 1.5 * weak,
               "men_p50": 2.3 * weak, "men_p95": 3.2 * weak, "men_p99": 3.8 * weak}  # fmt: skip
    overrun = np.full((POSITIONS, 3), np.nan)
    overrun[16] = (38.0, 61.0, 94.0)
    balance = np.full((POSITIONS, 3), np.nan)
    balance[16] = (0.91, 0.08, 0.01)
    table = np.where(at < 0.7, 1.2 * weak, np.nan)
    lost = tuple({"elbow": 0.02 + 0.2 * float(s > 0.5), "reach": 0.03 * float(s > 0.8)} for s in at)
    return StrokeTable(
        stroke=at,
        lever_deg=START + (END - START) * at,
        handle_mm=grip_mm(),
        work_dir=np.stack([np.zeros(POSITIONS), -np.cos(angle), -np.sin(angle)], axis=1),
        demand_n=demand,
        slide_mm=30.0 * at,
        ratio=np.full(POSITIONS, 0.12),
        side_force_n=20.0 * at,
        load_n=np.where(at <= 0.8, 420.0, 0.0),
        friction_n=np.full(POSITIONS, 5.0),
        weight_n=np.full(POSITIONS, 3.0),
        pull=np.cos(angle),
        up=-np.sin(angle),
        inward=np.zeros(POSITIONS),
        capability_n={k: 1.4 * v for k, v in allowed.items()},
        allowed_n=allowed,
        served_share=1.0 - np.array([sum(row.values()) for row in lost]),
        reach_share=np.where(at > 0.8, 0.97, 1.0),
        governing=tuple({"elbow": 0.7, "tipping": 0.3} for _ in at),
        lost=lost,
        table_n=table,
        en_1005_3_n=np.full(POSITIONS, 110.0),
        overrun_mm=overrun,
        overrun_toward=tuple("operator" if n == 16 else "" for n in range(POSITIONS)),
        balance=balance,
        gap_mm=120.0 - 60.0 * at,
        feel_n=np.where(at <= 0.8, 14.0, np.nan),
        not_covered={"table_n": "elbow angle beyond the table beyond 70 % of the stroke"},
    )


def person(name, women, stature, served=True):
    """An operator who stands at y = -250 mm with the hand on the grip."""
    grip = grip_mm()
    ones = np.ones(POSITIONS)

    def fixed(x, y, z):
        return np.stack([x * ones, y * ones, z * ones], axis=1)

    shoulder = fixed(120.0, -180.0, 0.81 * stature)
    wrist = grip + np.array([0.0, -60.0, -30.0])
    elbow = (shoulder + wrist) / 2.0 + np.array([40.0, 0.0, -120.0])
    points = {"foot": fixed(0.0, -250.0, 95.0), "knee": fixed(0.0, -240.0, 0.29 * stature),
              "hip": fixed(0.0, -230.0, 0.53 * stature), "neck": fixed(0.0, -180.0, 0.81 * stature),
              "head": fixed(0.0, -160.0, 0.93 * stature), "shoulder": shoulder, "elbow": elbow, "wrist": wrist,
              "grip": grip}  # fmt: skip
    return Person(name, women, stature, 70.0, served, points, 12.0 * ones, 110.0 * ones, 150.0 * ones)


def crowd():
    """Eight operators, two of them lost."""
    women = np.array([True] * 4 + [False] * 4)
    return PeopleTable(
        women=women,
        age_years=np.array([20.0, 30, 40, 50, 20, 30, 40, 60]),
        stature_mm=np.array([1520.0, 1590, 1630, 1720, 1660, 1740, 1790, 1900]),
        mass_kg=np.array([52.0, 60, 66, 80, 65, 75, 82, 99]),
        strength_share=np.array([0.7, 0.9, 1.0, 1.2, 0.9, 1.0, 1.1, 1.4]),
        stand_x_mm=np.zeros(8),
        stand_y_mm=np.full(8, -250.0),
        margin=np.array([0.7, 0.95, 1.2, 1.5, 1.6, 2.0, 2.2, 2.9]),
        worst_stroke=np.array([0.8, 0.75, 0.8, 0.8, 0.8, 0.8, 0.8, 0.8]),
        limit=("elbow", "reach", "elbow", "elbow", "elbow", "elbow", "tipping", "elbow"),
        served=np.array([False, False, True, True, True, True, True, True]),
    )


def ratings(*, short):
    """Seven ratings; force and served fall short when `short`."""
    nan = float("nan")
    force = 71.3 if short else 97.2
    served = 75.0 if short else 96.4
    rows = {
        "direction": (93.1, nan, nan, 80.0, 0.0, "path", "The hand pulls for 93.1 % of the loaded work."),
        "reach": (97.0, 91.2, 99.1, 95.0, 1.0, "reach", "97.0 % of operators reach the whole stroke."),
        "force": (force, 66.0, 99.0 if not short else 77.1, 95.0, 0.8, "elbow", f"{force:.1f} % can give the force."),
        "posture": (88.4, 80.0, 95.0, nan, 0.8, "shoulder", "88.4 % keep a posture inside the comfortable ranges."),
        "clearance": (100.0, nan, nan, 100.0, 1.0, "punch", "The smallest gap is 60 mm, to the punch."),
        "let_go": (91.0, 85.0, 95.0, 90.0, 0.8, "balance", "91.0 % keep their balance when the load lets go."),
        "served": (served, 62.0 if short else 91.0, 85.0 if short else 98.0, 95.0, 0.8, "elbow",
                   f"{served:.1f} % meet every target at every position."),
    }  # fmt: skip
    return {
        name: Rating(name=name, value=v, low=lo, high=hi, target=t, met=not np.isfinite(t) or v >= t, worst_stroke=w,
                     cause=c, reason=r)
        for name, (v, lo, hi, t, w, c, r) in rows.items()
    }  # fmt: skip


def made(*, short=True, **changes):
    """Results that fall short (or meet every target), with any study value changed by `section__name=value`."""
    rated = ratings(short=short)
    verdict = "falls short" if short else "meets"
    head = ("The lever falls short: 71.3 % can give the force, 95 % are asked for." if short
            else "The lever meets every target.")  # fmt: skip
    return Results(
        version="0.1.0",
        study=study(**changes),
        variant="",
        people={"population": "us_adults_2015", "count": 8, "women_share": 0.5},
        ratings=rated,
        stroke=stroke_table(),
        persons=(person("small woman (P5)", True, 1520.0, served=not short), person("middle (P50)", True, 1630.0),
                 person("large man (P95)", False, 1890.0)),
        crowd=crowd(),
        verdict=verdict,
        reasons=(head, "The largest needed force is 140 N at 80 % of the stroke."),
        cautions=("A screening calculation from population data; not a risk assessment and not a substitute for "
                  "guarding, for trials with real operators, or for local codes and licensed practice.",),
        sources=SOURCES,
        details={
            "reach_lines_mm": {
                "small woman (P5)": [[120.0, -180.0 + 560.0 * math.cos(a), 1230.0 + 560.0 * math.sin(a)]
                             for a in np.linspace(-1.2, 1.4, 30)],
                "large man (P95)": [[120.0, -180.0 + 760.0 * math.cos(a), 1530.0 + 760.0 * math.sin(a)]
                            for a in np.linspace(-1.4, 1.0, 30)],
            },
            "let_go": {"sentences": ["The handle runs on 61 mm (38 to 94 mm) toward the operator."]},
        },
        manifest={"pullward": "0.1.0", "seed": 3, "study": "0" * 64, "libraries": {"numpy": "2.4.6"},
                  "tables": {"joint_strength": "00"}},
    )  # fmt: skip


def renamed(results, title):
    """The same results under another title."""
    return replace(results, study={**results.study, "study": {**results.study["study"], "title": title}})
