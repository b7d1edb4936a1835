"""A commented study file with every key, from the same description that the reader checks."""

from typing import Any

from ergo.study.model import schema

HEAD = """# A Pullward study: one bench, one lever, its people. Lengths in mm, forces in N, angles in degrees.
# Station frame: origin on the floor below the middle of the bench's front edge; x to the operator's right,
# y away from the operator into the machine, z up. Lever angle 0 is straight up (toward the operator for an upright
# axis); positive turns the handle toward the operator (sideways axis), to the right (fore-aft axis),
# counter-clockwise seen from above (upright axis). Keys behind # show their defaults or what may stand there.
"""
# What a new study starts with: a lever that works, so that the file can be judged at once.
START: dict[str, Any] = {
    "study.title": "My lever",
    "lever.pivot_mm": [150, 250, 1100],
    "lever.length_mm": 300,
    "lever.start_deg": -20,
    "lever.end_deg": 50,
    "linkage.kind": "handle",
    "load.kind": "constant",
    "load.force_n": 60,
}
SECTIONS = ("study", "bench", "operators", "lever", "grip", "linkage", "load", "duty", "targets")
OPTIONAL = ("screw", "structure")
LISTS = {
    "zones": '# name = "spindle"\n# role = "hazard"\n# shape = "cylinder"\n# from_mm = [0, 250, 950]\n# to_mm = [0, 250, 1100]\n'
             "# radius_mm = 40\n",
    "touch_points": '# name = "switch"\n# at_mm = [300, 50, 950]\n',
    "variants": '# name = "longer"\n# set = { "lever.length_mm" = 360 }\n',
}  # fmt: skip


def template() -> str:
    """Return the text of a new study; it reads back without problems."""
    rows = schema()
    parts = [HEAD]
    for section in SECTIONS:
        parts.append(f"[{section}]")
        parts += _section(section, rows)
    for section in OPTIONAL:
        parts.append(f"# [{section}]")
        parts += [f"# {line}" if not line.startswith("#") else line for line in _section(section, rows)]
    parts.append('# [path]  # in place of lever, linkage and load\n# file = "path.csv"  # columns x_mm, y_mm, z_mm, force_n\n')
    parts += [f"# [[{name}]]\n{text}" for name, text in LISTS.items()]
    return "\n".join(parts)


def _section(section: str, rows: list[dict[str, Any]]) -> list[str]:
    kinds = list(dict.fromkeys(r["of_kind"] for r in rows if r["section"] == section))
    lines = []
    if kinds != [""]:
        chosen = START[f"{section}.kind"]
        lines.append(f'kind = "{chosen}"  # one of: {", ".join(kinds)}')
        shared = _shared(section, rows, kinds)
        lines += [_line(r) for r in rows if r["section"] == section and r["of_kind"] == chosen]
        for kind in kinds:
            own = [r for r in rows if r["section"] == section and r["of_kind"] == kind and r["name"] not in shared]
            if kind != chosen and own:
                lines.append(f"# for {kind}:")
                lines += [f"#   {_line(r).removeprefix('# ')}" for r in own]
    else:
        lines = [_line(r) for r in rows if r["section"] == section]
    return [*lines, ""]


def _shared(section: str, rows: list[dict[str, Any]], kinds: list[str]) -> set[str]:
    """Return the keys that every kind of a section has."""
    names = [{r["name"] for r in rows if r["section"] == section and r["of_kind"] == kind} for kind in kinds]
    return set.intersection(*names)


def _line(row: dict[str, Any]) -> str:
    value = START.get(row["path"], row["default"])
    note = row["help"]
    span = "" if row["low"] is None else f"{row['low']:g} to {row['high']:g}"
    limits = ", ".join(t for t in (f"{span} {row['unit']}".strip(), " | ".join(map(str, row["choices"]))) if t)
    text = f"{row['name']} = {_toml(value, row['kind'])}  # {note}" + (f" ({limits})" if limits else "")
    off = row["path"] not in START and (row["required"] or row["default"] in (None, "", (), {}))
    return f"# {text}" if off else text


def _toml(value: Any, kind: str) -> str:
    if value is None:
        return {"text": '"..."', "point": "[0, 0, 0]", "pair": "[0, 0]"}.get(kind, "0")
    if isinstance(value, bool):
        return "true" if value else "false"
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, (list, tuple)):
        return "[" + ", ".join(_toml(v, "") for v in value) + "]"
    if isinstance(value, dict):
        return '{ "lever.length_mm" = [200, 400] }'
    return f"{value:g}"
