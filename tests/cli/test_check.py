"""`pullward check`: JSON alone, exit codes, eighty columns without colour, variants, operators and seed."""

import functools
import json
import os
import re
import subprocess
import sys

import pytest

from ergo.cli.main import main
from ergo.cli.studies import shipped_studies
from ergo.study.reader import read

SHIPPED = tuple(shipped_studies())
ESCAPE = "\x1b"
QUICK = """
[study]
title = "A crank with a [bold] name"
positions = 5
[operators]
count = 50
seed = 4
[lever]
pivot_mm = [150, 250, 1050]
length_mm = 280
start_deg = -30
end_deg = 30
[load]
kind = "constant"
force_n = 5
lets_go_at = 0.6
[duty]
strokes_per_minute = 0.1
[[variants]]
name = "heavy"
set = { "load.force_n" = 900 }
"""


@pytest.fixture
def study(tmp_path):
    path = tmp_path / "crank.toml"
    path.write_text(QUICK, encoding="utf-8")
    return path


@functools.cache
def piped(*words, no_color="1"):
    """Run the command as a pipe sees it."""
    kept = {name: value for name, value in os.environ.items() if name not in ("NO_COLOR", "FORCE_COLOR", "COLUMNS")}
    clean = {**kept, "NO_COLOR": no_color} if no_color else kept
    return subprocess.run([sys.executable, "-m", "ergo", *words], capture_output=True, text=True, check=False, env=clean)


@pytest.mark.parametrize("name", SHIPPED)
def test_shipped_studies_fill_eighty_columns_without_colour(name):
    done = piped("check", name, "--operators", "60")
    assert done.returncode == 0, done.stderr
    assert done.stderr == ""
    assert ESCAPE not in done.stdout
    assert [line for line in done.stdout.splitlines() if len(line) > 80] == []
    for heading in ("The stroke", "What decides it, and what is not known", "Cautions"):
        assert heading in done.stdout
    for rating in ("direction", "reach", "force", "posture", "clearance", "let-go", "served"):
        assert f"  {rating} " in done.stdout or f"■ {rating} " in done.stdout
    said = " ".join(done.stdout.split())
    assert "screening calculation" in said
    assert "not a risk assessment" in said
    assert read(shipped_studies()[name]).study.title in said


def test_a_pipe_gets_no_colour_even_unasked(study):
    assert ESCAPE not in piped("check", str(study), no_color="").stdout


def test_json_stands_alone(study, capsys):
    assert main(["check", str(study), "--json", "-"]) == 0
    said = capsys.readouterr()
    found = json.loads(said.out)
    assert said.err == ""
    assert said.out.endswith("}\n")
    assert found["people"]["count"] == 50
    assert [row["stroke"] for row in found["stroke"]] == [0.0, 0.25, 0.5, 0.75, 1.0]
    main(["check", str(study), "--json", "-"])
    assert capsys.readouterr().out == said.out


def test_json_to_a_file_leaves_the_words_on_the_screen(study, tmp_path, capsys):
    target = tmp_path / "results.json"
    assert main(["check", str(study), "--json", str(target)]) == 0
    assert json.loads(target.read_text(encoding="utf-8"))["variant"] == ""
    assert capsys.readouterr().out.startswith("A crank with a [bold] name\n")


def test_falling_short_counts_only_when_strict(study, capsys):
    assert main(["check", str(study), "--variant", "heavy"]) == 0
    assert main(["check", str(study), "--variant", "heavy", "--strict"]) == 1
    said = capsys.readouterr().out
    assert "variant heavy" in said
    assert "falls short" in said


def test_strict_agrees_with_the_verdict(study, capsys):
    code = main(["check", str(study), "--strict", "--json", "-"])
    verdict = json.loads(capsys.readouterr().out)["verdict"]
    assert code == {"meets": 0, "falls short": 1}[verdict]


def test_a_variant_that_is_not_there(study, capsys):
    assert main(["check", str(study), "--variant", "light"]) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert "no variant of that name, got light (allowed: heavy)" in said.err


def test_operators_and_seed_from_the_command_line(study, capsys):
    found = {}
    for seed in ("4", "5"):
        main(["check", str(study), "--operators", "64", "--seed", seed, "--json", "-"])
        found[seed] = json.loads(capsys.readouterr().out)
        assert found[seed]["people"]["count"] == 64
        assert found[seed]["manifest"]["seed"] == int(seed)
    assert found["4"]["stroke"][0]["capability_n"] != found["5"]["stroke"][0]["capability_n"]


def test_too_few_operators_are_a_problem(study, capsys):
    assert main(["check", str(study), "--operators", "3"]) == 2
    assert "operators.count" in capsys.readouterr().err


def test_all_problems_of_a_study_at_once(study, capsys):
    study.write_text(QUICK.replace("length_mm = 280", "length_mm = 2800").replace("count = 50", "count = 5"))
    assert main(["check", str(study)]) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert said.err.startswith("2 problems:\n")
    assert "crank.toml: lever.length_mm" in said.err
    assert "crank.toml: operators.count" in said.err


def test_a_study_that_is_not_there(capsys):
    assert main(["check", "nowhere.toml"]) == 2
    said = capsys.readouterr().err
    assert "there is no such file" in said
    assert all(name in said for name in SHIPPED)


def test_a_fixed_pin_is_told_without_a_traceback(study, capsys):
    study.write_text(QUICK + '[linkage]\nkind = "fixed pin"\narm_mm = 45\nplay_mm = 0.5\n')
    assert main(["check", str(study)]) == 2
    said = capsys.readouterr().err
    assert said.count("\n") == 1
    assert "mobility count is 0" in said
    assert "1.3 degrees after" in said or "degrees either side of the arm square" in said


@pytest.mark.parametrize("share", [0.0, 1.0])
def test_a_slide_that_is_wedged_throughout_is_told_in_words(study, share, capsys):
    jam = '[linkage]\nkind = "rack"\npinion_radius_mm = 20\nslide_friction = 0.6\nslide_bearing_mm = 60\nslide_overhang_mm = 60\n'
    study.write_text(QUICK.replace("seed = 4", f"women_share = {share}") + jam)
    assert main(["check", str(study)]) == 0
    said = " ".join(capsys.readouterr().out.split())
    assert "the slide wedges at stroke" in said
    assert "no hand force moves the lever at" in said
    assert "EN 1005-3 has nothing to say" in said
    assert not re.search(r"\b(nan|inf|1000000)\b", said)


def test_results_that_cannot_be_written(study, tmp_path, capsys):
    assert main(["check", str(study), "--json", str(tmp_path / "no" / "results.json")]) == 3
    assert "cannot be written" in capsys.readouterr().err
    assert sorted(p.name for p in tmp_path.iterdir()) == ["crank.toml"]
