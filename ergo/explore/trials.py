"""Trials of a suggestion: placements judged on few people, each once, and how far each falls short of its targets."""

import math
from collections.abc import Callable, Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import library
from ergo.errors import PullwardError
from ergo.evaluation.machine import machine_of
from ergo.evaluation.rate import steps_m
from ergo.evaluation.results import RATING_NAMES, Results
from ergo.explore.free import FreeKeys
from ergo.explore.keys import placed
from ergo.rating import ratings
from ergo.rating.reasons import IMMOVABLE_N
from ergo.study.model import Study

Array = NDArray[np.float64]
Judge = Callable[[Study], Results]
NO_STUDY = 50.0  # shortfall of what is no sound study: worse than missing every target
UNJUDGED = 10.0  # shortfall of what already fails by its direction, before any person is asked
EACH_MISS, PEOPLE_WEIGHT, MARGIN_WEIGHT = 0.02, 0.2, 0.3
TOOL_TRAVEL, TRAVEL_KEPT = "tool_travel", 98.0  # a lever that moves the tool less no longer does its work [%]


@dataclass(frozen=True)
class Trial:
    """One placement tried: what it costs and how far it falls short (0: meets every target).

    margin : of the person who must still be served, over the smallest margin asked; NaN where no person was asked.
    room : over each target, in shares of its scale; below zero where it is missed.
    """

    values: Mapping[str, float]
    cost: float
    shortfall: float
    margin: float
    ratings: Mapping[str, float]
    missed: tuple[str, ...]
    room: Array

    @property
    def meets(self) -> bool:
        """Whether every target is met."""
        return self.shortfall <= 0.0

    @property
    def least_room(self) -> float:
        """Room over the tightest target."""
        return float(self.room.min())


@dataclass(frozen=True)
class Measured:
    """What was found of a placement: rating -> (value, target, met); what it lacks before people are asked; margin."""

    found: Mapping[str, tuple[float, float, bool]]
    lack: float = 0.0
    margin: float = math.nan


@dataclass
class Bench:
    """Judges points of the free keys on a coarse draw, remembers them, and counts.

    `raised` (rating -> points) lifts targets, and `margin` the smallest margin, so that what is found here also holds
    on the full population. `coarse` are
    the study's values for a trial: few people, few positions. `look` judges what needs no people: direction, and
    whether the tool still travels `travel` (as the slide coordinate has it).
    """

    study: Study
    keys: FreeKeys
    judge: Judge
    coarse: Mapping[str, Any]
    look: "Callable[[Study], Glance] | None" = None
    travel: float = 0.0
    tell: Callable[[int], None] | None = None
    raised: dict[str, float] = field(default_factory=dict)
    margin: float = 1.0
    known: dict[tuple[float, ...], Measured] = field(default_factory=dict)

    def trial(self, point: Array) -> Trial:
        """Return the trial of a point (k,) of shares; judged only if it was not before."""
        values = self.keys.values(point)
        key = tuple(values.values())
        if key not in self.known:
            self.known[key] = self._measure(values)
            if self.tell is not None:
                self.tell(self.asked)
        return self._held_against_targets(values, self.known[key])

    @property
    def asked(self) -> int:
        """For how many placements people were asked."""
        return sum(measured.lack <= 0.0 for measured in self.known.values())

    def trials(self) -> list[Trial]:
        """Return every trial so far, held against the targets as they now are."""
        paths = [key.path for key in self.keys.keys]
        return [self._held_against_targets(dict(zip(paths, key, strict=True)), found) for key, found in self.known.items()]

    def _measure(self, values: Mapping[str, float]) -> Measured:
        found: dict[str, tuple[float, float, bool]] = {}
        try:
            if self.look is not None:
                found, lack = self.look(placed(self.study, values)).held_against(self.travel)
                if lack > 0.0:
                    return Measured(found, UNJUDGED + lack)
            study = placed(self.study, {**self.coarse, **values})
            results = self.judge(study)
        except PullwardError:
            return Measured({}, NO_STUDY)
        found |= {name: (r.value, r.target, r.met) for name, r in results.ratings.items()}
        return Measured(found, 0.0, last_margin(study, results))

    def _held_against_targets(self, values: Mapping[str, float], measured: Measured) -> Trial:
        shortfall, missed = 0.0, []
        for name, (value, target, met) in measured.found.items():
            wanted = min(target + self.raised.get(name, 0.0), 100.0)
            if not met or value < wanted:
                missed.append(name)
                shortfall += EACH_MISS + max(wanted - value, 0.0) / 100.0
        # The margin falls steadily where a share of few people stands still, so a search sees a way.
        if measured.margin < self.margin:
            shortfall += EACH_MISS * (not missed) + PEOPLE_WEIGHT * (1.0 - measured.margin / self.margin)
        shortfall = measured.lack if measured.lack > 0.0 else shortfall
        ratings_found = {name: row[0] for name, row in measured.found.items()}
        return Trial(values, self.keys.cost(values), shortfall, measured.margin, ratings_found, tuple(missed),
                     self._room(measured))  # fmt: skip

    def _room(self, measured: Measured) -> Array:
        names = (TOOL_TRAVEL, *RATING_NAMES)
        if measured.lack > 0.0:
            return np.full(len(names) + 1, -measured.lack / UNJUDGED)
        over = [(measured.found[n][0] - measured.found[n][1] - self.raised.get(n, 0.0)) / 100.0 if n in measured.found else 0.0
                for n in names]  # fmt: skip
        return np.array([*over, MARGIN_WEIGHT * (measured.margin / self.margin - 1.0)])


@dataclass(frozen=True)
class Glance:
    """What is known of a placement before any person is asked.

    direction, target, met : of the direction rating. pushed : 0..1, how much of the high force is pushed. travel : how
    far the tool moves over the stroke, as the slide coordinate has it (positive).
    """

    direction: float
    target: float
    met: bool
    pushed: float
    travel: float

    def travels(self, travel: float) -> bool:
        """Return whether the tool still travels what it did."""
        return self._share(travel) >= TRAVEL_KEPT

    def _share(self, travel: float) -> float:
        return 100.0 * min(self.travel / travel, 1.0) if travel > 0.0 else 100.0

    def held_against(self, travel: float) -> tuple[dict[str, Any], float]:
        """Return direction and tool travel as (value, target, met), and how much both lack together (0: nothing)."""
        share, kept = self._share(travel), self.travels(travel)
        found = {"direction": (self.direction, self.target, self.met), TOOL_TRAVEL: (share, TRAVEL_KEPT, kept)}
        lack = 0.0 if kept else EACH_MISS + (TRAVEL_KEPT - share) / 100.0
        if not self.met:
            lack += EACH_MISS + self.pushed
        return found, lack


def glance(study: Study) -> Glance:
    """Return what a placement's machine alone says.

    Raises
    ------
    NothingMovesError
        For a linkage that is no mechanism.
    """
    drive, targets = machine_of(study, library()).drive, study.targets
    demand = np.where(np.isfinite(drive.demand_n), drive.demand_n, IMMOVABLE_N)
    pull = -drive.work_dir[:, 1]
    found = ratings.direction(
        pull, demand, steps_m(drive.hand_travel_m), drive.stroke,
        pull_share_min=targets.pull_share_min, pull_where_force_above_n=targets.pull_where_force_above_n,
    )  # fmt: skip
    high = demand > targets.pull_where_force_above_n
    pushed = float(np.mean(np.maximum(-pull, 0.0) * high))
    return Glance(found.value, found.target, found.met, pushed, float(abs(drive.slide_m[-1] - drive.slide_m[0])))


def last_margin(study: Study, results: Results) -> float:
    """Return the margin of the person who must still be served, over the smallest margin asked (above 1: served)."""
    margin, targets = np.asarray(results.crowd.margin, dtype=float), study.targets
    ordered = np.sort(np.minimum(margin, 10.0 * targets.margin_min))[::-1]
    return float(ordered[max(int(np.ceil(targets.served_share * ordered.size)) - 1, 0)] / targets.margin_min)


def blocking(trials: list[Trial]) -> list[tuple[str, float]]:
    """Return the targets that no trial ever met, with the best value that any reached."""
    names = dict.fromkeys(name for t in trials for name in t.ratings)
    asked = {name: [t for t in trials if name in t.ratings] for name in names}
    never = [name for name in names if all(name in t.missed for t in asked[name])]
    return [(name, max(t.ratings[name] for t in asked[name])) for name in never]
