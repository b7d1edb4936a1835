"""The command starts light: help and listing of commands load nothing heavy."""

import subprocess
import sys

import pytest

HEAVY = ("numpy", "scipy", "pandas", "numba", "plotly", "dash", "dash_mantine_components", "typst", "pydantic", "rich", "mujoco")
SCRIPT = """
import sys
from ergo.cli.main import main
try:
    main(sys.argv[1:])
except SystemExit as left:
    assert left.code == 0, left.code
sys.stderr.write(" ".join(name for name in sys.modules if "." not in name))
"""


def started(*words):
    done = subprocess.run([sys.executable, "-c", SCRIPT, *words], capture_output=True, text=True, check=True)
    return done.stdout, set(done.stderr.split())


@pytest.mark.parametrize("words", [("--help",), ("--version",), ("check", "--help"), ("board", "--help"), ("methods", "--help")])
def test_help_loads_nothing_heavy(words):
    said, loaded = started(*words)
    assert said
    assert "argparse" in loaded
    assert loaded & set(HEAVY) == set()


def test_help_names_every_command():
    from ergo.cli.main import HELP, available

    said, _ = started("--help")
    for name in available():
        assert f"    {name} " in said
        assert HELP[name][:20] in said


def test_listing_methods_needs_no_drawing_or_compiling():
    said, loaded = started("methods")
    assert "potvin_2012" in said
    assert loaded & {"numba", "plotly", "dash", "typst", "scipy", "pandas"} == set()
