"""Potvin 2012: acceptable share of strength at a duty cycle (values as in the reference notes, formula memory)."""

import pytest

from ergo.datasets import library
from ergo.strength.endurance import frey_law_avin_2010_s, holding_share, rohmert_1960_s
from ergo.strength.potvin_2012 import potvin_2012
from ergo.strength.repetition import repetition


@pytest.mark.parametrize(("duty", "share"), [(0.01, 0.67), (0.05, 0.51), (0.10, 0.43), (0.25, 0.28), (0.50, 0.15)])
def test_tabled_shares(duty, share):
    # printed to two places
    assert potvin_2012(duty, library())[0] == pytest.approx(share, abs=0.006)


def test_beyond_all_the_time_there_is_is_said():
    share, reason = potvin_2012(1.2, library())
    assert share == 0.0
    assert "1.20 times the time there is" in reason


def test_rohmert_worked_values():
    # 390 s at 20 %, 66 s at 50 % of strength (reference notes, section 9)
    assert rohmert_1960_s(0.2, library()) == pytest.approx(390, abs=1)
    assert rohmert_1960_s(0.5, library()) == pytest.approx(66, abs=1)
    assert rohmert_1960_s(0.1, library()) != rohmert_1960_s(0.1, library())  # not covered below 0.15: not a number


def test_holding_turns_the_curves_round():
    share, curve = holding_share(60.0, library())
    joint = curve.rsplit(", ", 1)[-1]
    seconds = rohmert_1960_s(share, library()) if curve.startswith("Rohmert") else frey_law_avin_2010_s(share, joint, library())
    assert seconds == pytest.approx(60.0, rel=0.01)


def test_the_smaller_share_governs():
    often = repetition(strokes_per_minute=10, stroke_s=3, hold_s=0, hours_per_shift=2, library=library())
    held = repetition(strokes_per_minute=0.05, stroke_s=1, hold_s=200, hours_per_shift=2, library=library())
    assert often.governs == "Potvin 2012"
    assert held.governs != "Potvin 2012"
    assert held.share < 0.4
