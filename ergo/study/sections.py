"""Sections of the study file about the bench, its people and their work."""

from typing import Any, Literal

from pydantic import Field, model_validator

from ergo.study.fields import Pair, Section, key

POPULATIONS = (
    "us_army_2012", "us_adults_2015", "germany_2005", "great_britain", "japan", "china_1988", "hong_kong",
)  # fmt: skip
SEATED_BEND_DEG = 20.0


class Head(Section):
    """`[study]`: what the study is called and who answers for it."""

    title: str = key("Untitled lever", "what the machine and its lever are called")
    revision: str = key("", "revision of the machine or drawing")
    prepared_by: str = key("", "who prepared the study")
    reviewed_by: str = key("", "who reviewed it")
    notes: str = key("", "anything a reader must know")
    positions: int = key(41, "number of stroke positions", low=3, high=401)


class BenchSection(Section):
    """`[bench]`: the bench that the operator stands or sits at."""

    surface_height_mm: float = key(900.0, "height of the bench surface over the floor", unit="mm", low=0, high=1600, least=10)
    edge_thickness_mm: float = key(40.0, "thickness of the bench edge", unit="mm", low=0, high=600, least=0.5)
    toe_space_mm: float = key(100.0, "free depth under the bench for the toes", unit="mm", low=0, high=1000, least=2)
    floor_friction: float = key(0.5, "friction between shoe and floor", low=0.02, high=1.5)


class OperatorsSection(Section):
    """`[operators]`: who works the lever, and how they stand or sit."""

    population: str = key("us_adults_2015", "shipped population, or a CSV file of your own", choices=POPULATIONS)
    population_checksum: str = Field(default="", exclude=True)
    women_share: float = key(0.5, "share of women", low=0, high=1)
    count: int = key(1000, "operators drawn", low=50, high=200_000)
    seed: int = key(1, "seed of the draw", low=0, high=2**31 - 1)
    hand: Literal["right", "left"] = key("right", "hand that works the lever", choices=("right", "left"))
    age_years: Pair = key((18.0, 65.0), "youngest and oldest", unit="years", low=16, high=80)
    shoes_mm: float = key(25.0, "height that shoes add", unit="mm", low=0, high=100, least=0.5)
    glove: Literal["none", "thin", "heavy"] = key("none", "glove worn", choices=("none", "thin", "heavy"))
    posture: Literal["standing", "seated"] = key("standing", "standing or seated", choices=("standing", "seated"))
    seat_height_mm: float = key(450.0, "height of the seat over the floor", unit="mm", low=200, high=900)
    seat_y_mm: float = key(-350.0, "hip joints over the seat, from the bench edge (negative: in front of it)",
                           unit="mm", low=-1200, high=200)  # fmt: skip
    stance_rule: Literal["steady", "leaning"] = key(
        "steady", "steady: would stand without the handle; leaning: body weight may hang on it",
        choices=("steady", "leaning"),
    )  # fmt: skip
    brace: Literal["none", "bench edge", "seat back"] = key(
        "none", "what the body is braced against", choices=("none", "bench edge", "seat back")
    )
    stand_x_mm: Pair = key((-300.0, 300.0), "where the body's midline may be, left to right", unit="mm",
                           low=-2000, high=2000, least=1)  # fmt: skip
    stand_off_mm: Pair = key((-100.0, 400.0), "bench edge back to the shoe tips (negative: toes under the bench, "
                             "no further than the toe space)", unit="mm", low=-1000, high=1500, least=1)  # fmt: skip
    trunk_bend_max_deg: float = key(40.0, f"largest bend at the hips ({SEATED_BEND_DEG:g} if left out where seated)",
                                    unit="deg", low=0, high=90)  # fmt: skip

    @model_validator(mode="before")
    @classmethod
    def _bends_less_where_seated(cls, data: Any) -> Any:
        if isinstance(data, dict) and data.get("posture") == "seated" and "trunk_bend_max_deg" not in data:
            return {**data, "trunk_bend_max_deg": SEATED_BEND_DEG}
        return data


class Duty(Section):
    """`[duty]`: how often and how long the lever is worked."""

    strokes_per_minute: float = key(2.0, "strokes a minute", unit="1/min", low=0.01, high=120)
    stroke_s: float = key(2.0, "time of one loaded stroke", unit="s", low=0.1, high=600)
    hold_s: float = key(0.0, "time the load is held at its largest", unit="s", low=0, high=3600)
    hours_per_shift: float = key(2.0, "hours of such work in a shift", unit="h", low=0, high=12)


class Screw(Section):
    """`[screw]`: a screw feed to compare the feel with."""

    lead_mm: float = key(..., "travel of the screw a turn", unit="mm", low=0.1, high=100)
    wheel_radius_mm: float = key(..., "radius of its hand wheel", unit="mm", low=5, high=600)
    efficiency: float = key(0.3, "efficiency of the screw", low=0.01, high=1)


class Targets(Section):
    """`[targets]`: what the lever has to reach."""

    served_share: float = key(0.95, "share of operators to be served", low=0, high=1)
    pull_share_min: float = key(0.8, "smallest pulled share of the loaded work", low=0, high=1)
    pull_where_force_above_n: float = key(50.0, "above this hand force the stroke must not be a push", unit="N",
                                          low=0, high=2000)  # fmt: skip
    gap_min_mm: float = key(25.0, "smallest gap between hand or forearm and any zone", unit="mm", low=0, high=500,
                              least=0.1)  # fmt: skip
    margin_min: float = key(1.0, "smallest allowed force over needed force", low=0.1, high=10)
    free: dict[str, Pair] = key({}, "keys that `suggest` may change, with their bounds")
