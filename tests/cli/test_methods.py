"""`pullward methods`: every method with its range, source, status and check, on paper and as JSON."""

import json

from ergo.cli.main import main
from ergo.datasets import library

ROWS = library().table("methods").rows


def test_the_list_is_whole_in_eighty_columns(capsys):
    assert main(["methods"]) == 0
    text = capsys.readouterr().out
    assert [line for line in text.splitlines() if len(line) > 80] == []
    said = " ".join(text.split())
    for row in ROWS:
        assert f"{row['method']} ({row['file']}) range {row['range']} source {row['source']}" in said
    assert text.count("    status  ") == len(ROWS)
    assert text.count("    check   ") == len(ROWS)
    assert "memory: recalled, not checked against the print" in text


def test_json_stands_alone(capsys):
    assert main(["methods", "--json", "-"]) == 0
    said = capsys.readouterr()
    found = json.loads(said.out)
    assert said.err == ""
    assert [row["method"] for row in found["methods"]] == [row["method"] for row in ROWS]
    hof = next(row for row in found["methods"] if row["source"] == "hof_2005")
    assert hof["published_check"] == "tests/published/test_hof_2005.py"
    assert hof["source_title"]


def test_json_goes_to_a_file(tmp_path, capsys):
    target = tmp_path / "methods.json"
    assert main(["methods", "--json", str(target)]) == 0
    assert len(json.loads(target.read_text(encoding="utf-8"))["methods"]) == len(ROWS)
    assert "Potvin" in capsys.readouterr().out or "potvin_2012" in target.read_text(encoding="utf-8")
