"""The machine of a study: the drive along the stroke and what it was made from."""

from dataclasses import dataclass

from ergo.datasets import Library
from ergo.load.lets_go import Load
from ergo.mechanism.drive import Drive, drive, path_drive
from ergo.mechanism.lever import Lever
from ergo.mechanism.linkage import FixedPin, Linkage
from ergo.mechanism.zones import Zone
from ergo.study.model import Study
from ergo.study.trade import (
    friction_of,
    letting_go,
    lever_of,
    linkage_of,
    load_of,
    measured_of,
    path_of,
    zones_of,
)

MM = 1e-3


@dataclass(frozen=True)
class Machine:
    """The machine of one study; lever, linkage and load are None on a measured path."""

    drive: Drive
    lever: Lever | None
    linkage: Linkage | None
    load: Load | None
    zones: tuple[Zone, ...]
    ball: bool
    lets_go_stroke: float | None
    tool_mass_kg: float


def machine_of(study: Study, library: Library) -> Machine:
    """Return the machine of a study, with the drive at its stroke positions.

    Raises
    ------
    NothingMovesError
        For a fixed pin, with the mobility count, the sideways travel and the usable angle.
    """
    path, zones, ball = path_of(study), zones_of(study), study.grip.kind == "ball"
    if study.path is not None:
        return Machine(path_drive(measured_of(study), path), None, None, None, zones, ball, None, 0.0)
    lever, load = lever_of(study), load_of(study, library)
    linkage = linkage_of(study, lever, library)
    if not isinstance(linkage, FixedPin):
        load = letting_go(study, load, lever, linkage)
    made = drive(path, lever, linkage, load.force_n, friction_of(study))
    moving = None if isinstance(linkage, FixedPin) else linkage
    return Machine(made, lever, moving, load, zones, ball, study.load.lets_go_at, study.linkage.tool_mass_kg)
