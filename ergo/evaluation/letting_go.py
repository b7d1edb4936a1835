"""What happens when the load lets go, joined from hand, body and zones."""

from collections.abc import Mapping
from dataclasses import dataclass, field
from typing import Any

import numpy as np
from numpy.typing import NDArray

from ergo.arm import kernels as k
from ergo.arm.inertia import guided_hand_mass_along
from ergo.arm.posture import Posture
from ergo.arm.segments import Segments
from ergo.evaluation.clearance import Gaps
from ergo.evaluation.feeling import feel_row, screw_sentence
from ergo.evaluation.plan import Plan
from ergo.letgo import body, contact, hand
from ergo.letgo.feel import Touch
from ergo.rating.ratings import Rating, let_go
from ergo.rating.reasons import percent
from ergo.strength.hand_capability import HandCapability

Array = NDArray[np.float64]
TABLES = ("letgo_hand", "letgo_body", "letgo_feel", "body_contact_iso_ts_15066_2016")


@dataclass(frozen=True)
class Release:
    """Let-go at every position, and at the one where it is judged.

    overrun_mm : (P, 3) P5, P50, P95. balance : (P, 3) shares kept, one step, thrown. safe : (n,) whether a person
    keeps the footing, without a step toward the machine, and meets nothing that hurts.
    """

    rating: Rating
    safe: NDArray[np.bool_]
    at_stroke: float
    overrun_mm: Array
    toward: tuple[str, ...]
    balance: Array
    feel_n: Array
    details: Mapping[str, Any]
    tables: tuple[str, ...]
    not_covered: Mapping[str, str] = field(default_factory=dict)


def release(made: Plan, capability: HandCapability, posture: Posture, gap: Gaps) -> Release:
    """Return what a let-go does to hand and body, at every position and at the one where the load lets go.

    A load that is not said to let go is followed all the same, at its hardest position, but held against nobody.
    """
    run = hand_run(made, capability, posture, gap)
    stands = body_balance(made, capability, posture)
    asked = made.machine.lets_go_stroke
    demand = np.where(np.isfinite(made.machine.drive.demand_n), made.task.demand_n, 0.0)
    at = int(np.argmax(demand)) if asked is None else _last_before(made.machine.drive.stroke, asked)
    within = harmless(made, run)
    fine = (within & steady(stands))[:, at, :]
    safe = fine[:, 0] if asked is not None else np.ones(fine.shape[0], dtype=bool)
    hurt = float(np.mean(~within[:, at, 0]))
    details = _details(made, run, stands, at, asked, hurt)
    rating = let_go(
        fine[:, 0], np.logical_and.reduce(fine, axis=1), np.logical_or.reduce(fine, axis=1), made.people.women,
        float(made.machine.drive.stroke[at]), _cause(fine[:, 0], within[:, at, 0]), details["sentences"][0],
        served_share=made.study.targets.served_share, counts=asked is not None,
    )  # fmt: skip
    felt = feel_row(made, Touch.from_library(made.library))
    shares = stands.shares()
    return Release(
        rating=rating,
        safe=safe,
        at_stroke=float(made.machine.drive.stroke[at]),
        overrun_mm=run.band(run.overrun_m).T * 1e3,
        toward=hand.heading(made.machine.drive.work_dir),
        balance=np.stack([shares[name] for name in ("kept", "step", "thrown")], axis=1),
        feel_n=felt.newtons,
        details={**details, "screw": screw_sentence(made), "feel": felt.sentence},
        tables=TABLES,
        not_covered={"feel_n": felt.reason} if felt.reason else {},
    )


def _last_before(stroke: Array, asked: float) -> int:
    """Return the last position at or before a stroke, where the load is still there."""
    return int(np.nonzero(stroke <= asked + 1e-9)[0][-1])


def hand_run(made: Plan, capability: HandCapability, posture: Posture, gap: Gaps) -> hand.HandRun:
    """Return how the hand runs on from every position."""
    drive, people = made.machine.drive, made.people
    masses = Segments.from_library(made.library).arm(
        people.women, people.mass_kg, people.forearm_grip_m, people.wrist_grip_m
    )
    grip = np.broadcast_to(drive.grip_m, posture.elbow.shape)
    arm = guided_hand_mass_along(
        posture.shoulder, posture.elbow, grip, drive.work_dir, masses,
        shoulder_mass_kg=hand.shoulder_mass_kg(people.mass_kg, made.library),
    )  # fmt: skip
    lever = made.machine.lever
    spring = 0.0 if lever is None else lever.return_spring_nm_per_rad / lever.length_m**2
    return hand.run_on(
        np.maximum(made.task.demand_n, 0.0),
        np.where(capability.reached, arm, np.nan),
        hand.Muscle.from_library(made.library),
        fixed_mass_kg=drive.hand_mass_kg + hand.tool_mass_at_hand_kg(made.machine.tool_mass_kg, drive.ratio),
        remaining_n=hand.remaining_n(np.maximum(made.task.demand_n, 0.0), drive.weight_n),
        remaining_n_per_m=spring,
        end_m=drive.hand_travel_m[-1] - drive.hand_travel_m,
        zone_m=_way_to_zone(made, gap),
        body_m=_way_to_body(made, posture),
    )


def body_balance(made: Plan, capability: HandCapability, posture: Posture) -> body.Balance:
    """Return what the body does after let-go from every position."""
    ops, scene, drive, place = made.bench.ops, made.bench.scene, made.machine.drive, made.place
    seated = place.support.seated
    arm = (ops[:, k.UPPER_MASS] + ops[:, k.FOREARM_MASS] + ops[:, k.HAND_MASS]) / ops[:, k.MASS]
    reach = drive.grip_m[:, 1] - posture.shoulder[..., 1]
    com_y = posture.ankle[..., 1] + posture.com_y_m + 0.5 * arm[:, None] * reach
    height = ops[:, [k.COM_TRUNK]] * np.cos(posture.trunk)
    height = height + (made.people.hip_above_seat_m[:, None] if seated else ops[:, [k.COM_LEG]] * np.cos(posture.lean))
    stand = posture.ankle[:, 0, 1]
    front_of_body = posture.hip[..., 1] + ops[:, [k.BODY_FRONT]]
    toe = stand + ops[:, k.TOE_AHEAD]
    touching = front_of_body > -0.03
    around = body.Surroundings(
        back_m=stand + ops[:, k.BACK_Y],
        front_m=stand + ops[:, k.FRONT_Y],
        can_step=not seated,
        room_ahead_m=np.maximum(place.toe_space_m - toe, 0.0),
        held_ahead=touching & (place.brace == "bench edge"),
        held_behind=place.brace == "seat back",
        bench_gap_m=np.maximum(-front_of_body, 0.0) if not seated else np.inf,
    )
    force = np.maximum(made.task.demand_n, 0.0)[:, None] * drive.work_dir
    return body.balance(
        np.where(capability.reached, com_y, np.nan), height, made.people.mass_kg, made.people.age_years,
        drive.grip_m[:, 1], drive.grip_m[:, 2] - scene[k.SEAT_Z], force[:, 1], force[:, 2], around,
        body.Recovery.from_library(made.library),
    )  # fmt: skip


def steady(stands: body.Balance) -> NDArray[np.bool_]:
    """Return where the footing is kept, or regained by a step away from the machine (n, P, S)."""
    return (stands.outcome == body.KEPT) | ((stands.outcome == body.STEP) & ~stands.toward)


def harmless(made: Plan, run: hand.HandRun) -> NDArray[np.bool_]:
    """Return where the hand meets no hazard, nor its own body harder than the published limits (n, P, S).

    The end of travel stops the handle, not the hand that holds it: its jolt is told, and counts against nobody.
    """
    chest = contact.Region.from_library(made.library, "chest")
    bumped = contact.strike(chest, run.speed_m_s, run.moving_mass_kg, run.press_n)
    at_body = (run.met == hand.OWN_BODY) & bumped.within
    return (run.met == hand.NOTHING) | (run.met == hand.END_OF_TRAVEL) | at_body


def jolt_sentence(made: Plan, run: hand.HandRun, at: int) -> str:
    """Say how hard the hand is jolted where the handle meets the end of its travel, empty where it does not."""
    stopped = run.met[:, at, :] == hand.END_OF_TRAVEL
    if not stopped.any():
        return ""
    fist = contact.Region.from_library(made.library, "hand_fingers")
    blow = contact.strike(fist, run.speed_m_s[:, at], run.moving_mass_kg[:, at], run.press_n[:, at], region_is_held=True)
    peak, energy = np.median(blow.peak_n[stopped]), np.median(blow.energy_j[stopped])
    return (f"Where the handle meets its stop the jolt is about {peak:.0f} N and {energy:.1f} J in the middle (limit for a blow"
            f" to the hand {fist.transient_n:.0f} N, status {fist.status}); a soft stop lowers it.")  # fmt: skip


def _way_to_zone(made: Plan, gap: Gaps) -> Array:
    """Return the way (n, P) [m] along the path to the first position at which hand or forearm meets a hazard."""
    hazard = np.array([zone.role == "hazard" for zone in made.machine.zones] or [False])
    inside = (gap.gap_m <= 0.0) & hazard[gap.zone]
    travel = made.machine.drive.hand_travel_m
    way = np.full(gap.gap_m.shape, np.inf)
    ahead = np.full(gap.gap_m.shape[0], np.inf)
    for p in range(travel.size - 1, -1, -1):
        ahead = np.where(inside[:, p], travel[p], ahead)
        way[:, p] = ahead - travel[p]
    return way


def _way_to_body(made: Plan, posture: Posture) -> Array:
    """Return the way (n, P) [m] straight along the work direction to the front of the operator's own trunk or face."""
    ops, drive = made.bench.ops, made.machine.drive
    rise = drive.grip_m[:, 2] - posture.hip[..., 2]
    front = posture.hip[..., 1] + rise * np.tan(posture.trunk) + ops[:, [k.BODY_FRONT]]
    pull = -drive.work_dir[:, 1]
    beside = np.abs(drive.grip_m[:, 0] - posture.hip[..., 0]) > ops[:, [k.CHEST_HALF]]
    tall = made.library.values("stance_parameters")["head_above_shoulder_mm"] * 1.5e-3
    past = (rise < 0.0) | (drive.grip_m[:, 2] > posture.shoulder[..., 2] + tall)
    way = (drive.grip_m[:, 1] - front) / np.where(pull > 0.05, pull, 1.0)
    return np.where((pull > 0.05) & ~beside & ~past, np.maximum(way, 0.0), np.inf)


def _cause(fine: NDArray[np.bool_], within: NDArray[np.bool_]) -> str:
    if fine.all():
        return "none"
    return "hand meets something" if (~within).mean() > (within & ~fine).mean() else "balance"


def _details(made: Plan, run: hand.HandRun, stands: body.Balance, at: int, asked: float | None,
             hurt: float) -> dict[str, Any]:  # fmt: skip
    """Return the figures of the judged position, and sentences in plain words."""
    low, middle, high = run.band(run.overrun_m)[:, at] * 1e3
    if not np.isfinite(middle):
        return {"sentences": ["Let-go is not covered: nobody holds the handle there, or no hand force moves it."],
                "asked": asked is not None, "at_stroke": float(made.machine.drive.stroke[at])}  # fmt: skip
    speed = run.band(run.peak_speed_m_s)[1, at]
    shares, toward = {n: float(v[at]) for n, v in stands.shares().items()}, stands.shares_toward()
    met = {name: float(v[at]) for name, v in run.met_shares().items()}
    where = percent(float(made.machine.drive.stroke[at]))
    heading = hand.heading(made.machine.drive.work_dir[at : at + 1])[0]
    first = f"When the load lets go at {where} of the stroke" if asked is not None else (
        f"The load is not said to let go; if it did at its hardest place, {where} of the stroke,")
    unkept = shares["step"] + shares["thrown"]
    way = "toward the machine" if toward["step"][at] + toward["thrown"][at] > 0.5 * unkept else "away from the machine"
    body_says = (f"{percent(shares['kept'])} keep their footing, {percent(shares['step'])} need a step and"
                 f" {percent(shares['thrown'])} are thrown")  # fmt: skip
    sentences = [
        f"{first}{'' if asked is None else ','} the hand runs on {middle:.0f} mm {heading} (P5 {low:.0f}, P95 {high:.0f} mm);"
        f" {body_says}{', mostly ' + way if unkept > 0.005 else ''}; {percent(hurt)} of the hands meet a hazard, or their"
        " own body harder than the contact limits.",
        "What the hand meets first: " + ", ".join(f"{name} {percent(v)}" for name, v in met.items() if v > 0.0) + ".",
        f"Peak speed of the hand is {speed:.1f} m/s (middle of people and parameter ranges). Contact limits are those of"
        " ISO/TS 15066, for want of limits for levers.",
    ]
    sentences = [s for s in (*sentences[:2], jolt_sentence(made, run, at), sentences[2]) if s]
    return {"sentences": sentences, "overrun_mm": [low, middle, high], "peak_speed_m_s": float(speed), "balance": shares,
            "toward_machine": {n: float(v[at]) for n, v in toward.items()}, "met": met, "at_stroke":
            float(made.machine.drive.stroke[at]), "asked": asked is not None, "heading": heading}  # fmt: skip
