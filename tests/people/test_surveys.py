"""The fit of a survey's records: against made-up records whose answer is known, and against themselves."""

import csv
import gzip
import io

import numpy as np
import pytest

from ergo.people.dimensions import DIMENSIONS, FOLLOWING, SURVEY_COLUMNS
from ergo.people.surveys import Records, fit, read_records


def made_up_records(count: int, slope: float, spread: float) -> Records:
    """Return records in which every dimension is a power of stature with a known residual."""
    rng = np.random.default_rng(3)
    stature = np.exp(rng.normal(np.log(1700), 0.04, count))
    mass = np.exp(rng.normal(np.log(75), 0.15, count) + 2.0 * np.log(stature / 1700))
    rest = {name: 0.2 * stature**slope * np.exp(rng.normal(0, spread, count)) for name in FOLLOWING}
    return Records(np.full(count, "male"), {"stature": stature, "body_mass": mass, **rest})


def test_a_known_power_law_is_found_again():
    body = fit(made_up_records(20_000, 1.1, 0.03), "male")
    # 20,000 people estimate a slope to 0.03 / (0.04 sqrt(20000)) = 0.005, four of which are allowed.
    assert body.slopes[:, 0] == pytest.approx(np.full(len(FOLLOWING), 1.1), abs=0.02)
    assert body.slopes[:, 1] == pytest.approx(np.zeros(len(FOLLOWING)), abs=0.01)
    assert body.residual_sd == pytest.approx(np.full(len(FOLLOWING), 0.03), rel=0.03)
    # var = 1.1^2 0.04^2 against 0.03^2 of residual.
    assert body.r2 == pytest.approx(np.full(len(FOLLOWING), 0.683), abs=0.02)
    off = body.correlation[~np.eye(len(FOLLOWING), dtype=bool)]
    assert np.abs(off).max() < 0.04  # independent by construction; 1 / sqrt(20000) = 0.007


def test_only_the_asked_sex_and_rows_are_used():
    people = made_up_records(400, 1.0, 0.02)
    half = np.arange(400) < 200
    mixed = Records(np.where(half, "male", "female"), people.sizes)
    assert fit(mixed, "male").mean == pytest.approx(fit(people, "male", half).mean)


def test_records_are_read_with_the_dimensions_that_follow():
    columns = [*SURVEY_COLUMNS.values()]
    text = io.StringIO()
    rows = csv.writer(text)
    rows.writerow(["sex", *columns])
    rows.writerow(["female", *range(1000, 1000 + len(columns))])
    people = read_records(gzip.compress(text.getvalue().encode()), 0.2)
    assert list(people.sex) == ["female"]
    assert set(people.sizes) == set(DIMENSIONS)
    at = {name: 1000.0 + n for n, name in enumerate(SURVEY_COLUMNS)}
    assert people.sizes["elbow_height"][0] == at["acromion_height"] - at["acromion_radiale_length"]
