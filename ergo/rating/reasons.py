"""Sentences that say what decides, where and for whom, in plain words with numbers and units."""

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Flags = NDArray[np.bool_]
IMMOVABLE_N = 1e6  # stands for the needed force where no force is enough
LIMIT_WORDS = {
    "raising or lowering the upper arm": "the shoulder, raising or lowering the upper arm",
    "moving the upper arm across": "the shoulder, moving the upper arm across",
    "turning the upper arm": "the shoulder, turning the upper arm",
    "tipping": "losing balance (tipping)",
    "slipping": "slipping on the floor",
    "reach": "reach: the handle is too far",
    "handle too close": "the handle being too close",
    "joint range": "the range of a joint",
    "trunk in the way": "the trunk being in the way",
    "bench in the way": "the bench being in the way",
}


def percent(share: float) -> str:
    """Return a share as text: whole percent, one decimal near the ends."""
    value = 100.0 * share
    if 0.0 < value < 1.0 or 99.0 < value < 100.0:
        return f"{value:.1f} %"
    return f"{value:.0f} %"


def words(limit: str) -> str:
    """Return a limit in words that fit a sentence."""
    return LIMIT_WORDS.get(limit, limit if limit.startswith("the ") else f"the {limit}")


def commonest(codes: NDArray[np.int64], names: tuple[str, ...]) -> str:
    """Return the name that occurs most among codes."""
    return names[int(np.bincount(codes.ravel(), minlength=len(names)).argmax())] if codes.size else "none"


def who(lost: Flags, women: Flags) -> str:
    """Return how the lost divide between women and men."""
    parts = []
    for name, chosen in (("women", women), ("men", ~women)):
        if chosen.any():
            parts.append(f"{percent(float(lost[chosen].mean()))} of the {name}")
    return " and ".join(parts)


def direction(share: float, pull: Array, demand_n: Array, stroke: Array, high: Flags, above_n: float,
              sideways: bool) -> str:  # fmt: skip
    """Say how much of the loaded work is pulled, where it is pushed under load, and where it changes."""
    if sideways:
        return "The loaded stroke is neither a pull nor a push: the hand moves up, down or sideways."
    text = f"{percent(share)} of the loaded fore-and-aft work is a pull"
    if high.any():
        text += (f"; from {percent(stroke[high].min())} to {percent(stroke[high].max())} of the stroke the hand pushes"
                 f" with up to {demand_n[high].max():.0f} N, above the {above_n:.0f} N set for a push")  # fmt: skip
    change = np.nonzero(np.diff(np.sign(pull)) != 0)[0]
    if change.size and not high.any():
        text += f"; it changes at {percent(float(stroke[change[0] + 1]))} of the stroke"
    return text + "."


def reach(share: float, lost: Flags, women: Flags, where: float, cause: str) -> str:
    """Say who does not reach, where and why."""
    if share >= 1.0:
        return "Everyone drawn reaches the handle through the whole stroke from one stance."
    return f"{who(lost, women)} do not reach through the whole stroke; most are lost at {percent(where)} of it to {words(cause)}."


def force(share: float, lost: Flags, women: Flags, where: float, cause: str, demand_n: float) -> str:
    """Say who cannot give the force, where and what limits them."""
    if share >= 1.0:
        return "Everyone who reaches can give the needed force as often as the job repeats."
    if demand_n >= IMMOVABLE_N:
        return f"{who(lost, women)} reach, but no hand force moves the lever at {percent(where)} of the stroke: it is wedged."
    return (f"{who(lost, women)} reach but fall short of the needed force; most at {percent(where)} of the stroke"
            f" ({demand_n:.0f} N needed), held back by {words(cause)}.")  # fmt: skip


def posture(mean: float, where: float, cause: str, points: float) -> str:
    """Say which part of the body is held worst, and where."""
    if cause == "none":
        return "Upper arm, trunk, wrist and forearm stay in their good bands through the stroke."
    return f"Held worst at {percent(where)} of the stroke, where the {cause} decides ({points:.0f} of 100 points on average)."


def clearance(share: float, gap_m: float, zone: str, where: float, woman: bool, gap_min_m: float) -> str:
    """Say the smallest gap, to what, where, whose."""
    person = "a woman's" if woman else "a man's"
    inside = "overlaps it" if gap_m < 0.0 else f"comes within {gap_m * 1e3:.0f} mm of it"
    return (f"Nearest is {zone}: {person} hand or forearm {inside} at {percent(where)} of the stroke; {percent(share)} keep"
            f" {gap_min_m * 1e3:.0f} mm.")  # fmt: skip


def served(share: float, low: float, high: float, cause: str, where: float, lost: Flags, women: Flags) -> str:
    """Say how many are served, and what loses most of the others."""
    text = f"{percent(share)} meet every target at every position (95 % interval {percent(low)} to {percent(high)})"
    if cause == "none":
        return text + "."
    return text + f"; most of the others are lost at {percent(where)} of the stroke to {words(cause)} ({who(lost, women)})."


def verdict(title: str, short: list[str]) -> str:
    """Return the sentence that comes first: whether the lever is in the right place."""
    if not short:
        return f"The lever is in the right place for these people: {title} meets every target."
    listed = ", ".join(name.replace("_", "-") for name in short)
    return f"The lever falls short for these people: {title} misses its target for {listed}."


def cautions(memory_tables: list[str]) -> tuple[str, ...]:
    """Return what every output must say in plain words."""
    found = [
        "This is a screening calculation from population data. It is not a risk assessment and no substitute for"
        " guarding, for trials with real operators, or for local codes and licensed practice.",
        "Strengths are of healthy adults giving one steady effort; pain, injury, pregnancy, disability, cold, haste and"
        " poor floors are not in it.",
    ]
    if memory_tables:
        found.append(f"Numbers recalled and not checked against the print (status memory) take part, in {len(memory_tables)}"
                     " tables that are named with the sources. Check them before you rely on a close verdict.")  # fmt: skip
    return tuple(found)
