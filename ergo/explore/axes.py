"""Axes of a sweep: which keys take which values, as a grid or as a Sobol sample."""

import math
from collections.abc import Sequence
from dataclasses import dataclass, field
from typing import Any

import numpy as np

from ergo.errors import Problem, StudyError
from ergo.explore.keys import placed, schema_row
from ergo.study.model import Study

MOST_PLACEMENTS = 10_000_000
MOST_VALUES = 100_000
FORMS = "low:high:step, a list such as 120,150,200, choices such as open,crossed; low:high with --sobol"


@dataclass(frozen=True)
class Axis:
    """One key and its values: the listed ones, or any number from `low` to `high` when `values` is empty."""

    path: str
    values: tuple[Any, ...] = ()
    low: float = 0.0
    high: float = 0.0
    whole: bool = False

    @property
    def continuous(self) -> bool:
        """Whether the axis is a range without steps."""
        return not self.values

    def at_share(self, share: float) -> Any:
        """Return the value at a share 0..1 of the axis: of the range, or of the list."""
        if self.values:
            return self.values[min(int(share * len(self.values)), len(self.values) - 1)]
        value = self.low + share * (self.high - self.low)
        return round(value) if self.whole else float(f"{value:.6g}")

    def words(self) -> str:
        """Return the axis as text, the same for the same axis."""
        inner = ",".join(str(v) for v in self.values) if self.values else f"{self.low!r}:{self.high!r}"
        return f"{self.path}={inner}"


def read_axis(study: Study, text: str, *, sampled: bool = False) -> Axis:
    """Return the axis that `PATH=VALUES` means for a study.

    Parameters
    ----------
    study : Study
        Whose key it is; the schema says whether it takes numbers, whole numbers, words or flags.
    text : str
        `lever.length_mm=120:300:10`, `lever.length_mm=120,150`, `linkage.branch=open,crossed`.
    sampled : bool
        Whether a Sobol sample is drawn, so that `low:high` without a step makes sense.

    Raises
    ------
    StudyError
        For a key that the study does not have, or values that it cannot take.
    """
    path, equals, values = (part.strip() for part in text.partition("="))
    if not equals or not path or not values:
        raise StudyError([Problem("--vary", "is not KEY=VALUES", text, FORMS)])
    row = schema_row(study, path)
    if row["kind"] not in ("number", "whole", "choice", "flag", "text"):
        hint = f"one number of it: {path}[0]=..." if row["kind"] in ("point", "pair", "numbers") else ""
        raise StudyError([Problem(path, "is not a number or a choice", allowed=hint or "a number or a choice")])
    if ":" in values and row["kind"] in ("number", "whole"):
        return _range(path, values, row, sampled)
    return Axis(path, _listed(path, values, row))


def _number(path: str, word: str) -> float:
    try:
        value = float(word)
    except ValueError as error:
        raise StudyError([Problem(path, "is not a number", word.strip(), FORMS)]) from error
    if not math.isfinite(value):
        raise StudyError([Problem(path, "is not a finite number", word.strip())])
    return value


def _range(path: str, values: str, row: dict[str, Any], sampled: bool) -> Axis:
    words = values.split(":")
    whole = row["kind"] == "whole"
    if len(words) == 2 and sampled:
        low, high = (_number(path, w) for w in words)
        if low >= high:
            raise StudyError([Problem(path, "the first bound must be below the second", values)])
        return Axis(path, low=low, high=high, whole=whole)
    if len(words) != 3:
        raise StudyError([Problem(path, "is no range", values, FORMS)])
    low, high, step = (_number(path, w) for w in words)
    if step == 0.0 or (high - low) / step < 0.0:
        raise StudyError([Problem(path, "the step does not lead from the first value to the second", values)])
    count = math.floor((high - low) / step + 1e-9) + 1
    if count > MOST_VALUES:
        raise StudyError([Problem(path, "has too many values", str(count), f"up to {MOST_VALUES}")])
    # Twelve digits are finer than any drawing and leave no 0.30000000000000004.
    found = [float(f"{low + n * step:.12g}") for n in range(count)]
    return Axis(path, tuple(dict.fromkeys(round(v) for v in found)) if whole else tuple(found))


def _listed(path: str, values: str, row: dict[str, Any]) -> tuple[Any, ...]:
    words = [w.strip() for w in values.split(",")]
    if row["kind"] == "number":
        found: list[Any] = [_number(path, w) for w in words]
    elif row["kind"] == "whole":
        found = [_whole(path, w) for w in words]
    elif row["kind"] == "flag":
        wrong = [w for w in words if w not in ("true", "false")]
        if wrong:
            raise StudyError([Problem(path, "is yes or no", wrong[0], "true, false")])
        found = [w == "true" for w in words]
    else:
        found = words
    if len(set(found)) != len(found):
        raise StudyError([Problem(path, "has a value twice", values)])
    return tuple(found)


def _whole(path: str, word: str) -> int:
    value = _number(path, word)
    if not value.is_integer():
        raise StudyError([Problem(path, "takes whole numbers", word)])
    return int(value)


@dataclass(frozen=True)
class Placements:
    """All placements of a sweep, numbered 0..count-1: a grid of axes, or `sobol` points spread over them.

    In a grid the last axis runs fastest.
    """

    axes: tuple[Axis, ...]
    sobol: int = 0
    seed: int = 1
    _points: list[np.ndarray] = field(default_factory=list, repr=False, compare=False)

    @property
    def count(self) -> int:
        """How many placements there are."""
        return self.sobol or math.prod(len(axis.values) for axis in self.axes)

    def values(self, number: int) -> dict[str, Any]:
        """Return the values of one placement by path."""
        if self.sobol:
            row = self._sobol_points()[number]
            return {axis.path: axis.at_share(float(share)) for axis, share in zip(self.axes, row, strict=True)}
        found = {}
        for axis in reversed(self.axes):
            number, at = divmod(number, len(axis.values))
            found[axis.path] = axis.values[at]
        return {axis.path: found[axis.path] for axis in self.axes}

    def words(self) -> str:
        """Return axes and sample as text, the same for the same placements."""
        how = f"sobol {self.sobol} seed {self.seed}" if self.sobol else "grid"
        return "; ".join([how, *(axis.words() for axis in self.axes)])

    def _sobol_points(self) -> np.ndarray:
        if not self._points:
            from scipy.stats import qmc

            draw = qmc.Sobol(len(self.axes), scramble=True, rng=np.random.default_rng(self.seed))
            self._points.append(draw.random_base2(max(math.ceil(math.log2(self.sobol)), 0))[: self.sobol])
        return self._points[0]


def placements_of(study: Study, texts: Sequence[str], sobol: int = 0) -> Placements:
    """Return the placements that `--vary` and `--sobol` ask for.

    Raises
    ------
    StudyError
        With the problems of every axis, too many placements, or a sample size that is no number of points.
    """
    axes: list[Axis] = []
    problems: list[Problem] = []
    for text in texts:
        try:
            axes.append(read_axis(study, text, sampled=sobol > 0))
        except StudyError as error:
            problems += error.problems
    paths = [axis.path for axis in axes]
    problems += [Problem(p, "is varied twice") for p in dict.fromkeys(paths) if paths.count(p) > 1]
    if not texts:
        problems.append(Problem("--vary", "is missing", allowed=FORMS))
    if sobol < 0:
        problems.append(Problem("--sobol", "must be above zero", str(sobol)))
    if problems:
        raise StudyError(problems)
    made = Placements(tuple(axes), sobol, study.operators.seed)
    if made.count > MOST_PLACEMENTS:
        raise StudyError([Problem("--vary", "makes too many placements", str(made.count), f"up to {MOST_PLACEMENTS}")])
    _ends_fit(study, axes)
    return made


def _ends_fit(study: Study, axes: list[Axis]) -> None:
    """Refuse values that the key could never take, each alone, before any work is done."""
    problems: list[Problem] = []
    for axis in axes:
        row = schema_row(study, axis.path)
        tried = axis.values or (axis.low, axis.high)
        for value in tried:
            if isinstance(value, bool) or row["low"] is None or not isinstance(value, (int, float)):
                allowed = row["choices"]
                if row["kind"] == "choice" and value not in allowed:
                    problems.append(Problem(axis.path, "is not one of its choices", str(value), ", ".join(allowed)))
            elif not row["low"] <= value <= row["high"]:
                problems.append(Problem(axis.path, "lies outside its range", f"{value:g}", f"{row['low']:g} to {row['high']:g}"))
                break
    if problems:
        raise StudyError(problems)
    placed(study, {})
