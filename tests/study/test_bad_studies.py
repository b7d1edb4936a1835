"""Every bad study gets its sentences: all problems at once, exit code 2, no traceback, nothing written."""

import subprocess
import sys

import pytest

from ergo.cli.main import main
from ergo.errors import StudyError
from ergo.study.reader import read
from tests.study.bad_cases import CASES, FILES


@pytest.fixture
def folder(tmp_path):
    for name, text in FILES.items():
        (tmp_path / name).write_text(text)
    return tmp_path


def put(folder, content):
    path = folder / "study.toml"
    path.write_bytes(content if isinstance(content, bytes) else content.encode())
    return path


@pytest.mark.parametrize("name", CASES)
def test_bad_study(name, folder, capsys):
    content, expected = CASES[name]
    path = put(folder, content)
    before = sorted(p.name for p in folder.iterdir())
    assert main(["check", str(path), "--json", str(folder / "out.json")]) == 2
    out, err = capsys.readouterr()
    assert out == ""
    for part in expected:
        assert part in err, err
    assert "Traceback" not in err
    assert sorted(p.name for p in folder.iterdir()) == before


def test_there_are_at_least_forty():
    assert len(CASES) >= 40


def test_missing_file_names_the_shipped_studies(capsys):
    assert main(["check", "nowhere.toml"]) == 2
    assert "there is no such file; name a file, or a shipped study" in capsys.readouterr().err


def test_a_folder_is_no_study(tmp_path, capsys):
    assert main(["check", str(tmp_path)]) == 2
    assert "is a folder" in capsys.readouterr().err


def test_the_real_command_keeps_quiet_about_its_insides(folder):
    path = put(folder, CASES["many_at_once"][0])
    done = subprocess.run([sys.executable, "-m", "ergo", "check", str(path)], capture_output=True, text=True, check=False)
    assert done.returncode == 2
    assert "Traceback" not in done.stderr
    assert done.stderr.startswith("6 problems:")


def test_a_variant_that_is_not_there_is_named(folder, capsys):
    assert main(["check", "gasket_punch", "--variant", "shorter"]) == 2
    assert "no variant of that name, got shorter (allowed: longer, other_angle)" in capsys.readouterr().err


def test_changed_values_are_checked_like_a_file(folder):
    study = read(put(folder, "[lever]\npivot_mm=[150,250,1100]\nlength_mm=300\nstart_deg=-20\nend_deg=50\n[load]\nkind='constant'\nforce_n=1\n"))
    with pytest.raises(StudyError, match="is outside its range, got 1"):
        study.with_values({"lever.length_mm": 1.0})
    with pytest.raises(StudyError, match="is not a key of a study"):
        study.with_values({"lever.width_mm": 1.0})
    assert study.with_values({"lever.length_mm": 250.0}).lever.length_mm == 250.0
