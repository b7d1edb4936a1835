"""What the report rests on: inputs with their keys, tables with their gaps, sources with their status, manifest."""

from collections.abc import Iterator, Mapping
from typing import Any

from ergo.datasets import library, table_keys
from ergo.evaluation.results import Results
from ergo.pictures.sheet import plain
from ergo.report.blocks import Points, Rows, Words
from ergo.sources import STATUS_MEANING, STATUSES, bibliography
from ergo.study.model import schema

LONGEST_CELL = 12_000


def input_rows(results: Results) -> Rows:
    """Return every value of the study with its key, unit and meaning."""
    about = {}
    for row in schema():
        about.setdefault((row["path"], row.get("of_kind", "")), row)
        about.setdefault((row["path"], ""), row)
    rows = []
    for section, content in results.study.items():
        kind = content.get("kind", "") if isinstance(content, Mapping) else ""
        for path, value in _leaves(section, content):
            key = _key_of(path)
            row = about.get((key, kind)) or about.get((key, ""), {})
            rows.append((path, _shown(value), str(row.get("unit", "")), str(row.get("help", ""))))
    return Rows("Every value of the study", ("key", "value", "unit", "meaning"), tuple(rows), (0.28, 0.32, 0.08, 0.32))


def _leaves(path: str, value: Any) -> Iterator[tuple[str, Any]]:
    """Every value below a key; a list of plain values stays together."""
    if isinstance(value, Mapping):
        for key, inner in value.items():
            yield from _leaves(f"{path}.{key}", inner)
    elif isinstance(value, (list, tuple)) and any(isinstance(v, Mapping) for v in value):
        for number, inner in enumerate(value):
            yield from _leaves(f"{path}[{number}]", inner)
    else:
        yield path, value


def _key_of(path: str) -> str:
    head, _, rest = path.partition("[")
    return head + rest.partition("]")[2] if rest else path


def _shown(value: Any) -> str:
    if value is None:
        return "not given"
    if isinstance(value, bool):
        return "yes" if value else "no"
    if isinstance(value, float):
        return f"{value:g}"
    if isinstance(value, (list, tuple)):
        return ", ".join(_shown(v) for v in value) or "none"
    return plain(value, LONGEST_CELL) or "not given"


def people_blocks(results: Results) -> list[Words | Points]:
    """Return who the operators are and what their table does not cover."""
    people, asked = results.people, results.study["operators"]
    name = str(people["population"])
    ages = asked["age_years"]
    first = Words(
        f"{people['count']} virtual operators, {100 * float(people['women_share']):.0f} % of them women, "
        f"{ages[0]:g} to {ages[1]:g} years old, {asked['posture']}, working with the {asked['hand']} hand, "
        f"glove: {asked['glove']}, "
        f"shoes adding {asked['shoes_mm']:g} mm, drawn from the table {name} with seed {asked['seed']}."
    )
    if name not in table_keys():
        return [first, Words("The table is the user's own file; what it covers is for its maker to say.")]
    table = library().table(name)
    number, status = table.meta.get("n") or "number of people not stated", table.meta.get("status") or "by row"
    about = f"The table: {table.title}; {number}; status {status}."
    gaps = tuple(table.caveats) or ("no gaps are stated with the table",)
    return [first, Words(about), Words("What the table does not cover:"), Points(gaps)]


def tables_used(results: Results) -> Rows:
    """Return each table that took part: its numbers by status, its sources, what it does not cover."""
    by_table: dict[str, list[Mapping[str, str]]] = {}
    for row in results.sources:
        by_table.setdefault(row["table"], []).append(row)
    shipped, rows = set(table_keys()), []
    for key, found in sorted(by_table.items()):
        counts = ", ".join(f"{n} {s}" for s in STATUSES if (n := sum(r["status"] == s for r in found)))
        sources = ", ".join(sorted({r["source"] for r in found}))
        gaps = "; ".join(library().table(key).caveats) if key in shipped else ""
        rows.append((found[0].get("title", key), counts, sources, gaps or "no gap stated"))
    columns = ("method or table", "numbers by status", "sources", "valid for, and what it does not cover")
    return Rows("Methods and tables that took part", columns, tuple(rows), (0.24, 0.14, 0.27, 0.35))


def not_covered(results: Results) -> Points | None:
    """Return where a method was outside its published range, with the reason."""
    names = {
        "table_n": "handbook table",
        "en_1005_3_n": "EN 1005-3",
        "feel_n": "feel",
        "overrun_mm": "overrun",
        "gap_mm": "gap",
    }
    items = tuple(
        f"{names.get(key, key)}: {reason.removeprefix('not covered: ')}"
        for key, reason in results.stroke.not_covered.items()
    )
    return Points(items) if items else None


def recalled_rows(results: Results) -> Rows:
    """Return every number that was recalled and not checked against the print, by table and source."""
    found: dict[tuple[str, str], list[str]] = {}
    for r in results.sources:
        if r["status"] == "memory":
            text = f"{r.get('row', '')} {r.get('value', '')}\u202f{r.get('unit', '')}".strip()
            found.setdefault((r.get("title", r["table"]), r["source"]), []).append(text)
    rows = tuple((title, source, "; ".join(texts)) for (title, source), texts in sorted(found.items()))
    return Rows("Numbers with the status memory", ("table", "source", "numbers"), rows, (0.22, 0.18, 0.6))


def status_words() -> Points:
    """Return what the four statuses mean."""
    return Points(tuple(f"{name}: {meaning}" for name, meaning in STATUS_MEANING.items()))


def bibliography_rows(results: Results) -> Rows:
    """Return the sources actually used."""
    known, rows = bibliography(), []
    for key in sorted({row["source"] for row in results.sources}):
        statuses = [row["status"] for row in results.sources if row["source"] == key]
        counts = ", ".join(f"{n} {s}" for s in STATUSES if (n := statuses.count(s)))
        entry = known[key].entry() if key in known else "not in the bibliography"
        rows.append((key, entry, counts))
    return Rows(
        "Sources of the numbers that took part", ("key", "source", "numbers by status"), tuple(rows), (0.26, 0.58, 0.16)
    )


def manifest_rows(results: Results) -> Rows:
    """Return versions, seed and checksums, so that the result can be made again."""
    rows = []
    for key, value in results.manifest.items():
        for path, inner in _leaves(str(key), value):
            rows.append((path, _shown(inner)))
    return Rows("Manifest", ("what", "value"), tuple(rows), (0.4, 0.6))
