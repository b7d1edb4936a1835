"""Smallest noticeable changes as published: the rows, and the range in which they were shown."""

import pytest

from ergo.datasets import library

ROWS = library().parameters("letgo_feel")


@pytest.mark.parametrize(
    ("name", "value", "status"),
    [
        ("force_weber", 0.07, "seen"),  # Pang, Tan and Durlach 1991: about 7 % over 2.5 to 10 N
        ("lifted_weight_weber", 0.059, "seen"),  # 5.9 % over 300 to 3000 g
        ("elbow_movement_weber", 0.08, "seen"),
        ("viscosity_weber", 0.19, "seen"),  # Jones, Hunter and Lafontaine 1997, forced choice
        ("stiffness_weber", 0.23, "memory"),  # Jones and Hunter 1990
    ],
)
def test_weber_fractions_as_published(name, value, status):
    assert (ROWS[name].value, ROWS[name].status) == (value, status)


def test_the_force_row_spans_jones_1989_elbow_flexors():
    # 5 to 9 % over 25 to 410 N
    assert (ROWS["force_weber"].low, ROWS["force_weber"].high) == (0.05, 0.09)
    assert (ROWS["lowest_force_n"].value, ROWS["highest_force_n"].value) == (2.5, 410.0)
