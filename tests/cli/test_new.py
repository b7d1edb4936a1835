"""`pullward new`: a study file that is sound as it stands, and never over an existing one."""

from ergo.cli.main import main
from ergo.study.model import schema
from ergo.study.reader import read


def test_the_file_is_sound_and_commented(tmp_path, capsys):
    target = tmp_path / "lever.toml"
    assert main(["new", str(target)]) == 0
    assert f"pullward check {target}" in capsys.readouterr().out
    text = target.read_text(encoding="utf-8")
    study = read(target)
    assert study.lever is not None
    assert study.variants == read(target).variants
    for section in ("study", "bench", "operators", "lever", "grip", "linkage", "load", "duty", "targets"):
        assert f"[{section}]" in text
    missing = [row["path"] for row in schema() if not row["of_kind"] and row["name"] not in text]
    assert missing == []


def test_the_file_is_judged_without_problems(tmp_path, capsys):
    target = tmp_path / "lever.toml"
    main(["new", str(target)])
    assert main(["check", str(target), "--operators", "50"]) == 0
    said = capsys.readouterr()
    assert said.err == ""
    assert "The lever" in said.out


def test_an_existing_file_is_left_alone(tmp_path, capsys):
    target = tmp_path / "lever.toml"
    target.write_text("mine", encoding="utf-8")
    assert main(["new", str(target)]) == 2
    assert "exists already; nothing was written" in capsys.readouterr().err
    assert target.read_text(encoding="utf-8") == "mine"


def test_a_folder_that_is_not_there(tmp_path, capsys):
    assert main(["new", str(tmp_path / "no" / "lever.toml")]) == 3
    said = capsys.readouterr().err
    assert "cannot be written" in said
    assert said.count("\n") == 1
