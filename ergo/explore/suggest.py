"""The smallest changes that meet every target: searched on few people, confirmed on all of them, or an honest no."""

from collections.abc import Callable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.errors import PullwardError
from ergo.evaluation.results import RATING_NAMES, Results
from ergo.evaluation.run import evaluate
from ergo.explore.compare import Difference, paired_difference
from ergo.explore.free import FreeKeys, free_keys
from ergo.explore.keys import placed
from ergo.explore.looking import NOT_MEETING, Apart, look_for_less, look_for_room, look_wide, tidied
from ergo.explore.outcome import outcome_of
from ergo.explore.trials import TOOL_TRAVEL, TRAVEL_KEPT, Bench, Glance, Judge, Trial, blocking, glance, last_margin
from ergo.study.model import Study

Array = NDArray[np.float64]
PEOPLE, POSITIONS = 60, 15  # of a trial in the wide search
MORE_PEOPLE, MORE_POSITIONS = 300, 25  # in the search near what looks good
PROPOSALS = 3
TRIALS = 240
WIDE_SHARE = 0.6
STARTS, ROUNDS, NEAR_TRIALS = 4, 6, 16
MARGIN_STEP = 1.01
WIDE_LIFT, WIDE_MARGIN = 2.0, 1.05
SPARE = 0.5  # points by which a target is lifted beyond the gap between few people and all
TRIMS, TRIMMED_TO = 3, 0.7  # how often, and how far back at most, a confirmed change is tried smaller
NEAR = 0.3  # a shortfall up to this is looked at again on all people before the answer is no


@dataclass(frozen=True)
class Proposal:
    """One set of changes, judged on all people beside the study as it stands.

    cost : sum of the changes, each as a share of its key's span. `before`, `after` : what the placements store holds
    of each (ratings, force, travel). served : paired difference of the served share [points]. margin : of the person
    who must still be served, over the smallest margin asked. targets : of each rating, None where it has none.
    shares : each key's part of the cost.
    """

    values: Mapping[str, float]
    now: Mapping[str, float]
    units: Mapping[str, str]
    cost: float
    meets: bool
    before: Mapping[str, Any]
    after: Mapping[str, Any]
    served: Difference
    margin: float
    targets: Mapping[str, float | None]
    shares: Mapping[str, float]

    @property
    def changed(self) -> list[str]:
        """The keys that change."""
        return [path for path, value in self.values.items() if value != self.now[path]]

    def to_dict(self) -> dict[str, Any]:
        """Return the proposal as plain values."""
        changes = [{"key": p, "from": self.now[p], "to": self.values[p], "unit": self.units[p],
                    "cost": self.shares[p]} for p in self.changed]  # fmt: skip
        served = {**vars(self.served), "clear": self.served.clear}
        return {"changes": changes, "cost": self.cost, "meets": self.meets, "margin": self.margin,
                "before": dict(self.before), "after": dict(self.after),
                "targets": dict(self.targets), "served_difference": served}  # fmt: skip


@dataclass(frozen=True)
class Suggestion:
    """The answer: proposals that meet every target, cheapest first; or the nearest miss and what blocks it.

    blocked : (rating, best value that any trial reached, target). `together` : no rating is out of reach alone, but
    not all can be met at once.
    """

    meets_already: bool
    proposals: tuple[Proposal, ...]
    nearest: Proposal | None
    blocked: tuple[tuple[str, float, float], ...]
    together: bool
    trials: int

    def to_dict(self) -> dict[str, Any]:
        """Return the answer as plain values."""
        return {
            "meets_already": self.meets_already,
            "proposals": [p.to_dict() for p in self.proposals],
            "nearest": self.nearest.to_dict() if self.nearest else None,
            "blocked": [{"rating": name, "best": best, "target": target} for name, best, target in self.blocked],
            "together": self.together,
            "trials": self.trials,
        }


@dataclass
class _Search:
    study: Study
    keys: FreeKeys
    judge: Judge
    wide: Bench
    near: Bench
    base: Results
    tell: Callable[[float, str], None]

    def confirmed(self, values: Mapping[str, float]) -> Proposal | None:
        """Return the proposal judged on all people, None when it is no sound study there."""
        self.tell(0.0, "judging a change on all people")
        try:
            study = placed(self.study, values)
            results = self.judge(study)
            travels = self.near.look is None or self.near.look(study).travels(self.near.travel)
        except PullwardError:
            return None
        return Proposal(
            values=values,
            now={key.path: key.now for key in self.keys.keys},
            units={key.path: key.unit for key in self.keys.keys},
            cost=self.keys.cost(values),
            meets=results.meets and travels,
            before=outcome_of(self.base),
            after=outcome_of(results),
            served=paired_difference("the proposal", results.crowd.served, self.base.crowd.served),
            margin=last_margin(self.study, results),
            targets={name: r.target if np.isfinite(r.target) else None for name, r in results.ratings.items()},
            shares=self.keys.shares(values),
        )


def suggest(study: Study, *, free: Mapping[str, tuple[float, float]] | None = None, trials: int = TRIALS,
            judge: Judge = evaluate, look: Callable[[Study], Glance] | None = glance,
            tell: Callable[[float, str], None] | None = None,
            show: Callable[[Proposal], None] | None = None) -> Suggestion:  # fmt: skip
    """Look for the smallest changes of the free keys that meet every target.

    Parameters
    ----------
    study : Study
        Its `[targets.free]` names the keys and their bounds, unless `free` does.
    free : mapping, optional
        Key -> bounds.
    trials : int
        About how many placements are judged in all: most on 60 people at 15 positions, those near what looks good on
        300 at 25.
    judge : callable
        `evaluate`, or a stand-in.
    look : callable, optional
        Judges direction and tool travel alone, so that no people are asked about a push, or about a lever that moves
        the tool less than it does now.
    tell : callable, optional
        Progress, share and word; may raise to stop.
    show : callable, optional
        Called with each proposal as soon as it is confirmed.

    Returns
    -------
    Suggestion
        Up to three proposals that differ by at least 15 % of some key's span, each meeting every target on the
        study's full population; or none, with the nearest miss and the ratings that block.

    Notes
    -----
    Cost: sum over keys of |change| / span. SciPy's differential evolution, then COBYQA from the cheapest trial
    that meets the targets; a proposal that meets them on few people only is searched again with targets lifted by the gap.
    """
    keys = free_keys(study, free)
    say = _forward(tell)
    say(0.0, "judging the study as it stands")
    base = judge(study)
    travel = look(study).travel if look is not None else 0.0

    def bench(people: int, positions: int, begin: float, end: float, count: int) -> Bench:
        few = {"operators.count": min(study.operators.count, people), "study.positions": min(study.study.positions, positions)}
        return Bench(study, keys, judge, few, look, travel,
                     tell=lambda n: say(min(begin + (end - begin) * n / count, end), f"trial {n}"))  # fmt: skip

    wide_trials = int(WIDE_SHARE * trials)
    wide = bench(PEOPLE, POSITIONS, 0.0, 0.3, wide_trials)
    near = bench(MORE_PEOPLE, MORE_POSITIONS, 0.3, 0.9, trials - wide_trials)
    search = _Search(study, keys, judge, wide, near, base, say)
    if base.meets:
        return Suggestion(True, (), None, (), False, 0)
    # What only just meets its targets on few people was chosen for flattering them; so more is asked of it there.
    wide.raised, wide.margin = dict.fromkeys(RATING_NAMES, WIDE_LIFT), WIDE_MARGIN
    look_wide(wide, wide_trials, study.operators.seed)
    found: list[Proposal] = []
    while len(found) < PROPOSALS and (made := propose(search, found)) is not None:
        found.append(made)
        if show is not None:
            show(made)
        say(0.9, f"proposal {len(found)} confirmed on all people")
    found.sort(key=lambda p: p.cost)
    if found:
        return Suggestion(False, tuple(found), None, (), False, len(wide.known) + len(near.known))
    return _no(search)


def _forward(tell: Callable[[float, str], None] | None) -> Callable[[float, str], None]:
    """Return a teller whose share never goes back: a search near one proposal begins where the last had got to."""
    reached = 0.0

    def say(share: float, what: str) -> None:
        nonlocal reached
        reached = max(reached, share)
        if tell is not None:
            tell(reached, what)

    return say


def propose(search: _Search, others: Sequence[Proposal]) -> Proposal | None:
    """Return a proposal that meets every target on all people, apart from the others; None where none was found."""
    bench, keys = search.near, search.keys
    bench.raised, bench.margin = {}, 1.0
    apart = Apart(keys, tuple(keys.point(other.values) for other in others))
    for trial in apart.starts(search.wide.trials(), STARTS):
        bench.trial(keys.point(trial.values))
    trials, begun = NEAR_TRIALS + 4 * len(keys.keys), []
    for _ in range(ROUNDS):
        best = min(bench.trials(), key=apart.worth)
        if apart.worth(best) >= NOT_MEETING:
            left = [trial for trial in apart.starts(bench.trials(), STARTS) if trial.values not in begun]
            if not left or apart.worth(best) >= NOT_MEETING + NEAR:
                return None
            start = max(left, key=lambda trial: trial.least_room)
            begun.append(start.values)
            look_for_room(bench, apart, keys.point(start.values), trials)
            continue
        look_for_less(bench, apart, keys.point(best.values), trials)
        best = tidied(bench, min(bench.trials(), key=apart.worth), apart)
        proposal = search.confirmed(best.values)
        if proposal is not None and proposal.meets:
            return trimmed(search, proposal, apart)
        if proposal is None or not lifted(bench, best, proposal):
            return None
    return None


def trimmed(search: _Search, proposal: Proposal, apart: Apart) -> Proposal:
    """Return a confirmed proposal with all its changes made smaller together, as far as it still meets every target."""
    keys = search.keys
    now, far = keys.now(), keys.point(proposal.values)
    low, high = TRIMMED_TO, 1.0
    for _ in range(TRIMS):
        share = 0.5 * (low + high)
        values = keys.values(now + share * (far - now))
        smaller = search.confirmed(values) if values != proposal.values else None
        if smaller is not None and smaller.meets and smaller.cost < proposal.cost and not apart.near(values):
            proposal, high = smaller, share
        else:
            low = share
    return proposal


def lifted(bench: Bench, trial: Trial, proposal: Proposal) -> bool:
    """Lift what few people met and all do not, by the gap between them; False where there is nothing to lift."""
    missed = [name.replace("-", "_") for name in proposal.after["missed"].split(", ") if name]
    for name in missed:
        gap = trial.ratings[name] - proposal.after[name]
        bench.raised[name] = max(bench.raised.get(name, 0.0) + SPARE, gap + SPARE)
    if proposal.margin < 1.0:
        bench.margin = max(bench.margin * MARGIN_STEP, trial.margin / max(proposal.margin, 0.1) * MARGIN_STEP)
        bench.raised.pop("force", None)
        bench.raised.pop("served", None)
    return bool(missed)


def _no(search: _Search) -> Suggestion:
    """Return the honest no: the nearest miss on all people, and what blocks."""
    for bench in (search.wide, search.near):
        bench.raised, bench.margin = {}, 1.0
    trials = search.wide.trials() + search.near.trials()
    targets = {name: rating.target for name, rating in search.base.ratings.items()} | {TOOL_TRAVEL: TRAVEL_KEPT}
    closest = min(search.near.trials() or search.wide.trials(), key=lambda trial: (trial.shortfall, trial.cost))
    nearest = search.confirmed(closest.values)
    never = blocking(trials)
    if not never and nearest is not None:
        missed = nearest.after["missed"].replace("-", "_").split(", ")
        return Suggestion(False, (), nearest, tuple((n, nearest.after[n], targets[n]) for n in RATING_NAMES if n in missed),
                          True, len(trials))  # fmt: skip
    return Suggestion(False, (), nearest, tuple((n, best, targets[n]) for n, best in never), False, len(trials))
