"""From the study's words (mm, degrees) to the objects of the trade (SI): lever, grip, linkage, load, zones."""

from typing import Any

import numpy as np

from ergo.datasets import Library
from ergo.load.constant import ConstantLoad
from ergo.load.drilling import Drilling
from ergo.load.lets_go import LetsGo, Load
from ergo.load.press_fit import PressFit
from ergo.load.spring import SpringLoad
from ergo.load.table import TableLoad
from ergo.mechanism.contact import PinAndGuide
from ergo.mechanism.drive import slide_travel_m
from ergo.mechanism.handle_path import HandlePath, MeasuredPath, handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import (
    ConnectingLink,
    CurvedSlot,
    FixedPin,
    HandleLoad,
    Linkage,
    MeasuredRatio,
    Rack,
    ShaftLoad,
    SlottedArm,
    TravelCurve,
)
from ergo.mechanism.zones import Ball, Box, Cylinder, Zone
from ergo.study.model import Study

MM = 1e-3


def lever_of(study: Study) -> Lever:
    """Return the lever in SI."""
    made = study.lever
    if made is None:
        msg = "the study has no lever"
        raise ValueError(msg)
    axis: Any = made.axis
    return Lever(
        pivot_m=_point(made.pivot_mm),
        axis=axis,
        length_m=made.length_mm * MM,
        start_rad=float(np.deg2rad(made.start_deg)),
        end_rad=float(np.deg2rad(made.end_deg)),
        mass_kg=made.mass_kg,
        balance_m=None if made.balance_mm is None else made.balance_mm * MM,
        return_spring_nm_per_rad=made.return_spring_nm_per_rad,
    )


def grip_of(study: Study) -> Grip:
    """Return the grip in SI."""
    return Grip(study.grip.kind, float(np.deg2rad(study.grip.tilt_deg)), study.grip.offset_mm * MM)


def linkage_of(study: Study, lever: Lever, library: Library) -> Linkage | FixedPin:
    """Return the linkage in SI."""
    made: Any = study.linkage
    practice = library.values("mechanism_practice")
    direction, offset = _rad(made, "slide_direction_deg"), _metres(made, "slide_offset_mm")
    turned = _rad(made, "arm_offset_deg")
    if made.kind == "handle":
        return HandleLoad(lever.length_m)
    if made.kind == "shaft":
        return ShaftLoad()
    if made.kind == "rack":
        return Rack(made.pinion_radius_mm * MM, float(np.deg2rad(practice["rack.pressure_angle"])))
    if made.kind == "connecting link":
        return ConnectingLink(made.arm_mm * MM, made.link_mm * MM, direction, offset, turned, made.branch)
    if made.kind == "slotted arm":
        return SlottedArm(offset, direction, turned)
    if made.kind == "curved slot":
        return _curved_slot(made, lever, float(np.deg2rad(practice["curved_slot.pressure_limit"])))
    if made.kind == "table":
        return MeasuredRatio(_curve(made))
    return FixedPin(made.arm_mm * MM, made.play_mm * MM, direction, turned)


def _rad(made: Any, name: str) -> float:
    return float(np.deg2rad(getattr(made, name, 0.0)))


def _metres(made: Any, name: str) -> float:
    return float(getattr(made, name, 0.0)) * MM


def _curve(made: Any) -> TravelCurve:
    rows = made.rows
    return TravelCurve(tuple(np.deg2rad(r[0]) for r in rows), tuple(r[1] * MM for r in rows))


def _curved_slot(made: Any, lever: Lever, pressure_limit_rad: float) -> CurvedSlot:
    direction, offset = _rad(made, "slide_direction_deg"), _metres(made, "slide_offset_mm")
    if made.file:
        return CurvedSlot(_curve(made), direction, offset)
    return CurvedSlot.solved(
        per_rad_m=made.constant_ratio_mm_per_deg * MM * 180.0 / np.pi,
        start_rad=lever.start_rad,
        end_rad=lever.end_rad,
        pressure_limit_rad=pressure_limit_rad,
        slide_direction_rad=direction,
        slide_offset_m=offset,
    )


def load_of(study: Study, library: Library) -> Load:
    """Return the load in SI, without its let-go."""
    made: Any = study.load
    if made.kind == "constant":
        return ConstantLoad(made.torque_nm if study.linkage.kind == "shaft" else made.force_n)
    if made.kind == "spring":
        return SpringLoad(made.preload_n, made.rate_n_per_mm / MM)
    if made.kind == "table":
        return TableLoad(tuple(r[0] * MM for r in made.rows), tuple(r[1] for r in made.rows))
    if made.kind == "drilling":
        return Drilling.from_library(
            library,
            diameter_m=made.diameter_mm * MM,
            feed_m_per_rev=made.feed_mm_per_rev * MM,
            material=made.material,
            point=made.point,
            wear=made.wear,
        )
    return PressFit.from_library(
        library,
        shaft_m=made.shaft_mm * MM,
        hub_m=made.hub_mm * MM,
        length_m=made.length_mm * MM,
        interference_m=made.interference_um * 1e-6,
        material_shaft=made.material_shaft,
        material_hub=made.material_hub,
        friction=made.friction,
    )


def zones_of(study: Study) -> tuple[Zone, ...]:
    """Return the zones in SI."""
    found = []
    for made in study.zones:
        if made.shape == "box":
            shape: Box | Cylinder | Ball = Box(_point(made.centre_mm), _point(made.size_mm))
        elif made.shape == "cylinder":
            shape = Cylinder(_point(made.from_mm), _point(made.to_mm), made.radius_mm * MM)
        else:
            shape = Ball(_point(made.centre_mm), made.radius_mm * MM)
        found.append(Zone(made.name, made.role, shape))
    return tuple(found)


def _point(values_mm: Any) -> tuple[float, float, float]:
    x, y, z = (float(v) * MM for v in values_mm)
    return x, y, z


def friction_of(study: Study) -> PinAndGuide:
    """Return what rubs, in SI; nothing where the linkage gives no friction."""
    made: Any = study.linkage
    return PinAndGuide(
        pin_radius_m=_metres(made, "pin_radius_mm"),
        pin_friction=getattr(made, "pin_friction", 0.0),
        slide_friction=getattr(made, "slide_friction", 0.0),
        slide_bearing_m=_metres(made, "slide_bearing_mm"),
        slide_overhang_m=_metres(made, "slide_overhang_mm"),
    )


def path_of(study: Study) -> HandlePath:
    """Return the handle path at the study's stroke positions, from the lever or from the measured points."""
    stroke, grip = np.linspace(0.0, 1.0, study.study.positions), grip_of(study)
    if study.path is None:
        return handle_path(lever_of(study), grip, stroke)
    return measured_of(study).along(stroke, grip.kind, grip.tilt_rad)


def measured_of(study: Study) -> MeasuredPath:
    """Return the measured path in SI."""
    if study.path is None:
        msg = "the study has no measured path"
        raise ValueError(msg)
    rows = np.array(study.path.rows, dtype=float)
    return MeasuredPath(rows[:, :3] * MM, rows[:, 3])


def letting_go(study: Study, load: Load, lever: Lever, linkage: Linkage) -> Load:
    """Return the load as it is with its let-go: gone beyond that stroke position."""
    at = study.load.lets_go_at
    if at is None:
        return load
    # A nanometre more, so that the position at which it lets go still carries the load whatever the rounding.
    return LetsGo(load, float(slide_travel_m(lever, linkage, lever.angles_rad([at]))[0]) + 1e-9)
