"""The data rows that a let-go rests on, and the small set of ways in which they may lie."""

import math
from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from ergo.datasets import Library, Parameter
from ergo.errors import DataError

Array = NDArray[np.float64]
SCENARIOS = 8
SEED = 7


@dataclass(frozen=True)
class Rows:
    """Rows of one parameter table by name; a row changed for a what-if is held at its changed value."""

    rows: Mapping[str, Parameter]
    held: frozenset[str]

    def values(self) -> dict[str, float]:
        """Return the value of every row, by name, in the table's units."""
        return {name: row.value for name, row in self.rows.items()}

    def scenarios(self, count: int = SCENARIOS, seed: int = SEED) -> dict[str, Array]:
        """Return `count` sets of values, by name (count,): the first as shipped, the others spread.

        Parameters
        ----------
        count : number of sets, at least 1
        seed : of the spread

        Returns
        -------
        dict
            A Latin hypercube: every row takes each of count - 1 equal slices of its low to high once, in
            random order. Same rows, count and seed give the same sets.
        """
        draw = np.random.default_rng(seed)
        spread = {}
        for name, row in self.rows.items():
            at = (draw.permutation(count - 1) + draw.random(count - 1)) / max(count - 1, 1)
            low, high = (row.value, row.value) if name in self.held else (row.low, row.high)
            spread[name] = np.concatenate([[row.value], low + at * (high - low)])
        return spread


def rows(library: Library, table: str, names: Iterable[str], purpose: str) -> Rows:
    """Return the named rows of a parameter table, all there and in order.

    Parameters
    ----------
    library : the shipped tables, or changed ones
    table, names : which rows
    purpose : what is worked out from them, for the sentence if some are missing

    Raises
    ------
    DataError
        In one sentence, if rows are missing, have no value or range, or a range upside down.
    """
    found = library.parameters(table)
    chosen, missing, odd = {}, [], []
    for name in names:
        row = found.get(name)
        if row is None or any(math.isnan(v) for v in (row.value, row.low, row.high)):
            missing.append(name)
            continue
        if row.low > row.high:
            odd.append(name)
        chosen[name] = row
    if missing:
        msg = f"table {table}: no value or range for {', '.join(missing)}, so {purpose} cannot be worked out"
        raise DataError(msg)
    if odd:
        msg = f"table {table}: low lies above high for {', '.join(odd)}, so {purpose} cannot be worked out"
        raise DataError(msg)
    held = frozenset(name for name in chosen if (table, name) in library.changes)
    return Rows(chosen, held)
