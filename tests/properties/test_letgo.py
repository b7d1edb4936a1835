"""Properties of hand and body after let-go over random cases."""

import dataclasses

import numpy as np
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import simpson

from ergo.datasets import library
from ergo.frames import GRAVITY_M_S2
from ergo.letgo import body, hand

LIB = library()
MUSCLE = hand.Muscle.from_library(LIB, scenarios=4)
# A limb whose stiffness does not go with force: there, and only there, overrun must grow with force.
PASSIVE = dataclasses.replace(
    MUSCLE, stiffness_per_m=np.zeros(4), relaxed_n_per_m=np.array([50.0, 200.0, 400.0, 900.0])
)
BARE = dataclasses.replace(PASSIVE, relaxed_n_per_m=np.zeros(4))
RECOVERY = body.Recovery.from_library(LIB, scenarios=6)
EPS = 1e-9


def between(low, high):
    return st.floats(low, high, allow_nan=False)


FORCE, KILOS = between(5.0, 400.0), between(0.5, 20.0)


def run(force, mass, muscle=MUSCLE, **more):
    return hand.run_on([force], np.full((1, 1), mass), muscle, **more)


@given(FORCE, KILOS, between(0.0, 0.5), st.integers(0, 3))
def test_energy_balance_through_let_go(force, mass, left_share, s):
    """Work of the muscle = kinetic energy + what springs store + what damping and resistance take."""
    k, b = MUSCLE.stiffness_n_per_m(force)[s], MUSCLE.damping_ns_per_m(force)[s]
    latency, relaxation, left = MUSCLE.latency_s[s], MUSCLE.relaxation_s[s], left_share * force
    gained = taken = 0.0
    for start, end in ((0.0, latency), (latency, latency + 0.15)):  # Simpson's rule wants no kink inside
        t = np.linspace(start, end, 4001)
        x, v, drive = hand.motion(t, force, mass, k, b, latency, relaxation, left)
        gained += simpson(drive * v, x=t)
        taken += simpson(b * v**2 + left * v, x=t)
    stored = 0.5 * mass * v[-1] ** 2 + 0.5 * k * x[-1] ** 2
    scale = force * np.abs(x).max() + EPS
    assert abs(gained - taken - stored) <= 1e-6 * scale


@given(FORCE, KILOS, between(0.001, 0.3))
def test_energy_at_an_obstacle_is_never_more_than_the_muscles_work(force, mass, way):
    found = run(force, mass, zone_m=way)
    assert np.all(found.energy_j <= force * found.overrun_m * (1 + EPS))
    assert np.all(found.overrun_m <= way)


@given(FORCE, between(1.01, 5.0), KILOS, between(0.0, 0.9))
def test_overrun_grows_with_force_where_stiffness_does_not(force, more, mass, left_share):
    left = left_share * force
    less, much = run(force, mass, PASSIVE, remaining_n=left), run(more * force, mass, PASSIVE, remaining_n=left)
    assert np.all(much.overrun_m >= less.overrun_m * (1 - EPS))
    assert np.all(much.peak_speed_m_s >= less.peak_speed_m_s * (1 - EPS))


@given(FORCE, between(1.0, 4.0), KILOS)
def test_overrun_is_in_proportion_to_force_where_nothing_else_resists(force, more, mass):
    assert np.allclose(
        run(more * force, mass, PASSIVE).overrun_m, more * run(force, mass, PASSIVE).overrun_m, rtol=1e-9
    )


@given(FORCE, KILOS, between(1.0, 10.0))
def test_overrun_in_a_given_time_falls_with_mass_where_nothing_stops_it(force, mass, more):
    assert np.allclose(run(force, mass, BARE).overrun_m / more, run(force, mass * more, BARE).overrun_m, rtol=1e-9)


@given(FORCE, KILOS, between(1.0, 10.0))
def test_peak_speed_falls_with_mass(force, mass, more):
    assert np.all(run(force, mass * more).peak_speed_m_s <= run(force, mass).peak_speed_m_s * (1 + EPS))


@given(FORCE, KILOS, between(0.0, 1.5), between(0.0, 500.0))
def test_what_is_left_of_the_load_never_lengthens_the_run(force, mass, left_share, rate):
    free = run(force, mass)
    slowed = run(force, mass, remaining_n=left_share * force, remaining_n_per_m=rate)
    assert np.all(slowed.overrun_m <= free.overrun_m * (1 + EPS))


@given(FORCE, KILOS, between(0.001, 0.2), between(0.001, 0.2), between(0.001, 0.2))
def test_the_nearest_of_three_is_met_or_nothing(force, mass, end, zone, own):
    found = run(force, mass, end_m=end, zone_m=zone, body_m=own)
    nearest = min(end, zone, own)
    codes = {end: hand.END_OF_TRAVEL, zone: hand.ZONE, own: hand.OWN_BODY}
    met = found.met != hand.NOTHING
    if len(codes) == 3:
        assert np.all(found.met[met] == codes[nearest])
    assert np.all(found.overrun_m[~met] <= nearest)


@st.composite
def scenes(draw):
    return {
        "mass": draw(between(45.0, 120.0)),
        "height": draw(between(0.8, 1.05)),
        "hand_height": draw(between(0.7, 1.5)),
        "pressure": draw(between(-0.02, 0.14)),
        "around": body.Surroundings(
            back_m=-0.03,
            front_m=0.15,
            can_step=draw(st.booleans()),
            room_ahead_m=draw(between(0.0, 1.0)),
            room_behind_m=draw(between(0.0, 1.0)),
        ),
    }


def fall(scene, force, shift=0.0, up=0.0):
    weight = scene["mass"] * GRAVITY_M_S2
    com = scene["pressure"] + force * scene["hand_height"] / weight
    around = dataclasses.replace(scene["around"], back_m=-0.03 + shift, front_m=0.15 + shift)
    return body.balance(
        [[com + shift]], scene["height"], scene["mass"], 40.0, 0.45 + shift, scene["hand_height"], force, up, around,
        RECOVERY,
    )  # fmt: skip


@given(scenes(), between(1.0, 300.0))
def test_a_push_twin_is_never_safer_toward_the_machine_than_its_mirrored_pull_twin(scene, force):
    push, pull = fall(scene, force), fall(scene, -force)
    assert np.all(push.extrapolated_m >= pull.extrapolated_m)
    for name in ("step", "thrown"):
        assert np.all(push.shares_toward()[name] >= pull.shares_toward()[name])
    assert np.all(pull.shares_toward()["thrown"] == 0.0)


@given(scenes(), between(1.0, 300.0), between(1.0, 3.0))
def test_a_larger_push_never_gives_a_better_outcome(scene, force, more):
    assert np.all(fall(scene, more * force).outcome >= fall(scene, force).outcome)


@given(scenes(), between(-200.0, 200.0), between(-2.0, 2.0), between(-50.0, 50.0))
def test_moving_everything_along_y_together_changes_nothing(scene, force, shift, up):
    here, there = fall(scene, force, up=up), fall(scene, force, shift, up)
    assert np.allclose(there.extrapolated_m - shift, here.extrapolated_m, atol=1e-9, equal_nan=True)
    assert np.allclose(there.margin_m, here.margin_m, atol=1e-9, equal_nan=True)
