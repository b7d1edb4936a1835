"""Pullward: is a hand lever in the right place?

>>> import ergo
>>> results = ergo.evaluate(ergo.read_study("gasket_punch"))
>>> results.ratings["reach"].value, results.stroke_frame()
"""

import importlib
from typing import Any

from ergo.arm import compiled as _compiled  # noqa: F401  (names numba's cache folder before anything imports numba)

__version__ = "0.1.0"
__all__ = ["evaluate", "library", "read_study", "shipped_studies"]


def shipped_studies() -> dict[str, str]:
    """Return the shipped studies: name -> path."""
    folder = importlib.import_module("ergo.sources").folder("datasets") / "studies"
    return {path.stem: str(path) for path in sorted(folder.glob("*.toml"))}


def read_study(name: str) -> Any:
    """Return the study in a file, or a shipped study by its name; StudyError with every problem."""
    return importlib.import_module("ergo.study.reader").read(shipped_studies().get(name, name))


def evaluate(study: Any, **options: Any) -> Any:
    """Judge a study: see `ergo.evaluation.run.evaluate`. Loaded when called, so that importing stays light."""
    return importlib.import_module("ergo.evaluation.run").evaluate(study, **options)


def library() -> Any:
    """Return the shipped tables, for a what-if by `with_value`: see `ergo.datasets.Library`."""
    return importlib.import_module("ergo.datasets").library()
