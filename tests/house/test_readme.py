"""The README's script runs, and its commands are what CI runs."""

import re
import subprocess
import sys
from pathlib import Path

README = (Path(__file__).resolve().parents[2] / "README.md").read_text(encoding="utf-8")


def block(mark, language):
    return re.search(rf"<!-- {mark} -->\n```{language}\n(.*?)```", README, re.DOTALL).group(1)


def test_the_worked_script_runs(tmp_path):
    done = subprocess.run([sys.executable, "-c", block("worked script", "python")], capture_output=True, text=True,
                          check=False, cwd=tmp_path)  # fmt: skip
    assert done.returncode == 0, done.stderr
    assert "'served':" in done.stdout
    assert "demand_n" in done.stdout


def test_the_two_commands_make_an_environment_and_run():
    assert "pullward check" in block("first command", "sh")
    assert "pytest" in block("test command", "sh")
    assert all("python3 -m venv" in block(mark, "sh") for mark in ("first command", "test command"))


def test_every_command_that_the_readme_names_is_there():
    from ergo.cli.main import available

    named = set(re.findall(r"`pullward ([a-z]+)", README))
    assert named <= set(available())
