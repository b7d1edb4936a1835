"""Friction: guide and pin by hand, what is refused, the published bands."""

import numpy as np

from ergo.datasets import faults, library
from ergo.mechanism.drive import drive
from ergo.mechanism.friction import FRICTION_TABLE, PinAndGuide, bands, problems
from ergo.mechanism.handle_path import handle_path
from ergo.mechanism.lever import Grip, Lever
from ergo.mechanism.linkage import ConnectingLink, Rack

LEVER = Lever((0.0, 0.3, 0.9), "upright", 0.2, 0.2, 1.0)


def run(linkage, friction, load_n=600.0):
    path = handle_path(LEVER, Grip(), np.linspace(0.0, 1.0, 5))
    return drive(path, LEVER, linkage, lambda s: np.full(s.shape, load_n), friction)


def test_a_rack_pressed_sideways_by_its_teeth():
    # teeth at 20 degrees press with tan(20 deg) of the drive: drive = F / (1 - mu tan 20 deg)
    d = run(Rack(0.02, np.deg2rad(20.0)), PinAndGuide(slide_friction=0.2))
    drive_n = 600.0 / (1.0 - 0.2 * np.tan(np.deg2rad(20.0)))
    np.testing.assert_allclose(d.demand_n, drive_n * 0.02 / 0.2, rtol=1e-12)
    np.testing.assert_allclose(d.side_force_n, drive_n * np.tan(np.deg2rad(20.0)), rtol=1e-12)
    np.testing.assert_allclose(d.efficiency, 600.0 / drive_n, rtol=1e-12)


def test_overhang_counts_only_once_it_tilts_the_slide_more_than_the_side_force_presses_it():
    # 2 a / L below tan(20 deg) changes nothing, above it takes over
    rack = Rack(0.02, np.deg2rad(20.0))
    plain = run(rack, PinAndGuide(slide_friction=0.2))
    little = run(rack, PinAndGuide(slide_friction=0.2, slide_bearing_m=0.1, slide_overhang_m=0.01))
    much = run(rack, PinAndGuide(slide_friction=0.2, slide_bearing_m=0.1, slide_overhang_m=0.05))
    np.testing.assert_allclose(little.demand_n, plain.demand_n, rtol=1e-14)
    np.testing.assert_allclose(much.demand_n, 600.0 / (1.0 - 0.2) * 0.1, rtol=1e-12)


def test_a_steep_link_wedges_where_mu_times_the_links_slope_reaches_one():
    # link at angle g to the slide: side force tan(g) of the drive, so mu tan(g) = 1 is the end
    link = ConnectingLink(0.05, 0.06, 0.0, 0.0, 0.4)
    d = run(link, PinAndGuide(slide_friction=1.0))
    q = d.lever_rad + 0.4
    steep = np.abs(np.tan(np.arcsin(0.05 * np.sin(q) / 0.06))) >= 1.0
    assert steep.any()
    assert not steep.all()
    np.testing.assert_array_equal(d.wedged_at, steep)
    assert np.isinf(d.demand_n[steep]).all()
    assert np.isfinite(d.demand_n[~steep]).all()


def test_sizes_below_zero_and_a_missing_guide_length_are_problems():
    bad = PinAndGuide(-0.001, -0.1, np.nan, -0.01, 0.02)
    assert [p.where for p in problems(bad, LEVER)] == [
        "linkage.pin_radius_mm",
        "linkage.pin_friction",
        "linkage.slide_friction",
        "linkage.slide_bearing_mm",
        "linkage.slide_bearing_mm",
    ]
    assert problems(PinAndGuide(0.01, 0.2, 0.2, 0.05, 0.02), LEVER) == ()


def test_the_bands_enclose_their_values_and_state_where_they_come_from():
    rows = bands(library())
    assert faults(FRICTION_TABLE) == []
    for row in rows.values():
        assert 0.0 < row.low <= row.value <= row.high < 1.0
        # a value taken from the middle of a band that was read is derived, everything else recalled
        assert row.status == ("memory" if row.source == "common_practice" else "derived")
    assert rows["filled PTFE, dry"].low == 0.05
