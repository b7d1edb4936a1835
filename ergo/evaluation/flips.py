"""Which recalled or derived numbers would flip the verdict: each row alone, moved to the ends of its stated range."""

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from typing import TYPE_CHECKING

from ergo.datasets import Library
from ergo.datasets import library as shipped
from ergo.study.model import Study

if TYPE_CHECKING:
    from ergo.evaluation.results import Results

PARAMETER_TABLES = ("stance_parameters", "joint_ranges", "body_model_parameters", "strength_variation", "grip_on_handle",
                    "repetition", "posture_bands", "clearance_parameters", "age_strength", "letgo_hand",
                    "letgo_body")  # fmt: skip
STRENGTHS = "joint_strength"
# Two tables of joint strength differ by about this factor (elbow extension: 1.4; see the table's notes).
STRENGTH_FACTORS = (0.8, 1.25)
DOUBTFUL = ("memory", "derived")
COARSE = {"operators.count": 80, "study.positions": 7}
# Search windows are no physics: a wider one finds what a narrower one misses.
LEFT_OUT = ("swivel_low_deg", "swivel_high_deg", "posture_target")


@dataclass(frozen=True)
class Flip:
    """One row that changes which targets are met when it lies at an end of its range."""

    table: str
    row: str
    value: float
    status: str
    source: str
    changes: tuple[str, ...]

    def sentence(self) -> str:
        """Return what would flip, in one sentence."""
        what = ", ".join(self.changes)
        return f"{self.row} ({self.table}, {self.status}) at {self.value:g} would change: {what}."


def flips(study: Study, judge: "Callable[..., Results]", library: Library | None = None,
          tell: Callable[[float, str], None] | None = None) -> tuple[Flip, ...]:  # fmt: skip
    """Return the doubtful rows that would flip a target.

    Parameters
    ----------
    study : Study
        Judged on a coarse draw of 80 people at seven positions.
    judge : callable
        `evaluate(study, library=...)`.
    library : Library, optional
        The tables to start from.
    tell : callable, optional
        Progress, share and word.

    Returns
    -------
    tuple of Flip
        Against the verdict of the same coarse draw; a target met by less than the draw's own noise may come up.
    """
    tables = library or shipped()
    coarse = study.with_values(COARSE)
    base = _met(judge(coarse, library=tables))
    trials = list(_trials(tables))
    found = []
    for n, (table, row, value, status, source, changed) in enumerate(trials):
        if tell is not None:
            tell(n / len(trials), f"{table}: {row}")
        met = _met(judge(coarse, library=changed))
        changes = tuple(_change(name, met[name]) for name in base if met[name] != base[name])
        if changes:
            found.append(Flip(table, row, value, status, source, changes))
    return tuple(found)


def _change(name: str, met: bool) -> str:
    return f"{name.replace('_', '-')} {'met' if met else 'missed'}"


def _met(results: "Results") -> dict[str, bool]:
    return {name: rating.met for name, rating in results.ratings.items()}


def _trials(tables: Library) -> Iterator[tuple[str, str, float, str, str, Library]]:
    for table in PARAMETER_TABLES:
        for name, row in tables.parameters(table).items():
            if row.status not in DOUBTFUL or name in LEFT_OUT:
                continue
            for end in (row.low, row.high):
                if end == end and end != row.value:
                    yield table, name, end, row.status, row.source, tables.with_value(table, name, end)
    strengths = tables.table(STRENGTHS)
    for row in strengths.rows:
        for factor in STRENGTH_FACTORS:
            changed = tables.with_factor(STRENGTHS, row["function"], factor)
            yield STRENGTHS, f"{row['function']} x", factor, strengths.status_of(row), strengths.source_of(row), changed
