"""From the study's words to the people at the machine: who they are, where they stand, what the hand must do."""

from dataclasses import dataclass
from pathlib import Path

import numpy as np
from numpy.typing import NDArray

from ergo.arm.body import Support
from ergo.arm.scouts import SCOUTS
from ergo.datasets import Library
from ergo.evaluation.machine import MM, Machine, machine_of
from ergo.people.operators import Operators, draw
from ergo.rating.reasons import IMMOVABLE_N
from ergo.strength.grip import GripCapability, grip_capability
from ergo.strength.hand_capability import Bench, HandTask, Workplace, pack
from ergo.strength.repetition import Repetition, repetition
from ergo.study.model import Study

Array = NDArray[np.float64]
SCOUT_SEED = 0  # the scouts are the same people whatever the study's own seed


@dataclass(frozen=True)
class Plan:
    """Everything an evaluation needs, made from one study."""

    study: Study
    library: Library
    machine: Machine
    people: Operators
    place: Workplace
    task: HandTask
    repetition: Repetition
    bench: Bench
    scouts: Bench
    grip_note: str


def plan(study: Study, library: Library, operators: Operators | None = None) -> Plan:
    """Return the plan of a study; `operators` drawn before may be used again, so that people stay the same."""
    machine = machine_of(study, library)
    people = people_of(study, library) if operators is None else operators
    place = workplace_of(study)
    repeated = repetition_of(study, library)
    drive = machine.drive
    task = HandTask(
        grip_m=drive.grip_m,
        work_dir=drive.work_dir,
        grip_axis=drive.grip_axis,
        ball=machine.ball,
        demand_n=np.where(np.isfinite(drive.demand_n), drive.demand_n, IMMOVABLE_N),
        share=repeated.share,
        margin_min=study.targets.margin_min,
    )
    held = _held(study, people, library)
    bench = pack(people, place, task, held.breakaway_across_n, held.slide_along_n, library)
    ahead = people_of(study, library, count=SCOUTS, seed=SCOUT_SEED)
    first = _held(study, ahead, library)
    scouts = pack(ahead, place, task, first.breakaway_across_n, first.slide_along_n, library)
    return Plan(study, library, machine, people, place, task, repeated, bench, scouts, held.not_covered)


def _held(study: Study, people: Operators, library: Library) -> GripCapability:
    """Return what people's hands hold on the study's grip."""
    return grip_capability(
        people.women,
        people.age_years,
        people.hand,
        people.strength_common_z,
        people.strength_joint_z[:, 15],
        kind=study.grip.kind,
        surface=study.grip.surface,
        diameter_m=study.grip.diameter_mm * MM,
        glove=study.operators.glove,
        library=library,
    )


def people_of(study: Study, library: Library, *, count: int = 0, seed: int | None = None) -> Operators:
    """Return the operators that the study asks for; another `count` and `seed` of the same people where given."""
    asked = study.operators
    name = asked.population
    population: str | Path = Path(study.folder) / name if name.endswith(".csv") else name
    return draw(
        library,
        population,
        women_share=asked.women_share,
        count=count or asked.count,
        seed=asked.seed if seed is None else seed,
        hand=asked.hand,
        age_years=(asked.age_years[0], asked.age_years[1]),
        shoes_mm=asked.shoes_mm,
        glove=asked.glove,
    )


def workplace_of(study: Study) -> Workplace:
    """Return where the operators stand or sit, in SI."""
    bench, asked = study.bench, study.operators
    seated = asked.posture == "seated"
    support = Support(seated, asked.seat_height_mm * MM, asked.seat_y_mm * MM) if seated else Support(False)
    return Workplace(
        surface_height_m=bench.surface_height_mm * MM,
        toe_space_m=bench.toe_space_mm * MM,
        floor_friction=bench.floor_friction,
        stand_x_m=(asked.stand_x_mm[0] * MM, asked.stand_x_mm[1] * MM),
        stand_off_m=(asked.stand_off_mm[0] * MM, asked.stand_off_mm[1] * MM),
        trunk_bend_max_rad=float(np.deg2rad(asked.trunk_bend_max_deg)),
        support=support,
        brace=asked.brace,
        leaning=asked.stance_rule == "leaning",
    )


def repetition_of(study: Study, library: Library) -> Repetition:
    """Return what repetition and duration leave of the strength."""
    duty = study.duty
    return repetition(
        strokes_per_minute=duty.strokes_per_minute,
        stroke_s=duty.stroke_s,
        hold_s=duty.hold_s,
        hours_per_shift=duty.hours_per_shift,
        library=library,
    )
