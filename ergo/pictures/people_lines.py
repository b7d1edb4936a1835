"""Operators as plain jointed outlines in hairline, in the posture the model chose."""

import numpy as np
from numpy.typing import NDArray

from ergo.evaluation.results import Person, Results
from ergo.pictures import theme
from ergo.pictures.projection import Frame
from ergo.pictures.sheet import Sheet, quantity

Array = NDArray[np.float64]

# Half widths of the outlines as a share of stature: drawing only, nothing is computed from them.
LIMBS = (
    ("foot", "knee", 0.019, 0.028),
    ("knee", "hip", 0.028, 0.040),
    ("hip", "neck", 0.048, 0.058),
    ("shoulder", "elbow", 0.026, 0.020),
    ("elbow", "wrist", 0.020, 0.013),
)
HEAD, FIST = 0.050, 0.022
FOOT_LENGTH, FOOT_HEIGHT, FOOT_BEHIND = 0.152, 0.035, 0.040
NEAR_FLOOR_MM = 80.0
NEEDED = ("foot", "knee", "hip", "neck", "head", "shoulder", "elbow", "wrist", "grip")


def draw_person(sheet: Sheet, frame: Frame, person: Person, position: int, *, inked: bool = False) -> Array | None:
    """Draw one operator at a stroke position; return where the head is on the sheet, None when not drawable."""
    points = {name: np.asarray(rows, dtype=float)[position] for name, rows in person.points_mm.items()}
    if not all(name in points and np.isfinite(points[name]).all() for name in NEEDED):
        return None
    dash = theme.WOMEN_DASH if person.women else theme.MEN_DASH
    ink = sheet.ink.ink if inked else sheet.ink.grey
    weight = theme.PATH if inked else theme.THIN
    per_stature = person.stature_mm * frame.units_per_mm
    sheet.open("person", name=person.name)
    for start, end, wide, narrow in LIMBS:
        outline = _limb(frame.at(points[start]), frame.at(points[end]), wide * per_stature, narrow * per_stature)
        sheet.line(outline, stroke=ink, weight=weight, dash=dash, closed=True)
    sheet.line(_foot(frame, points["foot"], person.stature_mm), stroke=ink, weight=weight, dash=dash, closed=True)
    head = frame.at(points["head"])
    sheet.circle(head, HEAD * per_stature, stroke=ink, weight=weight, dash=dash)
    sheet.circle(frame.at(points["grip"]), FIST * per_stature, stroke=ink, weight=weight, dash=dash)
    for joint in ("hip", "shoulder", "elbow", "wrist"):
        sheet.circle(frame.at(points[joint]), 1.5, stroke=ink, fill=ink)
    sheet.close()
    return head


def _limb(start: Array, end: Array, wide: float, narrow: float) -> Array:
    """Outline of a limb with round ends."""
    along = end - start
    length = float(np.linalg.norm(along))
    along = along / length if length > 1e-6 else np.array([1.0, 0.0])
    turn = np.arctan2(along[1], along[0])
    near = turn + np.linspace(np.pi / 2.0, 3.0 * np.pi / 2.0, 9)
    far = turn + np.linspace(-np.pi / 2.0, np.pi / 2.0, 9)
    round_near = start + wide * np.stack([np.cos(near), np.sin(near)], axis=1)
    return np.concatenate([round_near, end + narrow * np.stack([np.cos(far), np.sin(far)], axis=1)])


def _foot(frame: Frame, ankle: Array, stature: float) -> Array:
    """Outline of the shoe, seen from the side; the sole lies on the floor below the ankle."""
    x, y, z = ankle
    low, high = z - FOOT_HEIGHT * stature, z
    heel, toe = y - FOOT_BEHIND * stature, y + (FOOT_LENGTH - FOOT_BEHIND) * stature
    # A sole near the floor stands on it: the drawing's foot is only as high as the ankle.
    low = 0.0 if low < NEAR_FLOOR_MM else low
    corners = [
        [x, heel, low],
        [x, toe, low],
        [x, toe, low + 0.4 * (high - low)],
        [x, y + 0.03 * stature, high],
        [x, heel, high],
    ]
    return frame.at(np.array(corners))


def people_rows(results: Results, position: int) -> list[tuple[str, ...]]:
    """Return the text twin of the operators drawn."""
    return [
        (
            person.name,
            quantity(person.stature_mm, "mm"),
            quantity(person.mass_kg, "kg"),
            "served" if person.served else "left out",
            quantity(float(np.asarray(person.trunk_deg)[position]), "°"),
            quantity(float(np.asarray(person.elbow_deg)[position]), "°"),
            quantity(float(np.asarray(person.capability_n)[position]), "N"),
        )
        for person in results.persons[:3]
    ]
