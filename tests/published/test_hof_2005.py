"""Hof, Gazendam and Sinke 2005: extrapolated centre of mass and margin of stability."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.letgo.body import Recovery, Surroundings, balance, extrapolated_com_m

LIB = library()
NOMINAL = Recovery.from_library(LIB, scenarios=1)


def test_extrapolated_centre_of_mass_in_round_numbers():
    # w0 = sqrt(9.80665 / 0.980665) = sqrt(10): 0.10 m at 0.5 m/s gives 0.10 + 0.5 / 3.16228
    assert extrapolated_com_m(0.10, 0.5, 0.980665) == pytest.approx(0.10 + 0.5 / np.sqrt(10.0), rel=1e-12)


def test_margin_of_stability_after_let_go_is_the_closed_form():
    # y = p + d cosh(w t), y' = d w sinh(w t), so X = p + d exp(w t) and b = front - X
    around, height, latency = Surroundings(back_m=-0.03, front_m=0.16), 0.9, NOMINAL.latency_s[0]
    weight, pressure, force = 70.0 * 9.80665, 0.05, 45.0
    offset = force * 1.05 / weight
    found = balance([[pressure + offset]], height, 70.0, 30.0, 0.4, 1.05, force, 0.0, around, NOMINAL)
    pendulum = height * NOMINAL.pendulum_factor[0]
    rate = np.sqrt(9.80665 / pendulum)
    y = pressure + offset * np.cosh(rate * latency)
    speed = offset * rate * np.sinh(rate * latency)
    margin = 0.16 - extrapolated_com_m(y, speed, pendulum)
    assert found.margin_m[0, 0, 0] == pytest.approx(margin, rel=1e-12)
    assert margin < 0.095  # nearer to the front than to the back


@pytest.mark.parametrize("inside", [True, False])
def test_a_pressure_point_at_the_end_of_the_base_stops_the_body_only_inside_the_margin(inside):
    # Hof's condition itself: with the pressure at the front from X on, y settles short of it if X lies inside
    front, rate, off = 0.16, 3.2, -0.002 if inside else 0.002
    y0 = 0.10
    v0 = (front + off - y0) * rate
    t = np.linspace(0.0, 3.0, 400)
    y = front + (y0 - front) * np.cosh(rate * t) + v0 / rate * np.sinh(rate * t)
    assert (y.max() < front) == inside
    assert extrapolated_com_m(y0, v0, 9.80665 / rate**2) < front if inside else y[-1] > front


def test_the_pendulum_row_follows_from_hofs_leg_length():
    # 1.24 x leg length (0.53 of stature) over the height of the centre of mass (0.56 of stature), two figures
    row = LIB.parameters("letgo_body")["pendulum_over_com_height"]
    assert row.value == pytest.approx(1.24 * 0.53 / 0.56, abs=0.006)
    assert row.high >= 4.0 / 3.0  # a uniform rod about its end: (1/3) L^2 over (1/2 L)^2
