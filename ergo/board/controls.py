"""A control for every key of the study file, made from the schema that the reader itself checks with."""

import math
from typing import Any

import dash_mantine_components as dmc
from dash import html

from ergo.board.draft import value_at
from ergo.board.ids import Part, of
from ergo.study.model import schema

SECTIONS = {
    "study": "Study",
    "bench": "Bench",
    "operators": "Operators",
    "lever": "Lever",
    "grip": "Grip",
    "linkage": "Linkage",
    "load": "Load",
    "path": "Measured path",
    "zones": "Zones",
    "touch_points": "Touch points",
    "duty": "Duty",
    "screw": "Screw feed to compare with",
    "structure": "Strong end",
    "targets": "Targets",
    "variants": "Variants",
}
LISTS = ("zones", "touch_points", "variants")
KIND_KEY = {"linkage": "kind", "load": "kind", "zones": "shape"}
PARTS = {"point": ("right", "away", "up"), "pair": ("from", "to")}
SIZE_PARTS = ("right", "away", "up")
_UNIT_ENDS = ("_nm_per_rad", "_mm_per_deg", "_mm_per_rev", "_n_per_mm", "_mm", "_deg", "_kg", "_nm", "_um", "_years",
              "_above_n", "_n", "_s")  # fmt: skip
_HALF_WINDOW = {"deg": 60.0, "mm": 200.0}
_STEP = {"mm": 1.0, "deg": 1.0, "N": 1.0, "kg": 0.1, "um": 1.0, "years": 1.0}


def rows_of(section: str, kind: str = "") -> list[dict[str, Any]]:
    """Return the schema's rows of one section, those of its kind only."""
    return [r for r in schema() if r["section"] == section and r["of_kind"] == kind]


def kinds_of(section: str) -> list[str]:
    """Return the kinds of a section that comes in kinds, in the schema's order."""
    return list(dict.fromkeys(r["of_kind"] for r in schema() if r["section"] == section))


def label(row: dict[str, Any]) -> str:
    """Return a key's name in words, without the unit at its end."""
    name = str(row["name"])
    for end in _UNIT_ENDS:
        if name.endswith(end):
            name = name.removesuffix(end) + (" above" if end == "_above_n" else "")
            break
    return name.replace("_", " ")


def range_words(row: dict[str, Any]) -> str:
    """Return a key's help and range as one sentence."""
    text = str(row["help"])
    if row["low"] is not None and row["kind"] not in ("text", "choice", "flag"):
        text += f"; {row['low']:g} to {row['high']:g}\u202f{row['unit']}".rstrip("\u202f")
    return text[:1].upper() + text[1:] + "."


def control_paths(data: dict[str, Any]) -> dict[str, dict[str, Any]]:
    """Return the schema row of every control that the data asks for, by the path of the field."""
    found: dict[str, dict[str, Any]] = {}
    for section in SECTIONS:
        parts = data.get(section)
        for n, part in enumerate(parts if isinstance(parts, list) else [parts]):
            if not isinstance(part, dict):
                continue
            place = f"{section}[{n}]" if isinstance(parts, list) else section
            kind = str(part.get(KIND_KEY[section], "")) if section in KIND_KEY else ""
            for row in rows_of(section, kind):
                if row["path"] != "variants.set":
                    found[f"{place}.{row['name']}"] = row
    return found


def field_values(data: dict[str, Any]) -> dict[str, Any]:
    """Return what every control shows, by the control's own path (`lever.pivot_mm[0]` for parts of a point)."""
    shown: dict[str, Any] = {}
    for path, row in control_paths(data).items():
        for inner in inner_paths(path, row, data):
            shown[inner] = shown_value(value_at(data, inner), row)
    for section, key in KIND_KEY.items():
        parts = data.get(section)
        for n, part in enumerate(parts if isinstance(parts, list) else [parts]):
            if isinstance(part, dict):
                place = f"{section}[{n}]" if isinstance(parts, list) else section
                shown[f"{place}.{key}"] = part.get(key, "")
    return shown


def inner_paths(path: str, row: dict[str, Any], data: dict[str, Any]) -> list[str]:
    """Return the paths of a key's inputs: one, or one a number of a point or pair."""
    if row["kind"] in PARTS and not isinstance(value_at(data, path), str):
        return [f"{path}[{n}]" for n in range(len(PARTS[row["kind"]]))]
    return [path]


def shown_value(value: Any, row: dict[str, Any]) -> Any:
    """Return a value as its control takes it."""
    if row["kind"] == "flag":
        return bool(value)
    if row["kind"] == "numbers":
        return ", ".join(f"{v:g}" if isinstance(v, (int, float)) else str(v) for v in value or ())
    if row["kind"] == "table":
        return "; ".join(f"{k} {_span(v)}" for k, v in (value or {}).items())
    if value is None:
        return ""
    if isinstance(value, (list, dict)):
        return ", ".join(str(v) for v in value)
    return value


def _span(value: Any) -> str:
    return " to ".join(f"{v:g}" if isinstance(v, (int, float)) else str(v) for v in value)


def read_value(value: Any, row: dict[str, Any] | None) -> Any:
    """Return what a control sent as the study file has it; what makes no sense goes on to the reader as it is."""
    if row is None or isinstance(value, bool):
        return value
    if row["kind"] in ("number", "whole", "point", "pair"):
        if value in ("", None):
            return None
        number = _number(value)
        return int(number) if isinstance(number, float) and row["kind"] == "whole" and number.is_integer() else number
    if row["kind"] == "numbers" and isinstance(value, str):
        return [_number(cell.strip()) for cell in value.split(",") if cell.strip()]
    if row["kind"] == "table" and isinstance(value, str):
        return _table(value)
    if value == "" and not row["required"] and row["default"] is None:
        return None
    return value


def _number(value: Any) -> Any:
    try:
        return float(value) if not isinstance(value, (int, float)) else value
    except (TypeError, ValueError):
        return value


def _table(text: str) -> dict[str, Any]:
    """Return `lever.length_mm 120 to 300; ...` as keys with their bounds."""
    found: dict[str, Any] = {}
    for part in text.split(";"):
        name, _, span = part.strip().partition(" ")
        if name:
            found[name] = [_number(v.strip()) for v in span.split("to")] if span.strip() else []
    return found


def field(path: str, row: dict[str, Any], data: dict[str, Any], problem: str = "") -> html.Div:
    """Return the control of one key, with its help, range and problem."""
    kind = row["kind"]
    inner = inner_paths(path, row, data)
    if len(inner) > 1:
        body = _many(path, inner, row, data, problem)
    elif kind in ("number", "whole"):
        body = _one_number(path, row, value_at(data, path), problem)
    else:
        body = _worded(path, row, shown_value(value_at(data, path), row), problem)
    return html.Div(body, className=f"field field-{kind}")


def window(row: dict[str, Any], value: Any) -> tuple[float, float, float]:
    """Return low, high and step of a slider: a span about the value in which the hand can be exact."""
    low, high = float(row["low"]), float(row["high"])
    full = high - low
    middle = float(value) if isinstance(value, (int, float)) else low + full / 2.0
    half = max(0.6 * abs(middle), _HALF_WINDOW.get(row["unit"], full / 20.0))
    fine = 10.0 ** math.floor(math.log10(max(min(full, 2.0 * half), 1e-9) / 80.0))
    step = _STEP.get(row["unit"], fine) if full > 40.0 else fine
    if full <= 2.0 or full <= 2.0 * half:
        return low, high, step if row["kind"] != "whole" else max(step, 1.0)
    middle = min(max(middle, low), high)
    return (
        max(low, math.floor((middle - half) / step) * step),
        min(high, math.ceil((middle + half) / step) * step),
        step if row["kind"] != "whole" else max(1.0, step),
    )


def _number_input(path: str, name: str, row: dict[str, Any], value: Any, *, problem: str = "", visible: bool) -> Any:
    extra: dict[str, Any] = {"label": name} if visible else {"aria-label": name}
    return dmc.NumberInput(
        id=of(Part.VALUE, path),
        value=value if value is not None else "",
        suffix=f"\u202f{row['unit']}" if row["unit"] and len(row["unit"]) < 5 else "",
        step=window(row, value)[2] if row["low"] is not None else 1,
        clampBehavior="none",
        hideControls=True,
        size="xs",
        error=problem or None,
        placeholder="" if row["required"] or row["default"] is not None else "not set",
        **extra,
    )


def _one_number(path: str, row: dict[str, Any], value: Any, problem: str) -> list[Any]:
    name = label(row)
    made: list[Any] = [_number_input(path, name, row, value, problem=problem, visible=True)]
    if row["low"] is not None and not (value is None and row["default"] is None and not row["required"]):
        low, high, step = window(row, value)
        at = min(max(float(value), low), high) if isinstance(value, (int, float)) else low
        made.append(
            dmc.Slider(
                id=of(Part.SLIDER, path), value=at, min=low, max=high, step=step, size=2, updatemode="drag",
                label=None, thumbLabel=f"{name}, slider", thumbSize=14,
            )
        )  # fmt: skip
    made.append(html.P(range_words(row), className="help"))
    return made


def _many(path: str, inner: list[str], row: dict[str, Any], data: dict[str, Any], problem: str) -> list[Any]:
    names = PARTS[row["kind"]]
    boxes = [
        _number_input(p, f"{label(row)}, {n}", row, value_at(data, p), visible=False)
        for p, n in zip(inner, names, strict=True)
    ]
    captioned = [html.Div([html.Span(n, className="caption"), b]) for n, b in zip(names, boxes, strict=True)]
    unit = f", {row['unit']}" if row["unit"] else ""
    return [
        html.Fieldset(
            [html.Legend(label(row) + unit), html.Div(captioned, className=f"many many-{len(names)}")],
        ),
        html.P(problem, id=of(Part.PROBLEM, path), className="problem"),
        html.P(range_words(row), className="help"),
    ]


def _worded(path: str, row: dict[str, Any], value: Any, problem: str) -> list[Any]:
    name, key = label(row), of(Part.VALUE, path)
    common = {"id": key, "label": name, "size": "xs"}
    if row["kind"] == "flag":
        body: Any = dmc.Switch(checked=bool(value), **common)
    elif row["kind"] == "choice" or (row["choices"] and value in row["choices"]):
        choices: list[Any] = list(dict.fromkeys([*row["choices"], *([value] if value else [])]))
        body = dmc.Select(data=choices, value=value, allowDeselect=False, error=problem or None, **common)
    elif row["name"] == "notes":
        body = dmc.Textarea(value=str(value), autosize=True, error=problem or None, **common)
    else:
        body = dmc.TextInput(value=str(value), error=problem or None, **common)
    return [body, html.P(range_words(row), className="help")]


def kind_choice(path: str, section: str, kind: str) -> dmc.Select:
    """Return the choice of a section's kind."""
    return dmc.Select(
        id=of(Part.VALUE, path), data=kinds_of(section), value=kind, label="kind" if section != "zones" else "shape",
        size="xs", allowDeselect=False,
    )  # fmt: skip
