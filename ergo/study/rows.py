"""CSV files that a study names, read into the study so that everything after it is free of files."""

import csv
import hashlib
import io
import itertools
import math
from pathlib import Path
from typing import Any

from ergo.datasets import library
from ergo.errors import Problem, StudyError
from ergo.people.own_table import read_own_table
from ergo.study.model import Study

LARGEST_ROWS = 20_000
LARGEST_BYTES = 5_000_000
_COLUMNS = {
    "linkage": ("lever_deg", "slide_mm"),
    "load": ("slide_mm", "force_n"),
    "path": ("x_mm", "y_mm", "z_mm", "force_n"),
}
_RISING = {"linkage": "lever_deg", "load": "slide_mm"}


def attach_rows(study: Study) -> tuple[Study, list[Problem]]:
    """Return the study with the rows of the CSV files it names, and what is wrong with those files."""
    update: dict[str, Any] = {}
    problems: list[Problem] = []
    for section, columns in _COLUMNS.items():
        part = getattr(study, section)
        file = getattr(part, "file", None)
        if part is None or file is None:
            continue
        rows, found = _read_rows(Path(study.folder) / file, f"{section}.file", columns, _RISING.get(section))
        problems += found
        update[section] = part.model_copy(update={"rows": rows})
    if study.operators.population.endswith(".csv"):
        checksum, found = _own_people(Path(study.folder) / study.operators.population)
        problems += found
        update["operators"] = study.operators.model_copy(update={"population_checksum": checksum})
    return study.model_copy(update=update), problems


def _read_rows(path: Path, where: str, columns: tuple[str, ...], rising: str | None
               ) -> tuple[tuple[tuple[float, ...], ...], list[Problem]]:  # fmt: skip
    expected = ", ".join(columns)
    text, fault = _text_of(path)
    try:
        table = list(csv.reader(io.StringIO(text, newline=""), strict=True))
    except csv.Error as error:
        table, fault = [], f"is not a CSV file: {error}"
    if fault:
        return (), [Problem(where, fault, path.name[:60], f"a CSV of {expected}")]
    table = [row for row in table if any(cell.strip() for cell in row)]
    if not table or tuple(cell.strip() for cell in table[0]) != columns:
        got = ", ".join(table[0])[:60] if table else "an empty file"
        return (), [Problem(where, "does not have the expected columns", got, expected)]
    if not 3 <= len(table) <= LARGEST_ROWS + 1:
        return (), [Problem(where, "has too few or too many rows", str(len(table) - 1), f"2 to {LARGEST_ROWS}")]
    rows, problems = [], []
    for n, cells in enumerate(table[1:], 2):
        numbers = _numbers(cells, len(columns))
        if numbers is None:
            what = f"line {n} is not {len(columns)} finite numbers"
            problems.append(Problem(where, what, ", ".join(cells)[:60], expected))
        else:
            rows.append(numbers)
    if not problems and rising is not None:
        problems += _order_problems(rows, where, rising)
    return tuple(rows), problems[:10]


def _text_of(path: Path) -> tuple[str, str]:
    """Return a file's text, and what keeps it from being read."""
    try:
        if path.exists() and not path.is_file():
            return "", "is not a file"
        content = path.read_bytes() if path.stat().st_size <= LARGEST_BYTES else None
    except FileNotFoundError:
        return "", "there is no such file"
    except OSError as error:
        return "", f"cannot be read: {(error.strerror or 'unknown fault').lower()}"
    except ValueError:
        return "", "is no name of a file"
    if content is None:
        return "", f"is too large for a table, over {LARGEST_BYTES / 1e6:g} MB"
    try:
        return content.decode("utf-8-sig"), ""
    except UnicodeDecodeError as error:
        return "", f"is not UTF-8 text (byte {error.start})"


def _own_people(path: Path) -> tuple[str, list[Problem]]:
    """Return the checksum of a population table of the user's own, and what is wrong with it."""
    text, fault = _text_of(path)
    if fault:
        return "", [Problem("operators.population", fault, path.name[:60], "a CSV of sex, dimension, unit, mean, sd")]
    try:
        read_own_table(library(), path)
    except StudyError as error:
        return "", [Problem(f"operators.population, {p.where}", p.what, p.got, p.allowed, p.suggestion) for p in error.problems]
    return hashlib.sha256(text.encode()).hexdigest(), []


def _numbers(cells: list[str], count: int) -> tuple[float, ...] | None:
    try:
        numbers = tuple(float(cell) for cell in cells)
    except ValueError:
        return None
    return numbers if len(numbers) == count and all(math.isfinite(v) for v in numbers) else None


def _order_problems(rows: list[tuple[float, ...]], where: str, rising: str) -> list[Problem]:
    """Return where the first column turns back: it must rise throughout (lever angles may also fall throughout)."""
    steps = [b[0] - a[0] for a, b in itertools.pairwise(rows)]
    falls = rising == "lever_deg" and all(s < 0.0 for s in steps)
    if falls or all(s > 0.0 for s in steps):
        return []
    turn = next(n for n, s in enumerate(steps) if s <= 0.0)
    return [Problem(where, f"{rising} must rise from row to row, line {turn + 3} does not", f"{rows[turn + 1][0]:g}")]
