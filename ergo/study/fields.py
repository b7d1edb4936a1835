"""How a key of the study file is described: unit, range, choices and a sentence of help, once for every user of it."""

from typing import Any

from pydantic import BaseModel, ConfigDict, Field

Point = tuple[float, float, float]
Pair = tuple[float, float]


class Section(BaseModel):
    """A section of the study file: frozen, and unknown keys are problems."""

    model_config = ConfigDict(frozen=True, extra="forbid", strict=False, allow_inf_nan=False)


def key(default: Any, help_text: str, *, unit: str = "", low: float | None = None, high: float | None = None,
        least: float = 0.0, choices: tuple[str, ...] = ()) -> Any:  # fmt: skip
    """Return a field of the study: its default (`...` where it must be given) and what is known about it.

    The reader checks `low` and `high`; the template, the report and the board's controls show all of it. A size that
    is not zero but below `least` is a slip of unit, not a size (of a point or pair: where all its numbers are).
    """
    extra = {"unit": unit, "help": help_text, "low": low, "high": high, "least": least, "choices": list(choices)}
    return Field(default, json_schema_extra=extra)
