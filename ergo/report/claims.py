"""The argument, one claim at a time: each with its number, interval, target, source and status."""

import numpy as np

from ergo.evaluation.results import Results
from ergo.pictures.ratings_view import label
from ergo.pictures.ribbon import let_go_position, let_go_stroke, overrun_at
from ergo.pictures.sheet import figure, quantity
from ergo.report.blocks import Claim, Words
from ergo.sources import STATUSES, weakest

# Which tables a claim rests on, by the beginning of their keys. The population's own table is added by name.
_BODY = ("body_", "mass_on_stature", "joint_ranges", "stance_parameters")
_STRENGTH = ("joint_strength", "strength_variation", "age_strength", "grip_", "segment_parameters", "stance_parameters")
_MACHINE = ("drilling", "elastic", "sliding_friction", "mechanism_practice")
TABLES = {
    "reach": _BODY,
    "direction": _MACHINE,
    "force": (*_STRENGTH, "repetition", *_MACHINE),
    "handbook": ("arm_force_mil",),
    "standard": ("en_1005_3",),
    "repetition": ("repetition",),
    "posture": ("posture_bands", "joint_ranges"),
    "clearance": (*_BODY, "clearance_parameters"),
    "let_go": ("letgo_hand", "letgo_body", "letgo_bands", "body_contact", "segment_parameters"),
    "feel": ("letgo_feel",),
    "strong end": ("strong_end", "lever_materials", "metric_threads", *_STRENGTH),
    "twist": ("letgo_twist", "grip_"),
    "served": ("",),
}
AS_LET_GO = "the sources of the let-go rating above"
NO_LET_GO = "The study names no position where the load lets go, so overrun and balance were not worked out."
# Headings of the argument: as the rating meets its target, and as it falls short.
RATED_HEADS = {
    "reach": ("The handle can be reached", "Too many do not reach the handle"),
    "direction": ("The working stroke is a pull where it has to be", "The working stroke is not the pull it has to be"),
    "force": ("The needed force can be given", "Too many cannot give the needed force"),
    "posture": ("The posture can be kept up", "The posture cannot be kept up"),
    "clearance": ("Hand and forearm stay clear", "Hand or forearm come too near"),
    "let_go": ("A let-go leaves people on their feet and unhurt", "A let-go is not safe for enough people"),
    "served": ("The lever serves the people it is meant for", "The lever leaves out too many people"),
}


def heading(results: Results, name: str) -> str:
    """Return the heading of a rated claim, which never says more than the rating."""
    rating = results.ratings.get(name)
    if rating is None or (name == "let_go" and not let_go_judged(results)):
        return f"{label(name).capitalize()} was not rated"
    return RATED_HEADS[name][0 if rating.met else 1]


def backing(results: Results, claim: str) -> tuple[tuple[str, str], ...]:
    """Return source keys with the weakest status of their numbers, for the tables that a claim rests on."""
    begins = TABLES[claim]
    own = {str(results.people.get("population", ""))} if claim in ("reach", "clearance", "force", "served") else set()
    statuses: dict[str, list[str]] = {}
    for row in results.sources:
        if row["table"] in own or row["table"].startswith(begins):
            statuses.setdefault(row["source"], []).append(row["status"])
    return tuple((key, weakest(found)) for key, found in sorted(statuses.items()))


def argument(results: Results) -> list[tuple[str, str, list[Claim | Words]]]:
    """Return the claims in the order of the argument: name, heading, claims."""
    steps: list[tuple[str, str, list[Claim | Words]]] = [
        ("reach", heading(results, "reach"), [rated(results, "reach")]),
        ("direction", heading(results, "direction"), [rated(results, "direction")]),
        ("force", heading(results, "force"), [rated(results, "force"), *opinions(results)]),
        ("repetition", "What repetition leaves of the strength", repetition(results)),
        ("posture", heading(results, "posture"), [rated(results, "posture")]),
        ("clearance", heading(results, "clearance"), [rated(results, "clearance")]),
        ("let_go", heading(results, "let_go"), let_go(results)),
        ("feel", "What the hand feels of the tool", feel(results)),
        ("strong end", "What the strongest operator puts on the lever", strong_end(results)),
        ("twist", "Turning the grip to clamp", [Words(t) for t in said(results, "twist")]),
        ("touch points", "Reaching the other controls", [Words(t) for t in said(results, "touch_points")]),
        ("served", heading(results, "served"), [rated(results, "served")]),
    ]
    return [step for step in steps if step[2]]


def rated(results: Results, name: str) -> Claim | Words:
    """Return a rating as a claim; words that say so where it was not rated."""
    if name not in results.ratings:
        return Words(f"{label(name).capitalize()} was not rated in this study.")
    r = results.ratings[name]
    target = f"{figure(r.target, 1)}" if np.isfinite(r.target) else "none set"
    value = f"{figure(r.value, 1)} of 100" if np.isfinite(r.value) else "not rated"
    words = "every source of the claims above" if name == "served" else ""
    return Claim(
        label(name), r.reason, value, between(r.low, r.high, ""), target, bool(r.met), backing(results, name), words
    )


def between(low: float, high: float, unit: str, decimals: int = 1) -> str:
    """Return an interval in words."""
    if not (np.isfinite(low) and np.isfinite(high)):
        return "no interval: no operator enters it"
    text = f"{figure(low, decimals)} to {figure(high, decimals)}"
    return f"{text}\u202f{unit}" if unit else text


def hardest(results: Results) -> int:
    """Return the position where the needed force is largest."""
    return int(np.nanargmax(np.where(np.isfinite(results.stroke.demand_n), results.stroke.demand_n, -np.inf)))


def opinions(results: Results) -> list[Claim | Words]:
    """Return force three ways at the hardest position: model, handbook table, standard."""
    s, p = results.stroke, hardest(results)
    where = f"at {quantity(100 * s.stroke[p], '%')} of the stroke, where {quantity(s.demand_n[p], 'N')} is needed"
    found: list[Claim | Words] = []
    weak, usual = s.allowed_n["women_p05"][p], s.allowed_n["women_p50"][p]
    found.append(
        Claim(
            "force, first way: joint moments",
            f"The model allows the weakest twentieth of the women {quantity(weak, 'N')} and the middle of the women "
            f"{quantity(usual, 'N')} {where}.",
            quantity(weak, "N"), between(weak, s.allowed_n["men_p50"][p], "N", 0) + " (women P5 to men P50)",
            f"{quantity(s.demand_n[p], 'N')} needed", None, backing(results, "force"), "the sources of the force rating above",
        )
    )  # fmt: skip
    for key, name, claim in (("table_n", "second way: handbook table", "handbook"),
                             ("en_1005_3_n", "third way: EN 1005-3", "standard")):  # fmt: skip
        found.append(_opinion(results, key, name, claim, p, where))
    return found


def _opinion(results: Results, key: str, name: str, claim: str, p: int, where: str) -> Claim | Words:
    values = np.asarray(getattr(results.stroke, key), dtype=float)
    reason = why_not(results, key, "the method gives no value here")
    if not np.isfinite(values[p]):
        return Words(f"Force, {name}: not covered {where}: {reason}.")
    known = values[np.isfinite(values)]
    low, high = quantity(known.min(), "N"), quantity(known.max(), "N")
    text = f"It gives {quantity(values[p], 'N')} {where}; {low} to {high} along the stroke."
    if key in results.stroke.not_covered:
        text += f" Elsewhere it is not covered: {reason}."
    need = results.stroke.demand_n[p]
    spread = f"{between(known.min(), known.max(), 'N', 0)} along the stroke"
    needed = f"{quantity(need, 'N')} needed"
    return Claim(f"force, {name}", text, quantity(values[p], "N"), spread, needed, None, backing(results, claim))


def said(results: Results, key: str) -> list[str]:
    """Return the sentences that the results carry about a detail."""
    detail = results.details.get(key) or {}
    return list(detail.get("sentences", ())) if isinstance(detail, dict) else [str(s) for s in detail]


def why_not(results: Results, key: str, otherwise: str) -> str:
    """Return why a column of the stroke is not covered somewhere, in words that fit a sentence."""
    return results.stroke.not_covered.get(key, otherwise).removeprefix("not covered: ")


def repetition(results: Results) -> list[Claim | Words]:
    """Return what repetition and holding leave of the strength at the hardest position."""
    s, p, duty = results.stroke, hardest(results), results.study["duty"]
    capable, allowed = s.capability_n["women_p50"][p], s.allowed_n["women_p50"][p]
    if not (np.isfinite(capable) and capable > 0.0):
        return []
    share = 100.0 * allowed / capable
    text = (
        f"At {figure(duty['strokes_per_minute'], 1)} strokes a minute of {quantity(duty['stroke_s'], 's', 1)} for "
        f"{quantity(duty['hours_per_shift'], 'h', 1)} a shift, {quantity(share, '%')} of the single-effort strength may be used."
    )
    found: list[Claim | Words] = [
        Claim("repetition", text, quantity(share, "%"), "no interval: one value for all", "none set", None,
              backing(results, "repetition"))
    ]  # fmt: skip
    return found + [Words(t) for t in said(results, "repetition")]


def let_go_judged(results: Results) -> bool:
    """Return whether a let-go was asked for and worked out: a rating without one says nothing."""
    at = let_go_stroke(results)
    if at is None:
        return False
    balance = np.asarray(results.stroke.balance, dtype=float)[let_go_position(results, at)]
    return overrun_at(results, at) is not None or bool(np.isfinite(balance).all())


def let_go(results: Results) -> list[Claim | Words]:
    """Return the let-go rating, with overrun and balance where the load lets go."""
    at = let_go_stroke(results)
    told = (
        [t for t in said(results, "let_go") if t != results.ratings["let_go"].reason]
        if "let_go" in results.ratings
        else []
    )
    if at is None:
        first = Words(
            "The study names no position where the load lets go, so let-go is not rated. For orientation only:"
        )
        return [first, *(Words(t) for t in said(results, "let_go"))] if said(results, "let_go") else [Words(NO_LET_GO)]
    if not let_go_judged(results):
        reason = why_not(results, "overrun_mm", "the results hold no overrun and no balance there")
        return [Words(f"The let-go at {quantity(100 * at, '%')} of the stroke is not covered: {reason}.")]
    rests, p = backing(results, "let_go"), let_go_position(results, at)
    found: list[Claim | Words] = [rated(results, "let_go")]
    overrun, balance = overrun_at(results, at), np.asarray(results.stroke.balance, dtype=float)[p]
    if overrun is not None:
        toward = results.stroke.overrun_toward[p]
        text = (
            f"The handle runs on by {quantity(overrun[1], 'mm')} in the middle case{', ' + toward if toward else ''}."
        )
        spread = between(overrun[0], overrun[2], "mm", 0)
        found.append(Claim("overrun", text, quantity(overrun[1], "mm"), spread, "none set", None, rests, AS_LET_GO))
    if np.isfinite(balance).all():
        kept, step, thrown = (quantity(100 * v, "%", 1) for v in balance)
        text = f"{kept} keep their feet in place, {step} take one step, {thrown} are thrown off their feet."
        rest = f"one step {step}, thrown {thrown}"
        found.append(Claim("balance", text, kept, rest, "none set", None, rests, AS_LET_GO))
    return [*found, *(Words(t) for t in told)]


def feel(results: Results) -> list[Claim | Words]:
    """Return the smallest change of tool force that the hand would notice."""
    values = np.asarray(results.stroke.feel_n, dtype=float)
    if not np.isfinite(values).any():
        reason = why_not(results, "feel_n", "")
        return [Words(f"Feel is not covered: {reason}.")] if reason else []
    low, high = float(np.nanmin(values)), float(np.nanmax(values))
    p = int(np.nanargmax(values))
    text = (
        f"The smallest change of tool force that the hand would notice is {quantity(low, 'N', 1)} to "
        f"{quantity(high, 'N', 1)} along the stroke; it is largest at {quantity(100 * results.stroke.stroke[p], '%')}."
    )
    detail = results.details.get("let_go") or {}
    told = [str(detail[key]) for key in ("feel", "screw") if detail.get(key)]
    claim = Claim("feel", text, quantity(high, "N", 1), between(low, high, "N") + " along the stroke", "none set", None,
                  backing(results, "feel"))  # fmt: skip
    return [claim, *(Words(t) for t in told)]


def strong_end(results: Results) -> list[Claim | Words]:
    """Return the force that the lever, its pins and stops must survive."""
    values = np.asarray(results.stroke.capability_n.get("men_p99", np.array([np.nan])), dtype=float)
    if not np.isfinite(values).any():
        return []
    p = int(np.nanargmax(values))
    text, *rest = said(results, "strong_end") or [
        f"The strongest hundredth of the men can put {quantity(values[p], 'N')} on the handle, at "
        f"{quantity(100 * results.stroke.stroke[p], '%')} of the stroke; lever, pins and stops must survive it."
    ]
    spread = between(float(np.nanmin(values)), float(np.nanmax(values)), "N", 0) + " along the stroke"
    rests = backing(results, "strong end")
    claim = Claim(
        "strong end", text, quantity(values[p], "N"), spread, "none set", None, rests, _strong_backing(results)
    )
    return [claim, *(Words(t) for t in rest)]


def _strong_backing(results: Results) -> str:
    """The strong end rests on the strengths of the force rating, and on tables of its own."""
    force = {key for key, _ in backing(results, "force")}
    own = [f"{key} ({status})" for key, status in backing(results, "strong end") if key not in force]
    return "; ".join(["the strengths behind the force rating", *([", ".join(own)] if own else [])])


def listed(claim: Claim) -> str:
    """Return the sources of a claim as one line, weakest status first."""
    if claim.backing_words:
        return claim.backing_words
    groups = []
    for status in reversed(STATUSES):
        keys = [key for key, found in claim.backing if found == status]
        if keys:
            groups.append(f"{status}: {', '.join(keys)}")
    return "; ".join(groups) or "the study's own geometry, no shipped number"
