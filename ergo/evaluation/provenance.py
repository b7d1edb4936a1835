"""Every number that took part: table, row, value, source, status."""

from collections.abc import Iterable, Mapping

from ergo.datasets import Library
from ergo.sources import STATUSES

# Tables of the person's side that every evaluation uses; load and let-go add their own.
TABLES = ("joint_strength", "strength_variation", "joint_ranges", "stance_parameters", "body_model_parameters",
          "age_strength", "grip_on_handle", "grip_mathiowetz_1985", "repetition", "posture_bands", "en_1005_3",
          "arm_force_mil_std_1472", "segment_parameters_de_leva_1996")  # fmt: skip
_NAMES = ("name", "function", "item", "direction", "segment", "sex", "dimension")
_VALUES = ("value", "men_nm", "professional_n", "multiplier", "p5_men_n", "mean_n", "mass_pct_body", "mean", "p50")


def numbers_used(library: Library, population: str, extra: Iterable[str]) -> tuple[Mapping[str, str], ...]:
    """Return one entry a row of every table that took part, weakest status first."""
    tables = [*TABLES, *extra]
    if not population.endswith(".csv"):
        tables.append(population)
    found = [entry for key in dict.fromkeys(tables) for entry in _entries(library, key)]
    return tuple(sorted(found, key=lambda e: (-STATUSES.index(e["status"]), e["table"], e["row"])))


def memory_tables(used: tuple[Mapping[str, str], ...]) -> list[str]:
    """Return the titles of tables that hold recalled numbers."""
    return sorted({entry["title"] for entry in used if entry["status"] == "memory"})


def _entries(library: Library, key: str) -> list[dict[str, str]]:
    table = library.table(key)
    found = []
    for row in table.rows:
        name = " ".join(row[n] for n in _NAMES if row.get(n))
        value = next((row[v] for v in _VALUES if row.get(v)), "")
        entry = {"table": key, "title": table.title, "row": name, "value": value, "unit": row.get("unit", "")}
        entry |= {"source": table.source_of(row), "locator": row.get("locator", ""), "status": table.status_of(row)}
        found.append(entry)
    return found
