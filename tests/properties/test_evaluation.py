"""Properties of whole evaluations: what must not depend on where the station stands, and what must grow."""

import numpy as np

import ergo
from ergo.evaluation.clearance import gaps
from ergo.evaluation.plan import plan
from ergo.evaluation.run import easiest_postures
from ergo.strength.hand_capability import hand_capability

SMALL = {"operators.count": 60, "study.positions": 5}


def smallest_gaps(study):
    made = plan(study, ergo.library())
    found = hand_capability(made.bench, made.task, made.scouts)
    return gaps(made, easiest_postures(made, found)).gap_m


def test_gaps_do_not_care_where_the_station_stands():
    """Lever, zone and standing room moved sideways together leave every gap as it was."""
    study = ergo.read_study("gasket_punch").with_values(SMALL)
    box = dict(study.content()["zones"][0])
    box["centre_mm"] = [box["centre_mm"][0] + 80.0, *box["centre_mm"][1:]]
    x, y, z = study.lever.pivot_mm
    moved = study.with_values(
        {"lever.pivot_mm": [x + 80.0, y, z], "operators.stand_x_mm": [-220.0, 380.0]}
    ).model_copy(update={"zones": (study.zones[0].model_copy(update={"centre_mm": tuple(box["centre_mm"])}),)})
    # Only rounding differs; where ease hardly changes with the posture it sends a few people another way.
    apart = np.abs(smallest_gaps(moved) - smallest_gaps(study))
    assert np.median(apart) < 1e-4
    assert np.mean(apart < 2e-3) > 0.8
    assert apart.max() < 0.03


def test_a_push_twin_is_never_safer_toward_the_machine_than_its_pull_twin():
    toward = {}
    for name in ("pull_twin", "push_twin"):
        details = ergo.evaluate(ergo.read_study(name).with_values({**SMALL, "study.positions": 11})).details["let_go"]
        toward[name] = details["toward_machine"]["step"] + details["toward_machine"]["thrown"]
    assert toward["push_twin"] >= toward["pull_twin"]


def test_more_load_never_serves_more():
    shares = []
    for force in (200.0, 420.0, 800.0):
        results = ergo.evaluate(ergo.read_study("gasket_punch").with_values({**SMALL, "load.force_n": force}))
        shares.append(results.ratings["force"].value)
    assert np.all(np.diff(shares) <= 1e-9)
