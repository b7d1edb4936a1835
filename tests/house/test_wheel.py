"""A wheel holds the program, its assets and its datasets, and nothing of the tests."""

import shutil
import subprocess
import sys
import zipfile
from pathlib import Path

import pytest

CHECKOUT = Path(__file__).resolve().parents[2]
UNWANTED = shutil.ignore_patterns("__pycache__", "*.pyc", ".git")


@pytest.fixture(scope="module")
def wheel(tmp_path_factory):
    pytest.importorskip("hatchling")
    pytest.importorskip("build")
    source = tmp_path_factory.mktemp("source") / "pullward"
    source.mkdir()
    for name in ("ergo", "assets", "datasets"):
        shutil.copytree(CHECKOUT / name, source / name, ignore=UNWANTED)
    for name in ("pyproject.toml", "README.md", "LICENSE"):
        shutil.copy(CHECKOUT / name, source / name)
    out = tmp_path_factory.mktemp("wheel")
    asked = [sys.executable, "-m", "build", "--wheel", "--no-isolation", "--outdir", str(out), str(source)]
    done = subprocess.run(asked, capture_output=True, text=True, check=False)
    assert done.returncode == 0, done.stdout + done.stderr
    return next(out.glob("*.whl"))


def names(wheel):
    with zipfile.ZipFile(wheel) as opened:
        return set(opened.namelist())


@pytest.mark.slow
def test_everything_shipped_is_inside(wheel):
    inside = names(wheel)
    for top in ("assets", "datasets"):
        for path in (CHECKOUT / top).rglob("*"):
            if path.is_file():
                assert f"ergo/_data/{path.relative_to(CHECKOUT).as_posix()}" in inside
    assert {path.relative_to(CHECKOUT).as_posix() for path in (CHECKOUT / "ergo").rglob("*.py")} <= inside


@pytest.mark.slow
def test_nothing_else_is_inside(wheel):
    tops = {name.split("/")[0] for name in names(wheel)}
    assert {top for top in tops if not top.endswith(".dist-info")} == {"ergo"}


@pytest.mark.slow
def test_it_runs_from_the_wheel_alone(wheel, tmp_path):
    script = (
        "import sys; sys.path.insert(0, sys.argv[1]); import ergo; from ergo.sources import folder;"
        "from ergo.cli.main import main; print(ergo.__file__, folder('datasets')); sys.exit(main(['people', 'japan']))"
    )
    with zipfile.ZipFile(wheel) as opened:
        opened.extractall(tmp_path)
    done = subprocess.run([sys.executable, "-c", script, str(tmp_path)], cwd=tmp_path, capture_output=True, text=True, check=True)
    first, _, rest = done.stdout.partition("\n")
    assert first.split() == [str(tmp_path / "ergo" / "__init__.py"), str(tmp_path / "ergo" / "_data" / "datasets")]
    assert "Women: dimensions" in rest
