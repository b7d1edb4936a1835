"""Rooms import only what the floors allow: the contracts of pyproject.toml, run as continuous integration runs them."""

import subprocess
import sys
import tomllib
from pathlib import Path

CHECKOUT = Path(__file__).resolve().parents[2]
PROJECT = tomllib.loads((CHECKOUT / "pyproject.toml").read_text(encoding="utf-8"))
CONTRACTS = PROJECT["tool"]["importlinter"]["contracts"]
LINT = "from importlinter.cli import lint_imports_command as lint; lint()"


def test_import_contracts_are_kept(tmp_path):
    asked = [sys.executable, "-c", LINT, "--cache-dir", str(tmp_path), "--config", str(CHECKOUT / "pyproject.toml")]
    done = subprocess.run(asked, cwd=CHECKOUT, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr
    assert f"Contracts: {len(CONTRACTS)} kept, 0 broken." in done.stdout


def test_every_room_stands_on_a_floor():
    floors = next(c["layers"] for c in CONTRACTS if c["type"] == "layers")
    placed = {name.strip().removeprefix("ergo.") for floor in floors for name in floor.split("|")}
    rooms = {p.parent.name for p in (CHECKOUT / "ergo").glob("*/__init__.py")}
    grounds = {p.stem for p in (CHECKOUT / "ergo").glob("*.py")} - {"__init__", "__main__"}
    assert rooms | grounds == placed


def test_person_and_machine_never_import_each_other():
    person, machine = {"ergo.people", "ergo.arm", "ergo.strength"}, {"ergo.mechanism", "ergo.load", "ergo.letgo", "ergo.rating"}
    kept_apart = [
        (set(c["source_modules"]), set(c["forbidden_modules"])) for c in CONTRACTS
        if c["type"] == "forbidden" and not c.get("allow_indirect_imports")
    ]  # fmt: skip
    assert (person, machine) in kept_apart
    assert (machine, person) in kept_apart
