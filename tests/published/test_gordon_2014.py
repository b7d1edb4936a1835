"""The 2012 US army survey (Gordon et al. 2014): published summary, the records, and a withheld half of them.

Expected values are those of an independent summary of the public records (mean, SD, percentiles, correlations,
linear regressions), and of the report itself where a test says so; none comes from this package.
"""

import csv
import gzip
import io

import numpy as np
import pytest

from ergo.datasets import library
from ergo.people import surveys
from ergo.people.dimensions import BODY_TABLE, DIMENSIONS, FOLLOWING, SURVEY_COLUMNS, THUMB
from ergo.people.operators import draw
from ergo.people.percentiles import percentiles
from ergo.people.populations import read_population
from ergo.people.sampling import draw_sizes
from ergo.sources import folder

LIBRARY = library()
PLACE = folder("datasets") / "us_army_2012"
PACKED = (PLACE / "records.csv.gz").read_bytes()
RECORDS = surveys.read_records(PACKED, LIBRARY.values(BODY_TABLE)[THUMB])
FITS = {sex: surveys.fit(RECORDS, sex) for sex in surveys.SEXES}
MARKS = ("p01", "p05", "p50", "p95", "p99")
SEX = {"men": "male", "women": "female"}
# P1, P5, P50, P95, P99, mm and kg. The last four dimensions follow from measured ones.
SUMMARY = {
    ("men", "stature_mm"): (1601.6, 1648.0, 1755.0, 1870.0, 1927.0),
    ("women", "stature_mm"): (1482.6, 1525.0, 1626.0, 1740.0, 1777.6),
    ("men", "body_mass_kg"): (57.8, 64.4, 84.6, 110.7, 124.2),
    ("women", "body_mass_kg"): (46.7, 51.3, 66.8, 87.1, 97.5),
    ("men", "acromion_height_mm"): (1296.8, 1339.0, 1439.0, 1546.0, 1596.2),
    ("women", "acromion_height_mm"): (1201.8, 1242.0, 1332.0, 1433.8, 1473.0),
    ("men", "acromion_radiale_length_mm"): (296.0, 307.0, 335.0, 365.0, 377.0),
    ("women", "acromion_radiale_length_mm"): (271.0, 283.2, 311.0, 340.0, 352.3),
    ("men", "elbow_grip_length_mm"): (310.0, 320.0, 348.5, 379.0, 395.0),
    ("women", "elbow_grip_length_mm"): (279.0, 290.0, 316.0, 350.0, 363.2),
    ("men", "thumb_tip_reach_mm"): (716.0, 742.0, 811.0, 886.0, 922.2),
    ("women", "thumb_tip_reach_mm"): (651.0, 674.2, 742.0, 816.0, 852.0),
    ("men", "biacromial_breadth_mm"): (371.0, 384.0, 415.0, 447.0, 463.0),
    ("women", "biacromial_breadth_mm"): (322.0, 335.0, 365.0, 396.0, 406.0),
    ("men", "hand_breadth_mm"): (78.0, 81.0, 88.0, 96.0, 99.0),
    ("women", "hand_breadth_mm"): (69.8, 72.0, 78.0, 85.0, 87.0),
    ("men", "shoulder_height_seated_mm"): (530.8, 552.0, 603.0, 653.0, 676.0),
    ("women", "shoulder_height_seated_mm"): (500.8, 515.2, 564.0, 609.0, 628.2),
    ("men", "elbow_height_standing_mm"): (991.0, 1025.0, 1104.0, 1190.0, 1228.2),
    ("women", "elbow_height_standing_mm"): (921.8, 951.0, 1022.0, 1100.0, 1132.2),
    ("men", "eye_height_mm"): (1492.0, 1536.0, 1640.0, 1753.0, 1809.0),
    ("women", "eye_height_mm"): (1378.8, 1421.2, 1517.0, 1626.0, 1660.0),
    ("men", "forward_grip_reach_mm"): (680.2, 705.0, 772.6, 846.4, 881.7),
    ("women", "forward_grip_reach_mm"): (617.2, 640.4, 705.0, 778.2, 811.0),
}


def test_the_reports_own_means():
    # NATICK/TR-15/007: statures 1756.2 (SD 68.6) and 1628.5 (64.2) mm, masses 85.5 and 67.8 kg, printed to 0.1.
    for sex, stature, sd, mass in (("male", 1756.2, 68.6, 85.5), ("female", 1628.5, 64.2, 67.8)):
        chosen = RECORDS.sex == sex
        assert RECORDS.sizes["stature"][chosen].mean() == pytest.approx(stature, abs=0.051)
        assert RECORDS.sizes["stature"][chosen].std(ddof=1) == pytest.approx(sd, abs=0.051)
        assert RECORDS.sizes["body_mass"][chosen].mean() == pytest.approx(mass, abs=0.051)
    assert (RECORDS.sex == "male").sum() == 4082
    assert (RECORDS.sex == "female").sum() == 1986


@pytest.mark.parametrize(("sex", "name"), SUMMARY)
def test_percentiles_of_the_records(sex, name):
    got = percentiles(LIBRARY, "us_army_2012")[sex][name]
    # A sample's quantile has a standard error of 3.73 (P1, P99), 2.11 (P5, P95) or 1.25 (P50) SD / sqrt(n): two of
    # them, and 0.5 % for the skew that a logarithm leaves (the independent summary found 5.9 mm for statures).
    share = 0.16 if name == "body_mass_kg" else 0.05  # SD over mean, at most
    people = 4082 if sex == "men" else 1986
    for mark, expected, of_quantile in zip(MARKS, SUMMARY[sex, name], (3.73, 2.11, 1.25, 2.11, 3.73), strict=True):
        allowed = 2.0 * of_quantile * share / np.sqrt(people) + 0.005
        assert got[mark] == pytest.approx(expected, rel=allowed), (sex, name, mark)


def test_shipped_figures_are_what_the_records_give():
    assert [dict(r) for r in LIBRARY.table("us_army_2012").rows] == surveys.moments_rows(RECORDS, FITS)
    for row, again in zip(LIBRARY.table("body_regression").rows, surveys.regression_rows(FITS), strict=True):
        # The grip reach holds a recalled share of the hand's length: its row is memory, not computed.
        expected = {**again, "status": "memory"} if again["dimension"] == "forward_grip_reach" else again
        assert dict(row) == expected
    army = LIBRARY.table("mass_on_stature").where(basis="us_army_2012").rows
    for row, again in zip(army, surveys.mass_rows(FITS, "us_army_2012"), strict=True):
        assert {key: row[key] for key in again} == again
    with (PLACE / "log_correlation.csv").open(encoding="utf-8", newline="") as lines:
        assert list(csv.DictReader(lines)) == surveys.correlation_rows(FITS)


@pytest.mark.parametrize("sex", surveys.SEXES)
def test_a_fit_on_one_half_tells_the_other_half(sex):
    half = np.random.default_rng(7).random(RECORDS.sex.size) < 0.5
    body = surveys.fit(RECORDS, sex, half)
    withheld = (RECORDS.sex == sex) & ~half
    for name in ("stature", "body_mass", "acromion_height", "elbow_height", "shoulder_height_sitting",
                 "acromion_radiale_length", "elbow_grip_length", "forward_grip_reach"):  # fmt: skip
        n = DIMENSIONS.index(name)
        count = int(withheld.sum())
        for mark, z, of_quantile in ((5, -1.6449, 2.11), (50, 0.0, 1.25), (95, 1.6449, 2.11)):
            told = np.exp(body.mean[n] + body.sd[n] * z)
            # A sample's quantile has a standard error of 2.11 (P5, P95) or 1.25 (P50) SD / sqrt(n), and the half's own
            # mean 1; three of both together, and 0.5 % for the skew that a logarithm leaves.
            allowed = 3.0 * body.sd[n] * np.hypot(of_quantile, 1.0) / np.sqrt(count) + 0.005
            assert told == pytest.approx(np.percentile(RECORDS.sizes[name][withheld], mark), rel=allowed), (name, mark)


def test_regressions_against_linear_ones_of_the_same_records():
    # Linear regressions on stature and mass of the independent summary: acromion height, acromion-radiale, elbow-grip.
    linear = {
        ("male", "acromion_height"): (-91.8, 0.85261, 0.4113),
        ("female", "acromion_height"): (-74.16, 0.85371, 0.2805),
        ("male", "acromion_radiale_length"): (-14.56, 0.19553, 0.0749),
        ("female", "acromion_radiale_length"): (-18.53, 0.19451, 0.1915),
        ("male", "elbow_grip_length"): (17.17, 0.18064, 0.1708),
        ("female", "elbow_grip_length"): (7.17, 0.18011, 0.2544),
    }
    for (sex, name), (a, b, c) in linear.items():
        n = FOLLOWING.index(name)
        body = FITS[sex]
        for stature, mass in ((1550.0, 62.0), (1650.0, 72.0), (1750.0, 82.0)):
            told = np.exp(body.intercept[n] + body.slopes[n] @ np.log([stature, mass]))
            # Straight and power lines through the same cloud part by under 0.5 % inside its middle.
            assert told == pytest.approx(a + b * stature + c * mass, rel=0.005), (sex, name, stature)


def test_residual_spread_against_the_linear_regressions():
    # Residual SD, mm, of the same linear regressions: 15.32 and 13.41; 10.56 and 10.31; 11.71 and 12.21.
    expected = {"acromion_height": (15.32, 13.41), "acromion_radiale_length": (10.56, 10.31), "elbow_grip_length": (11.71, 12.21)}
    for name, by_sex in expected.items():
        for sex, sd in zip(("male", "female"), by_sex, strict=True):
            got = FITS[sex].residual_sd[FOLLOWING.index(name)] * np.exp(FITS[sex].mean[DIMENSIONS.index(name)])
            assert got == pytest.approx(sd, rel=0.04)  # logarithms against millimetres


def test_correlations_of_drawn_people():
    # Plain correlations of the independent summary (men, women); those of logarithms differ by less than 0.01.
    expected = {
        ("stature", "acromion_height"): (0.9669, 0.9720),
        ("stature", "body_mass"): (0.4689, 0.5335),
        ("acromion_height", "acromion_radiale_length"): (0.8140, 0.8111),
        ("acromion_radiale_length", "elbow_grip_length"): (0.7400, 0.7285),
        ("elbow_rest_height", "sitting_height"): (0.5677, 0.5701),
        ("body_mass", "waist_depth"): (0.8375, 0.7881),
        ("thumb_tip_reach", "hand_length"): (0.6353, 0.6344),
        ("biacromial_breadth", "stature"): (0.5317, 0.5656),
    }
    people = read_population(LIBRARY, "us_army_2012")
    z = np.random.default_rng(1).standard_normal((40_000, len(DIMENSIONS)))
    drawn = [draw_sizes(model, z) for model in (people.men, people.women)]
    for (first, second), pair in expected.items():
        for sizes, r in zip(drawn, pair, strict=True):
            got = np.corrcoef(sizes[first], sizes[second])[0, 1]
            assert got == pytest.approx(r, abs=0.02), (first, second)


@pytest.mark.parametrize("sex", ["men", "women"])
def test_drawn_people_have_the_shipped_log_correlations(sex):
    people = read_population(LIBRARY, "us_army_2012")
    z = np.random.default_rng(2).standard_normal((40_000, len(DIMENSIONS)))
    sizes = draw_sizes(getattr(people, sex), z)
    got = np.corrcoef(np.log([sizes[name] for name in SURVEY_COLUMNS]))
    shipped = FITS[SEX[sex]].log_correlation[: len(SURVEY_COLUMNS), : len(SURVEY_COLUMNS)]
    # Standard error of a correlation of 40,000 pairs: at most 0.005; the largest of 351 may be four of them.
    assert np.abs(got - shipped).max() < 0.02


@pytest.mark.parametrize(("women", "records", "summary_model"), [(False, 0.687, 0.669), (True, 0.676, 0.670)])
def test_the_share_inside_five_dimensions_at_once(women, records, summary_model):
    # Between P5 and P95 in acromion height, thumb tip reach, elbow rest, popliteal height and mass together: 68.7 %
    # (men) and 67.6 % (women) of the records, 66.9 % and 67.0 % of a lognormal fitted by others.
    sex = "female" if women else "male"
    names = ("acromion_height", "thumb_tip_reach", "elbow_rest_height", "popliteal_height", "body_mass")
    people = read_population(LIBRARY, "us_army_2012")
    sizes = draw_sizes(people.women if women else people.men, np.random.default_rng(3).standard_normal((40_000, len(DIMENSIONS))))
    inside = np.ones(40_000, dtype=bool)
    for name in names:
        low, high = np.percentile(RECORDS.sizes[name][RECORDS.sex == sex], (5, 95))
        inside &= (sizes[name] >= low) & (sizes[name] <= high)
    assert inside.mean() == pytest.approx(summary_model, abs=0.010)  # chance alone: 0.0024
    assert inside.mean() == pytest.approx(records, abs=0.030)  # the lognormal itself loses up to 2 points


def test_links_against_independent_measures():
    army = percentiles(LIBRARY, "us_army_2012")
    # Upper arm, shoulder to elbow joint: de Leva 1996 table 4 has 281.7 mm at a mean stature of 1741 mm (recalled).
    assert army["men"]["upper_arm_link_mm"]["p50"] == pytest.approx(281.7 * 1756 / 1741, rel=0.01)
    # Elbow joint to grip: the forearm's bone, radiale-stylion 267.9 and 241.3 mm, x 1.013, and 65 or 60 mm to the grip.
    assert army["men"]["forearm_grip_link_mm"]["p50"] == pytest.approx(267.9 * 1.013 + 65, abs=3)
    assert army["women"]["forearm_grip_link_mm"]["p50"] == pytest.approx(241.3 * 1.013 + 60, abs=3)
    # De Leva's women's arm at 1735 mm, 275.1 mm, is long beside the survey's women scaled to it: 5 % are allowed.
    assert army["women"]["upper_arm_link_mm"]["p50"] == pytest.approx(275.1 * 1628 / 1735, rel=0.05)


def test_forearm_and_wrist_of_the_links_against_de_leva():
    people = draw(LIBRARY, "us_army_2012", women_share=0.5, count=2000, seed=1)
    forearm = people.forearm_grip_m - people.wrist_grip_m
    # Elbow to wrist joint: 268.9 mm at 1741 mm for men, 264.3 mm at 1735 mm for women; the women's sample was of other
    # proportions, and both statures are recalled.
    assert np.median(forearm[~people.women]) == pytest.approx(0.2689 * 1756 / 1741, rel=0.02)
    assert np.median(forearm[people.women]) == pytest.approx(0.2643 * 1628 / 1735, rel=0.02)


def test_the_records_hold_no_identity():
    header = next(csv.reader(io.StringIO(gzip.decompress(PACKED)[:5000].decode())))
    assert not {"subjectid", "date", "component", "branch", "primarymos", "subjectsbirthlocation", "ethnicity", "race"} & {
        name.lower() for name in header
    }
    assert len(PACKED) < 1_000_000
    assert PACKED[4:8] == b"\0\0\0\0"  # no time of packing in the gzip header: the same bytes again
