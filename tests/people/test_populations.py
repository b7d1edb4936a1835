"""Population tables as lognormal descriptions: what is taken from a row, what follows, and with what status."""

import math

import numpy as np
import pytest

from ergo.datasets import library
from ergo.errors import DataError
from ergo.people.dimensions import DIMENSIONS, FOLLOWING
from ergo.people.percentiles import percentiles, tables
from ergo.people.populations import log_spread, population_keys, read_population

LIBRARY = library()
POPULATIONS = ("us_army_2012", "us_adults_2015", "germany_2005", "great_britain", "japan", "china_1988", "hong_kong")
MARKS = ("p01", "p05", "p50", "p95", "p99")
LINKS = ("shoulder_height_standing_mm", "shoulder_height_seated_mm", "elbow_height_standing_mm", "upper_arm_link_mm",
         "forearm_grip_link_mm", "forward_grip_reach_mm")  # fmt: skip


def test_the_seven_shipped_populations_are_there():
    assert set(population_keys(LIBRARY)) == set(POPULATIONS)
    listed = tables(LIBRARY)
    assert all(row["caveats"] and row["title"] and row["status"] for row in listed)


def test_percentiles_of_a_row_are_kept_with_their_skew():
    size = log_spread({"p05": "61.6", "p50": "86.4", "p95": "131.4"})
    z = 1.644854  # standard normal quantile of 0.95
    assert math.exp(size.median) == pytest.approx(86.4)
    assert math.exp(size.median - z * size.below) == pytest.approx(61.6, rel=1e-6)
    assert math.exp(size.median + z * size.above) == pytest.approx(131.4, rel=1e-6)


def test_mean_and_sd_of_a_row_come_back():
    size = log_spread({"mean": "90", "sd": "21.7"})
    assert size.below == size.above
    draws = np.exp(np.random.default_rng(1).normal(size.median, size.above, 400_000))
    # 400,000 draws: standard errors 0.03 of the mean and 0.05 of the SD.
    assert draws.mean() == pytest.approx(90, abs=0.15)
    assert draws.std() == pytest.approx(21.7, abs=0.25)


@pytest.mark.parametrize("name", POPULATIONS)
def test_percentiles_have_every_dimension_and_link_and_rise(name):
    found = percentiles(LIBRARY, name)
    assert found["population"] == name
    for sex in ("women", "men"):
        assert {*LINKS, "stature_mm", "body_mass_kg", "acromion_height_mm"} <= set(found[sex])
        for marks in found[sex].values():
            assert sorted(marks) == sorted(MARKS)
            values = [marks[m] for m in MARKS]
            assert values == sorted(values)
            assert values[0] > 0
    assert set(found["statuses"]) == set(found["women"]) == set(found["men"])


@pytest.mark.parametrize("name", POPULATIONS)
def test_a_status_is_never_better_than_its_rows(name):
    order = ("seen", "computed", "derived", "memory")
    found = read_population(LIBRARY, name)
    table = LIBRARY.table(name)
    for row in table.rows:
        assert order.index(found.statuses[row["dimension"]]) >= order.index(table.status_of(row))
    stated = {row["dimension"] for row in table.rows}
    for dimension in set(DIMENSIONS) - stated:
        assert found.statuses[dimension] in ("derived", "memory")


def test_mass_that_a_table_lacks_is_said_and_never_better_than_derived():
    german, japanese = (read_population(LIBRARY, name) for name in ("germany_2005", "japan"))
    assert german.statuses["body_mass"] == "derived"
    assert japanese.statuses["body_mass"] == "memory"
    assert any("no body mass" in caveat and "us_army_2012" in caveat for caveat in german.caveats)
    assert any("no body mass" in caveat and "china_2023" in caveat for caveat in japanese.caveats)
    # The spread goes through: ln mass has the slope's share of ln stature's spread and the residual.
    row = LIBRARY.table("mass_on_stature").row(basis="us_army_2012", sex="male")
    slope, left = float(row["on_log_stature"]), float(row["residual_sd"])
    stature_sd = math.log(1855 / 1650) / (2 * 1.644854)
    assert german.men.above[1] == pytest.approx(math.hypot(slope * stature_sd, left), rel=1e-5)


def test_a_limb_measured_otherwise_moves_its_kin():
    # The Chinese table gives the forearm's bone, 237 mm for men where US proportions at that stature and mass lead to
    # some 255 mm: the elbow-grip length must come out shorter than the regression alone would have it.
    model = read_population(LIBRARY, "china_1988").men
    n = FOLLOWING.index("elbow_grip_length")
    alone = LIBRARY.table("body_regression").row(sex="male", dimension="elbow_grip_length")
    expected = float(alone["intercept"]) + model.slopes[n] @ model.median[:2]
    moved = model.intercept[n] + model.slopes[n] @ model.median[:2]
    assert -0.08 < moved - expected < -0.03


def test_a_dimension_given_for_one_sex_alone_is_used_for_that_sex():
    found = read_population(LIBRARY, "hong_kong")
    assert "elbow_height" in found.men.stated
    assert "elbow_height" not in found.women.stated
    assert percentiles(LIBRARY, "hong_kong")["men"]["elbow_height_standing_mm"]["p50"] == pytest.approx(1015)


def test_an_unknown_population_is_named_with_the_list_and_the_nearest():
    with pytest.raises(DataError) as caught:
        read_population(LIBRARY, "germany_2006")
    text = str(caught.value)
    assert "did you mean germany_2005?" in text
    assert all(name in text for name in POPULATIONS)
    assert caught.value.exit_code == 3
