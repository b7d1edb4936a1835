"""Ratings on small made-up cases whose answer can be counted by hand."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.rating import ratings
from ergo.rating.posture_en_1005_4 import PostureBands, posture_en_1005_4

STROKE = np.linspace(0, 1, 5)
WOMEN = np.array([True, True, False, False])
NAMES = ("elbow", "reach")


def test_direction_counts_work_not_positions():
    pull = np.array([1.0, 1.0, 1.0, -1.0, -1.0])
    demand = np.array([10.0, 10.0, 10.0, 30.0, 0.0])
    r = ratings.direction(pull, demand, np.full(5, 0.1), STROKE, pull_share_min=0.8, pull_where_force_above_n=50)
    assert r.value == pytest.approx(50.0)  # 30 of 60 N steps are pulled
    assert not r.met
    assert r.worst_stroke in (0.75, 1.0)


def test_a_short_hard_push_fails_whatever_the_share():
    pull = np.array([1.0, 1.0, 1.0, 1.0, -1.0])
    demand = np.array([100.0, 100, 100, 100, 60])
    r = ratings.direction(pull, demand, np.full(5, 0.1), STROKE, pull_share_min=0.8, pull_where_force_above_n=50)
    assert r.value > 80
    assert not r.met
    assert r.worst_stroke == 1.0
    assert "pushes with up to 60 N" in r.reason


def test_a_stroke_straight_down_is_neither():
    r = ratings.direction(np.zeros(5), np.full(5, 90.0), np.full(5, 0.1), STROKE, pull_share_min=0.8, pull_where_force_above_n=50)
    assert r.met
    assert "neither a pull nor a push" in r.reason


def test_reach_counts_people_who_reach_everywhere():
    reached = np.ones((4, 5), bool)
    reached[0, 4] = False
    r = ratings.reach(reached, np.ones((4, 5), int), NAMES, WOMEN, STROKE, served_share=0.9)
    assert (r.value, r.met, r.worst_stroke, r.cause) == (75.0, False, 1.0, "reach")
    assert "50 % of the women" in r.reason


def test_force_counts_only_those_who_reach():
    reached = np.ones((4, 5), bool)
    reached[0] = False
    margin = np.full((4, 5), 2.0)
    margin[1, 2] = 0.5
    r = ratings.force(margin, reached, np.zeros((4, 5), int), NAMES, WOMEN, STROKE, np.full(5, 40.0), served_share=0.9, margin_min=1.0)
    assert r.value == pytest.approx(100 * 2 / 3)
    assert (r.worst_stroke, r.cause) == (0.5, "elbow")
    assert "40 N needed" in r.reason


def test_posture_bands_of_the_standard():
    bands = PostureBands.from_library(library(), strokes_per_minute=1.0)
    zero = np.zeros(4)
    points = posture_en_1005_4(np.deg2rad([10.0, 20.0, 60.0, 100.0]), np.zeros(4, bool), zero, zero, zero, bands)
    # EN 1005-4 (status memory): to 20 degrees acceptable, 20 to 60 conditionally, beyond not acceptable.
    assert points[:, 0] == pytest.approx([100.0, 100.0, 50.0, 0.0])
    frequent = PostureBands.from_library(library(), strokes_per_minute=2.0)
    points = posture_en_1005_4(np.deg2rad([60.0]), np.zeros(1, bool), zero[:1], zero[:1], zero[:1], frequent)
    assert points[0, 0] == 0.0


def test_clearance_without_zones_is_met_and_says_so():
    r = ratings.clearance(np.full((4, 5), np.inf), np.zeros((4, 5), int), (), np.ones(4, bool), WOMEN, STROKE,
                          served_share=0.9, gap_min_m=0.02)  # fmt: skip
    assert r.met
    assert "No zones" in r.reason


def test_clearance_names_the_zone_the_place_and_the_person():
    gap = np.full((4, 5), 0.2)
    gap[3, 1] = -0.01
    r = ratings.clearance(gap, np.zeros((4, 5), int), ("blade",), np.ones(4, bool), WOMEN, STROKE, served_share=0.9, gap_min_m=0.02)
    assert (r.value, r.met, r.cause, r.worst_stroke) == (75.0, False, "blade", 0.25)
    assert "a man's hand or forearm overlaps it" in r.reason


def test_served_names_what_loses_most():
    mask = np.array([True, False, False, False])
    r = ratings.served(mask, WOMEN, np.array([0.0, 0.5, 1.0, 1.0]), ("", "elbow", "grip", "grip"), served_share=0.9)
    assert (r.value, r.cause, r.worst_stroke) == (25.0, "grip", 1.0)
    assert r.low < 25.0 < r.high
