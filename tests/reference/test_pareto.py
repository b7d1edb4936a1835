"""The Pareto front against its definition, asked of every pair, and against a grid whose front is known in closed form."""

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from hypothesis.extra.numpy import arrays

from ergo.explore.pareto import front


def by_definition(values, signs):
    """A row is on the front when it is finite and no finite row is as good everywhere and better somewhere."""
    rows = [tuple(s * v for s, v in zip(signs, row, strict=True)) for row in values.tolist()]
    finite = [all(np.isfinite(row)) for row in rows]
    found = []
    for n, row in enumerate(rows):
        beaten = any(
            finite[m] and all(o >= r for o, r in zip(other, row, strict=True)) and other != row for m, other in enumerate(rows)
        )
        found.append(finite[n] and not beaten)
    return np.array(found, dtype=bool)


cells = st.one_of(st.integers(-3, 3).map(float), st.floats(-5, 5, width=16), st.just(np.nan))


@given(arrays(float, st.tuples(st.integers(0, 40), st.integers(1, 4)), elements=cells), st.randoms())
def test_front_is_what_its_definition_says(values, chance):
    signs = [chance.choice([-1.0, 1.0]) for _ in range(values.shape[1])]
    assert (front(values, signs) == by_definition(values, signs)).all()


def test_front_of_a_full_grid_of_placements():
    """Served share, hand travel and tool movement of lever lengths and angles: 60 x 40 placements, every pair asked."""
    length, turn = (a.ravel() for a in np.meshgrid(np.linspace(150, 450, 60), np.linspace(30, 90, 40), indexing="ij"))
    served = np.round(100.0 - 0.002 * (length - 320.0) ** 2 - 0.01 * (turn - 60.0) ** 2, 1)
    values = np.stack([served, length * np.deg2rad(turn), 45.0 / length], axis=1)
    signs = (1.0, -1.0, -1.0)
    found = front(values, signs)
    assert (found == by_definition(values, signs)).all()
    assert 0 < found.sum() < length.size


def test_front_of_a_quarter_circle():
    """Of points in a quarter disc, more of both being better, exactly those on the arc are on the front."""
    angle = np.linspace(0.05, 1.5, 50)
    arc = np.stack([np.cos(angle), np.sin(angle)], axis=1)
    values = np.concatenate([0.8 * arc, arc, 0.3 * arc])
    assert np.flatnonzero(front(values, (1.0, 1.0))).tolist() == list(range(50, 100))


@pytest.mark.parametrize("shape", [(0, 2), (1, 3)])
def test_front_of_nothing_and_of_one(shape):
    assert front(np.ones(shape), [1.0] * shape[1]).tolist() == [True] * shape[0]
