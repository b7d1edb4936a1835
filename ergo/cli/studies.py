"""The study that a command line names: a file, or a shipped study by its name."""

from pathlib import Path
from typing import TYPE_CHECKING, Any

from ergo.errors import Problem, StudyError

if TYPE_CHECKING:
    from ergo.study.model import Study


def shipped_studies() -> dict[str, Path]:
    """Return the shipped studies by name."""
    from ergo.sources import folder

    return {path.stem: path for path in sorted((folder("datasets") / "studies").glob("*.toml"))}


def study_path(name: str) -> Path:
    """Return the file that `name` means: itself, or the shipped study of that name when no such file exists."""
    path = Path(name)
    return path if path.exists() else shipped_studies().get(name, path)


def chosen_study(name: str, *, variant: str | None = None, operators: int | None = None,
                 seed: int | None = None) -> "Study":  # fmt: skip
    """Return the study with a variant, a count of operators and a seed chosen on the command line.

    Raises
    ------
    StudyError
        With all problems of the file, or for a variant that it does not have.
    """
    from ergo.study.reader import read

    study = read(study_path(name))
    if variant is not None:
        names = [v.name for v in study.variants]
        if variant not in names:
            allowed = ", ".join(names) if names else "this study has no variants"
            raise StudyError([Problem(f"{name}: variants", "no variant of that name", variant, allowed)])
        study = study.variant(variant)
    changes: dict[str, Any] = {}
    if operators is not None:
        changes["operators.count"] = operators
    if seed is not None:
        changes["operators.seed"] = seed
    return study.with_values(changes) if changes else study
