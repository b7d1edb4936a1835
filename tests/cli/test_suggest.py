"""`pullward suggest`: proposals as study files, a clean stop, an honest no, refusals before the search."""

import json
import os
import signal
import subprocess
import sys
import time

import pytest

import ergo
from ergo.cli.main import main

# Easy to meet: a lower load than the shipped clamp's, few people; turning the stroke round is enough.
EASY = {"load.rate_n_per_mm": 1.0, "load.preload_n": 10.0, "targets.served_share": 0.7}
FEW = ["--operators", "60", "--trials", "24"]


@pytest.fixture
def easy(tmp_path):
    """A file of an easy study with `[targets.free]`."""
    study = ergo.read_study("fixture_clamp").with_values({**EASY, "study.positions": 3})
    path = tmp_path / "easy.toml"
    path.write_text(study.as_toml(), encoding="utf-8")
    return path


def test_proposals_are_told_and_written_as_studies_that_keep_everything_else(easy, tmp_path, capsys):
    answer = tmp_path / "answer.json"
    assert main(["suggest", str(easy), *FEW, "--write", str(tmp_path), "--json", str(answer)]) == 0
    said, found = capsys.readouterr().out, json.loads(answer.read_text(encoding="utf-8"))
    told = [line for line in said.splitlines() if not line.startswith("written: ")]
    assert max(map(len, told)) <= 80
    assert said.count("now (95 %)") == said.count("written: ") == len(found["proposals"])
    assert 1 <= len(found["proposals"]) <= 3
    assert [p.name for p in sorted(tmp_path.glob("easy_proposal_*.toml"))] == [
        f"easy_proposal_{n + 1}.toml" for n in range(len(found["proposals"]))]  # fmt: skip
    first, study = found["proposals"][0], ergo.read_study(easy)
    written = ergo.read_study(tmp_path / "easy_proposal_1.toml")
    changes = {row["key"]: row["to"] for row in first["changes"]}
    assert first["meets"]
    assert sum(row["cost"] for row in first["changes"]) == pytest.approx(first["cost"])
    assert changes["lever.end_deg"] == written.lever.end_deg
    assert {k: v for k, v in written.content()["lever"].items() if f"lever.{k}" not in changes} == {
        k: v for k, v in study.content()["lever"].items() if f"lever.{k}" not in changes}  # fmt: skip
    assert written.content()["load"] == study.content()["load"]


def test_files_that_are_there_are_never_overwritten(easy, tmp_path, capsys):
    mine = tmp_path / "easy_proposal_2.toml"
    mine.write_text("mine", encoding="utf-8")
    assert main(["suggest", str(easy), *FEW, "--write", str(tmp_path)]) == 2
    assert "would overwrite; nothing was tried" in capsys.readouterr().err
    assert mine.read_text(encoding="utf-8") == "mine"


def test_a_folder_that_is_not_there(easy, tmp_path, capsys):
    assert main(["suggest", str(easy), *FEW, "--write", str(tmp_path / "no")]) == 2
    assert "--write: is no folder" in capsys.readouterr().err


def test_bounds_that_leave_no_way_name_what_blocks(capsys):
    """A clamp lever that may only grow by a few millimetres stays a push."""
    words = ["suggest", "fixture_clamp", "--free", "lever.length_mm=215:225", *FEW]
    assert main([*words, "--strict"]) == 1
    said = capsys.readouterr().out
    assert "No: nothing inside the bounds was found" in said
    assert "direction    at best 0 where 80 is asked" in said


def test_ctrl_c_stops_cleanly_and_writes_nothing(easy, tmp_path):
    command = [sys.executable, "-m", "ergo", "suggest", str(easy), "--operators", "2000", "--write", str(tmp_path)]
    running = subprocess.Popen(command, stdout=subprocess.PIPE, stderr=subprocess.PIPE, text=True, env={**os.environ})
    time.sleep(6.0)
    running.send_signal(signal.SIGINT)
    out, err = running.communicate(timeout=60)
    assert (running.returncode, out, err.strip()) == (130, "", "stopped")
    assert list(tmp_path.glob("*proposal*")) == []
