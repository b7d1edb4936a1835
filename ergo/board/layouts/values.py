"""The drawer of values: every key of the study file, grouped by the file's own sections."""

from typing import Any

from dash import html

from ergo.board.attributes import attributes
from ergo.board.controls import KIND_KEY, LISTS, SECTIONS, control_paths, field, kind_choice
from ergo.board.draft import Draft, problems_by_field
from ergo.board.ids import Part, of

OPEN_AT_FIRST = ("lever",)
OPTIONAL = ("screw", "structure")


def drawer(draft: Draft) -> list[Any]:
    """Return the sections of the drawer."""
    told = problems_by_field(draft.problems)
    return [_section(section, title, draft.data, told) for section, title in SECTIONS.items()
            if _offered(section, draft.data)]  # fmt: skip


def shape(draft: Draft) -> str:
    """Return which controls the drawer has, so that it is built anew only when they change."""
    kinds = [str(p.get(k, "")) for s, k in KIND_KEY.items() for p in _parts(draft.data, s)]
    return "|".join([*control_paths(draft.data), *kinds])


def problem_list(draft: Draft) -> list[dict[str, str]]:
    """Return the problems as place and sentence, for the list above the fields."""
    return [{"where": w, "text": t} for w, t in problems_by_field(draft.problems).items()]


def _offered(section: str, data: dict[str, Any]) -> bool:
    if section == "path":
        return "path" in data
    return not (section in ("lever", "linkage", "load") and "path" in data)


def _parts(data: dict[str, Any], section: str) -> list[dict[str, Any]]:
    found = data.get(section)
    return [p for p in (found if isinstance(found, list) else [found]) if isinstance(p, dict)]


def _section(section: str, title: str, data: dict[str, Any], told: dict[str, str]) -> html.Details:
    body: list[Any] = []
    if section in LISTS:
        body += [_entry(section, n, data, told) for n in range(len(_parts(data, section)))]
        if section != "variants":
            body.append(_button(f"Add a {section.removesuffix('s').replace('_', ' ')}", Part.ADD, section))
    elif section in data:
        body += _fields(section, data, told)
        if section in OPTIONAL:
            body.append(_button("Take out this section", Part.REMOVE, section))
    elif section in OPTIONAL:
        body.append(_button("Add this section", Part.ADD, section))
    summary = [html.Span(title), html.Span(_gist(section, data), className="gist")]
    return html.Details(
        [html.Summary(summary), html.Div(body, className="fields")],
        open=section in OPEN_AT_FIRST, className="section", **attributes(data_section=section),
    )  # fmt: skip


def _gist(section: str, data: dict[str, Any]) -> str:
    """Return what the section says in a few figures, to be read while it is closed."""
    part = data.get(section)
    if isinstance(part, list):
        return str(len(part)) if part else "none"
    if not isinstance(part, dict):
        return "none" if section in OPTIONAL else ""
    key = {"bench": "surface_height_mm", "operators": "population", "grip": "kind", "linkage": "kind", "load": "kind",
           "lever": "axis"}.get(section, "")  # fmt: skip
    value = part.get(key, "")
    if section == "bench" and isinstance(value, (int, float)):
        return f"{value:g}\u202fmm"
    return value.replace("_", " ") if isinstance(value, str) else ""


def _fields(section: str, data: dict[str, Any], told: dict[str, str], place: str = "") -> list[Any]:
    place = place or section
    rows = {p: r for p, r in control_paths(data).items() if p.rpartition(".")[0] == place}
    body = [field(path, row, data, told.get(path, "")) for path, row in rows.items()]
    if section in KIND_KEY:
        key = f"{place}.{KIND_KEY[section]}"
        part = next((p for n, p in enumerate(_parts(data, section)) if place in (section, f"{section}[{n}]")), {})
        body.insert(0, html.Div(kind_choice(key, section, str(part.get(KIND_KEY[section], ""))), className="field"))
    return body


def _entry(section: str, n: int, data: dict[str, Any], told: dict[str, str]) -> html.Fieldset:
    place = f"{section}[{n}]"
    part = _parts(data, section)[n]
    name = str(part.get("name", "")) or f"number {n + 1}"
    changes = part.get("set", {})
    lines = [html.Li(f"{key} = {value}") for key, value in changes.items()] if isinstance(changes, dict) else []
    return html.Fieldset(
        [html.Legend(name), *_fields(section, data, told, place), html.Ul(lines, className="changes"),
         _button(f"Take out {name}", Part.REMOVE, place)],
        className="entry",
    )


def _button(text: str, part: Part, path: str) -> html.Button:
    return html.Button(text, id=of(part, path), n_clicks=0, className="quiet")
