"""Pullward: is a hand lever in the right place?

>>> import ergo
>>> results = ergo.evaluate(ergo.read_study("gasket_punch"))
>>> results.ratings["reach"].value, results.stroke_frame()
"""

from typing import Any

from ergo.arm import compiled as _compiled  # noqa: F401  (names numba's cache folder before anything imports numba)

__version__ = "0.1.0"
__all__ = ["evaluate", "library", "read_study", "shipped_studies"]


def shipped_studies() -> dict[str, str]:
    """Return the shipped studies: name -> path."""
    from ergo.sources import folder

    return {path.stem: str(path) for path in sorted((folder("datasets") / "studies").glob("*.toml"))}


def read_study(name: str) -> Any:
    """Return the study in a file, or a shipped study by its name; StudyError with every problem."""
    from ergo.study.reader import read

    return read(shipped_studies().get(name, name))


def __getattr__(name: str) -> Any:
    """Load `evaluate` and `library` when first asked for, so that importing the package stays light."""
    if name == "evaluate":
        from ergo.evaluation.run import evaluate

        return evaluate
    if name == "library":
        from ergo.datasets import library

        return library
    msg = f"module 'ergo' has no attribute {name!r}"
    raise AttributeError(msg)
