"""The table of contents of an evaluation: people, machine, capability, opinions, ratings, results."""

from collections.abc import Callable
from dataclasses import asdict, replace

import numpy as np
from numpy.typing import NDArray

from ergo import __version__
from ergo.arm.joints import JointRanges
from ergo.arm.posture import Posture, describe_postures
from ergo.datasets import Library
from ergo.datasets import library as shipped
from ergo.evaluation.clearance import Gaps, gaps
from ergo.evaluation.flips import flips
from ergo.evaluation.letting_go import Release, release
from ergo.evaluation.manifest import manifest
from ergo.evaluation.opinions import Opinions, opinions
from ergo.evaluation.persons import persons, reach_lines_mm
from ergo.evaluation.plan import Plan, plan
from ergo.evaluation.provenance import memory_tables, numbers_used
from ergo.evaluation.rate import rate
from ergo.evaluation.results import Results
from ergo.evaluation.strong_end import TABLES as STRONG_TABLES
from ergo.evaluation.strong_end import strong_end
from ergo.evaluation.tables import crowd_table, people_row, stroke_table
from ergo.evaluation.tally import Tally, tally
from ergo.evaluation.touching import touching
from ergo.evaluation.twisting import TABLES as TWIST_TABLES
from ergo.evaluation.twisting import twisting
from ergo.people.operators import Operators
from ergo.rating import reasons
from ergo.strength.hand_capability import HandCapability, hand_capability
from ergo.study.model import Study

Array = NDArray[np.float64]
Tell = Callable[[float, str], None]
SIDEWAYS = 0.5  # part of the work direction from which the sideways base of the stance matters


def _silent(share: float, what: str) -> None:
    """Tell nobody."""


def evaluate(study: Study, *, library: Library | None = None, operators: Operators | None = None,
             tell: Tell = _silent, with_flips: bool = False) -> Results:  # fmt: skip
    """Judge one study.

    Parameters
    ----------
    study : Study
        Read and checked.
    library : Library, optional
        The shipped tables, or tables with changed values.
    operators : Operators, optional
        People drawn before, so that several studies meet the same people.
    tell : callable, optional
        Called with a share 0..1 and a word as the work goes on.
    with_flips : bool
        Whether to look for the doubtful numbers that would flip a target (many coarse evaluations).

    Returns
    -------
    Results
        Same study, seed and tables, same bytes.

    Raises
    ------
    NothingMovesError
        For a linkage that is no mechanism.
    """
    tables = library or shipped()
    tell(0.02, "drawing people")
    made = plan(study, tables, operators)
    what = "finding stances and postures"
    capability = hand_capability(made.bench, made.task, made.scouts, lambda share: tell(0.1 + 0.7 * share, what))
    posture = easiest_postures(made, capability)
    tell(0.8, "measuring gaps")
    gap = gaps(made, posture)
    second = opinions(made, capability, posture)
    tell(0.85, "letting go")
    gone = release(made, capability, posture, gap)
    tell(0.95, "rating")
    clear = gap.gap_m >= study.targets.gap_min_mm * 1e-3
    counted = tally(made, capability, clear, (gap.names, gap.zone), gone.safe, gone.at_stroke)
    results = _results(made, capability, posture, gap, second, gone, counted)
    if not with_flips:
        return results
    found = flips(study, evaluate, tables, tell)
    said = [flip.sentence() for flip in found] or ["No recalled or derived number alone would flip a target."]
    return replace(results, details={**results.details, "flips": {"sentences": said, "rows": [asdict(f) for f in found]}})


def easiest_postures(made: Plan, capability: HandCapability) -> Posture:
    """Return the postures that people take: the easiest that carries the demand, else the strongest."""
    bench = made.bench
    natural = JointRanges.from_library(made.library).natural_grip_angle_rad
    return describe_postures(bench.ops, bench.scene, bench.limits, capability.stance, bench.targets,
                             capability.easiest, bench.mirror, natural, bench.ankle_z_m)  # fmt: skip


def _results(made: Plan, capability: HandCapability, posture: Posture, gap: Gaps, second: Opinions, gone: Release,
             counted: Tally) -> Results:  # fmt: skip
    study = made.study
    ratings = rate(made, capability, posture, gap, gone, counted)
    short = [name for name, rating in ratings.items() if not rating.met]
    strong, turned, touched = strong_end(made, capability), twisting(made, capability, posture), touching(made, posture)
    used = numbers_used(made.library, study.operators.population, _further_tables(study, gone))
    title = study.study.title + (f" ({study.variant_name})" if study.variant_name else "")
    said = [reasons.verdict(title, short), *second.sentences, *_work_sentences(made), gone.details["feel"], gone.details["screw"],
            *turned["sentences"], *touched["sentences"], *strong["sentences"], *made.machine.drive.notes]
    return Results(
        version=__version__,
        study=study.content(),
        variant=study.variant_name,
        people=people_row(made),
        ratings=ratings,
        stroke=stroke_table(made, capability, gap, second, gone, counted),
        persons=persons(made, capability, posture, counted.served),
        crowd=crowd_table(made, capability, counted),
        verdict="falls short" if short else "meets",
        reasons=tuple(s for s in said if s),
        cautions=reasons.cautions(memory_tables(used)),
        sources=used,
        details={
            "repetition": _repetition_row(made),
            "let_go": gone.details,
            "strong_end": strong,
            "twist": turned,
            "touch_points": touched,
            "reach_lines_mm": reach_lines_mm(made, capability),
            "mobility": made.machine.drive.mobility,
            "self_locking": made.machine.drive.self_locking,
            "efficiency": made.machine.drive.efficiency.tolist(),
        },
        manifest=manifest(study.digest(), study.operators.seed, made.library),
    )


def _further_tables(study: Study, gone: Release) -> list[str]:
    """Return the tables that this study needs beside those that every study does."""
    found = [*gone.tables, "clearance_parameters", "body_regression", "mass_on_stature"]
    return [*found, *(STRONG_TABLES if study.structure else ()), *(TWIST_TABLES if study.grip.turns else ())]


def _repetition_row(made: Plan) -> dict[str, object]:
    r = made.repetition
    return {"share": r.share, "duty_cycle": r.duty_cycle, "governs": r.governs}


def _work_sentences(made: Plan) -> list[str]:
    """Say what repetition leaves, and where a published range was left."""
    r = made.repetition
    found = [f"The job leaves {100 * r.share:.0f} % of the strength (duty cycle {r.duty_cycle:.2f}, {r.governs})."]
    if r.reason:
        found.append(f"Repetition is not covered: {r.reason}.")
    if made.grip_note:
        found.append(f"Grip: {made.grip_note}.")
    drive = made.machine.drive
    sideways = (np.abs(drive.work_dir[:, 0]) > SIDEWAYS) & (drive.demand_n > 0.0)
    if sideways.any() and not made.place.support.seated:
        apart = made.library.values("stance_parameters")["feet_distance_mm"]
        found.append(f"Part of the stroke goes sideways: the feet are taken {apart:.0f} mm apart; a wider stance, which tips"
                     " later, is not modelled.")  # fmt: skip
    return found
