"""Keys of a study by dotted path, down to one number of a point: `lever.length_mm`, `lever.pivot_mm[2]`."""

import re
from collections.abc import Mapping
from typing import Any

from ergo.errors import Problem, StudyError
from ergo.study.model import Study, schema
from ergo.study.paths import set_values, steps
from ergo.study.reader import build

LEFT_OUT = ("variants", "targets.free")


def value_at(content: Any, path: str) -> Any:
    """Return the value at a path of plain study content, None where there is none."""
    place = content
    for step in steps(path) or ():
        try:
            place = place[step]
        except (KeyError, IndexError, TypeError):
            return None
    return place


def schema_row(study: Study, path: str) -> dict[str, Any]:
    """Return what the schema says of a key: kind (`number` for one number of a point), unit, low, high, choices.

    Raises
    ------
    StudyError
        If the study has no such key, with the nearest one.
    """
    bare = re.sub(r"\[\d+\]", "", path)
    kinds = {"linkage": study.linkage.kind, "load": study.load.kind}
    rows = [r for r in schema() if r["path"] == bare and r["of_kind"] in ("", kinds.get(r["section"], r["of_kind"]))]
    if not rows or path.startswith(LEFT_OUT):
        import difflib

        near = difflib.get_close_matches(bare, sorted({r["path"] for r in schema()}), 1)
        raise StudyError([Problem(path, "is no key of this study", suggestion=f"did you mean {near[0]}?" if near else "")])
    row = dict(rows[0])
    if path.endswith("]") and row["kind"] in ("point", "pair"):
        row["kind"] = "number"
    return row


def placed(study: Study, values: Mapping[str, Any]) -> Study:
    """Return the study with other values at its keys, checked by the one reader; variants are left out.

    Raises
    ------
    StudyError
        With all problems that the values bring.
    """
    content = study.content()
    content.pop("variants", None)
    data, problems = set_values(content, dict(values))
    if problems:
        raise StudyError(problems)
    return build(data, study.folder, study.name).model_copy(update={"variant_name": study.variant_name})
