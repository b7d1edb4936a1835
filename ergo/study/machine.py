"""Sections of the study file about the machine: lever, grip, linkage, zones, structure."""

from typing import Annotated, Literal

from pydantic import Field

from ergo.study.fields import Pair, Point, Section, key

AXES = ("sideways", "fore-aft", "upright")
# The rows of lever_materials and metric_threads_coarse; a test holds them against the tables.
METALS = ("S235JR", "S355J2", "C45+N", "42CrMo4+QT", "X5CrNi18-10", "EN AW-6082 T6", "EN-GJL-250", "EN-GJS-400-15",
          "class 4.6", "class 5.8", "class 8.8", "class 10.9", "class 12.9", "A2-70")  # fmt: skip
THREADS = ("M3", "M4", "M5", "M6", "M8", "M10", "M12", "M14", "M16", "M18", "M20", "M22", "M24")


class LeverSection(Section):
    """`[lever]`: the lever, its pivot and its stroke."""

    pivot_mm: Point = key(..., "pivot point: right of the middle, behind the bench edge, over the floor", unit="mm",
                          low=-3000, high=3000, least=5)  # fmt: skip
    axis: Literal["sideways", "fore-aft", "upright"] | Point = key("sideways", "pivot axis, or a vector", choices=AXES)
    length_mm: float = key(..., "pivot to the grip's centre", unit="mm", low=20, high=2000)
    start_deg: float = key(..., "lever angle at the start of the stroke", unit="deg", low=-360, high=360)
    end_deg: float = key(..., "lever angle at the end of the stroke", unit="deg", low=-360, high=360)
    mass_kg: float = key(0.0, "mass of lever and grip", unit="kg", low=0, high=200)
    balance_mm: float | None = key(None, "pivot to the lever's centre of mass (half the length if left out)",
                                   unit="mm", low=-2000, high=2000)  # fmt: skip
    return_spring_nm_per_rad: float = key(0.0, "spring that turns the lever back", unit="N m/rad", low=0, high=1000)


class GripSection(Section):
    """`[grip]`: what the hand holds."""

    kind: Literal["ball", "bar", "crossbar"] = key(
        "ball", "ball knob, bar along the lever, or crossbar along the pivot axis", choices=("ball", "bar", "crossbar")
    )
    diameter_mm: float = key(35.0, "diameter of the grip", unit="mm", low=10, high=120)
    length_mm: float = key(110.0, "length of the grip", unit="mm", low=10, high=600)
    tilt_deg: float = key(0.0, "turn of a bar in the lever's plane, or of a crossbar toward the lever", unit="deg",
                          low=-90, high=90)  # fmt: skip
    offset_mm: float = key(0.0, "grip's centre beside the lever's plane, along the pivot axis", unit="mm",
                           low=-600, high=600)  # fmt: skip
    surface: Literal["bare metal", "rubber"] = key("bare metal", "surface of the grip", choices=("bare metal", "rubber"))
    turns: bool = key(False, "whether the grip is also turned about its own axis to clamp")
    twist_torque_nm: float = key(0.0, "torque needed for that", unit="N m", low=0, high=200)
    twist_at: tuple[float, ...] = key((), "stroke positions 0..1 at which it is turned", low=0, high=1)


class Rubbing(Section):
    """Friction keys that any linkage may carry."""

    pin_radius_mm: float = key(0.0, "radius of pivot and link pins", unit="mm", low=0, high=200, least=0.1)
    pin_friction: float = key(0.0, "friction in the pins", low=0, high=1.5)
    slide_friction: float = key(0.0, "friction of the slide", low=0, high=1.5)
    slide_bearing_mm: float = key(0.0, "length of the slide's guide", unit="mm", low=0, high=2000, least=0.5)
    slide_overhang_mm: float = key(0.0, "driving force beside the guide's middle line", unit="mm", low=0, high=2000,
                                   least=0.1)  # fmt: skip
    tool_mass_kg: float = key(0.0, "mass that moves with the slide", unit="kg", low=0, high=500)


class Direction(Rubbing):
    """Keys of a linkage with a slide line."""

    slide_direction_deg: float = key(180.0, "direction of the slide, as lever angles count", unit="deg",
                                     low=-360, high=360)  # fmt: skip
    arm_offset_deg: float = key(0.0, "angle from lever to arm", unit="deg", low=-360, high=360)


class HandleLinkage(Rubbing):
    """The load acts on the handle along its path."""

    kind: Literal["handle"] = "handle"


class ShaftLinkage(Rubbing):
    """The load is a torque on the lever's shaft."""

    kind: Literal["shaft"] = "shaft"


class RackLinkage(Rubbing):
    """A pinion on the lever's shaft drives a rack."""

    kind: Literal["rack"]
    pinion_radius_mm: float = key(..., "pitch radius of the pinion", unit="mm", low=1, high=500)


class ConnectingLinkage(Direction):
    """An arm and a connecting link drive a slide."""

    kind: Literal["connecting link"]
    arm_mm: float = key(..., "pivot to the link's pin", unit="mm", low=1, high=1000)
    link_mm: float = key(..., "link, pin to pin", unit="mm", low=1, high=2000)
    slide_offset_mm: float = key(0.0, "slide line beside the pivot, across", unit="mm", low=-1000, high=1000)
    branch: Literal["open", "crossed"] = key("open", "slide ahead of the link's pin, or behind it",
                                             choices=("open", "crossed"))  # fmt: skip


class SlottedLinkage(Direction):
    """A slotted arm drives a pin on a straight slide."""

    kind: Literal["slotted arm"]
    slide_offset_mm: float = key(..., "slide line beside the pivot, across", unit="mm", low=-1000, high=1000)


class CurvedLinkage(Rubbing):
    """A curved slot in the lever drives a pin on a straight slide."""

    kind: Literal["curved slot"]
    file: str | None = key(None, "CSV of lever_deg, slide_mm")
    constant_ratio_mm_per_deg: float | None = key(None, "slide travel a degree, where the slot is to be solved",
                                                  unit="mm/deg", low=-50, high=50)  # fmt: skip
    slide_direction_deg: float = key(180.0, "direction of the slide, as lever angles count", unit="deg",
                                     low=-360, high=360)  # fmt: skip
    slide_offset_mm: float = key(0.0, "slide line beside the pivot, across", unit="mm", low=-1000, high=1000)
    rows: tuple[Pair, ...] = Field(default=(), exclude=True)


class FixedPinLinkage(Direction):
    """A pin fixed to both arm and slide, with nothing that takes up the sideways travel."""

    kind: Literal["fixed pin"]
    arm_mm: float = key(..., "pivot to the pin", unit="mm", low=1, high=1000)
    play_mm: float = key(0.0, "play that may take up sideways travel", unit="mm", low=0, high=50)


class TableLinkage(Rubbing):
    """A measured ratio."""

    kind: Literal["table"]
    file: str = key(..., "CSV of lever_deg, slide_mm")
    rows: tuple[Pair, ...] = Field(default=(), exclude=True)


AnyLinkage = Annotated[
    HandleLinkage | ShaftLinkage | RackLinkage | ConnectingLinkage | SlottedLinkage | CurvedLinkage | FixedPinLinkage
    | TableLinkage,
    Field(discriminator="kind"),
]  # fmt: skip


class BoxZone(Section):
    """A box-shaped zone."""

    name: str = key(..., "what it is called")
    role: Literal["hazard", "obstacle"] = key("hazard", "hazard or obstacle", choices=("hazard", "obstacle"))
    shape: Literal["box"]
    centre_mm: Point = key(..., "middle of the box", unit="mm", low=-5000, high=5000, least=5)
    size_mm: Point = key(..., "full sizes of the box", unit="mm", low=0, high=5000, least=0.5)


class CylinderZone(Section):
    """A cylindrical zone."""

    name: str = key(..., "what it is called")
    role: Literal["hazard", "obstacle"] = key("hazard", "hazard or obstacle", choices=("hazard", "obstacle"))
    shape: Literal["cylinder"]
    from_mm: Point = key(..., "middle of one end", unit="mm", low=-5000, high=5000, least=5)
    to_mm: Point = key(..., "middle of the other end", unit="mm", low=-5000, high=5000, least=5)
    radius_mm: float = key(..., "radius", unit="mm", low=0, high=3000, least=0.5)


class BallZone(Section):
    """A ball-shaped zone."""

    name: str = key(..., "what it is called")
    role: Literal["hazard", "obstacle"] = key("hazard", "hazard or obstacle", choices=("hazard", "obstacle"))
    shape: Literal["ball"]
    centre_mm: Point = key(..., "middle of the ball", unit="mm", low=-5000, high=5000, least=5)
    radius_mm: float = key(..., "radius", unit="mm", low=0, high=3000, least=0.5)


AnyZone = Annotated[BoxZone | CylinderZone | BallZone, Field(discriminator="shape")]


class TouchPoint(Section):
    """`[[touch_points]]`: another control that the hand goes to."""

    name: str = key(..., "what it is called")
    at_mm: Point = key(..., "where it is", unit="mm", low=-5000, high=5000, least=5)


class Structure(Section):
    """`[structure]`: dimensions that the strongest operator tests."""

    lever_section: Literal["round", "rectangular", "tube"] = key(
        "round", "section of the lever at its root", choices=("round", "rectangular", "tube")
    )
    lever_diameter_mm: float | None = key(None, "diameter of a round or tube section", unit="mm", low=2, high=200)
    lever_width_mm: float | None = key(None, "width of a rectangular section, along the pivot axis", unit="mm",
                                       low=2, high=300)  # fmt: skip
    lever_depth_mm: float | None = key(None, "depth of a rectangular section, in the lever's plane", unit="mm",
                                       low=2, high=300)  # fmt: skip
    wall_mm: float | None = key(None, "wall of a tube", unit="mm", low=0.5, high=50)
    lever_material: str = key("S235JR", "material of the lever", choices=METALS)
    pin_diameter_mm: float | None = key(None, "diameter of the pivot pin", unit="mm", low=2, high=100)
    pin_shear: Literal["single", "double"] = key("double", "shear planes of the pin", choices=("single", "double"))
    pin_thread: str | None = key(None, "thread in the shear plane, such as M8", choices=THREADS)
    pin_material: str = key("S235JR", "material of the pin", choices=METALS)


class PathSection(Section):
    """`[path]`: a measured handle path in place of lever, linkage and load."""

    file: str = key(..., "CSV of x_mm, y_mm, z_mm, force_n")
    rows: tuple[tuple[float, float, float, float], ...] = Field(default=(), exclude=True)
