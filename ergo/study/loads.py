"""Sections of the study file about the load, one a kind."""

from typing import Annotated, Literal

from pydantic import Field

from ergo.study.fields import Pair, Section, key

# The rows of drilling_materials_mh31 and elastic_constants; a test holds them against the tables.
DRILLED = ("steel 200 HB", "steel 300 HB", "cast iron 150 HB", "aluminium alloy", "brass", "leaded brass")
PRESSED = ("steel", "stainless steel", "grey cast iron", "aluminium alloy", "brass", "bronze", "copper")
WEAR = ("sharp", "normal", "dull")


class LetGo(Section):
    """What any load may carry."""

    lets_go_at: float | None = key(None, "stroke position 0..1 at which the load suddenly lets go", low=0, high=1)


class ConstantLoadSection(LetGo):
    """A load that stays the same."""

    kind: Literal["constant"]
    force_n: float | None = key(None, "force at the slide or handle", unit="N", low=0, high=1e6)
    torque_nm: float | None = key(None, "torque, for a shaft", unit="N m", low=0, high=1e5)


class SpringLoadSection(LetGo):
    """A spring."""

    kind: Literal["spring"]
    preload_n: float = key(0.0, "force at the start", unit="N", low=0, high=1e6)
    rate_n_per_mm: float = key(..., "spring rate", unit="N/mm", low=0, high=1e5)


class TableLoadSection(LetGo):
    """A measured load."""

    kind: Literal["table"]
    file: str = key(..., "CSV of slide_mm, force_n")
    rows: tuple[Pair, ...] = Field(default=(), exclude=True)


class DrillingLoadSection(LetGo):
    """Thrust of a twist drill."""

    kind: Literal["drilling"]
    diameter_mm: float = key(..., "drill diameter", unit="mm", low=1.6, high=16)
    feed_mm_per_rev: float = key(..., "feed a turn", unit="mm", low=0.01, high=0.5)
    material: str = key("steel 200 HB", "material drilled", choices=DRILLED)
    point: Literal["standard", "split"] = key("standard", "drill point", choices=("standard", "split"))
    wear: Literal["sharp", "normal", "dull"] | float = key("sharp", "state of the drill, or a wear factor", low=1, high=5,
                                                           choices=WEAR)  # fmt: skip


class PressFitLoadSection(LetGo):
    """Pressing a shaft into a hub."""

    kind: Literal["press fit"]
    shaft_mm: float = key(..., "diameter of the fit", unit="mm", low=0.5, high=500)
    hub_mm: float = key(..., "outer diameter of the hub", unit="mm", low=1, high=1000)
    length_mm: float = key(..., "length of the fit", unit="mm", low=0.5, high=500)
    interference_um: float = key(..., "interference on diameter", unit="um", low=0, high=500)
    material_shaft: str = key("steel", "material of the shaft", choices=PRESSED)
    material_hub: str = key("steel", "material of the hub", choices=PRESSED)
    friction: float = key(0.12, "friction while pressing in", low=0.01, high=1)


AnyLoad = Annotated[
    ConstantLoadSection | SpringLoadSection | TableLoadSection | DrillingLoadSection | PressFitLoadSection,
    Field(discriminator="kind"),
]
