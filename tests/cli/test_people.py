"""`pullward people`: the list, one table, JSON alone, and what is said when a table is not there."""

import json

import pytest

from ergo.cli.main import main

POPULATIONS = ("us_army_2012", "us_adults_2015", "germany_2005", "great_britain", "japan", "china_1988", "hong_kong")
OWN = (
    "sex,dimension,unit,mean,sd\nfemale,stature,mm,1600,60\nfemale,body_mass,kg,65,11\n"
    "male,stature,mm,1720,65\nmale,body_mass,kg,75,12\n"
)


def test_the_list_names_every_population_in_eighty_columns(capsys):
    assert main(["people"]) == 0
    text = capsys.readouterr().out
    assert all(name in text for name in POPULATIONS)
    assert "body_mass" in text
    assert max(map(len, text.splitlines())) <= 80


@pytest.mark.parametrize("name", POPULATIONS)
def test_one_table_reads_by_sex_with_statuses_and_caveats(name, capsys):
    assert main(["people", name]) == 0
    text = capsys.readouterr().out
    assert max(map(len, text.splitlines())) <= 80
    for words in ("Women: dimensions", "Men: links", "upper arm link, mm", "Caveats", "status"):
        assert words in text
    assert "memory: recalled, not checked against the print" in text


def test_german_figures_stand_in_the_table(capsys):
    main(["people", "germany_2005"])
    lines = [line.split() for line in capsys.readouterr().out.splitlines() if line.startswith("stature, mm")]
    # DIN 33402-2: P5, P50, P95 of women and men, and the status.
    assert [[line[3], line[4], line[5], line[7]] for line in lines] == [
        ["1535", "1625", "1720", "seen"],
        ["1650", "1750", "1855", "seen"],
    ]


def test_json_stands_alone_on_standard_output(capsys):
    assert main(["people", "japan", "--json", "-"]) == 0
    out = capsys.readouterr()
    found = json.loads(out.out)
    assert out.err == ""
    assert found["population"] == "japan"
    # P5, P50, P95 as printed; P1 = 1530 (1450 / 1530)^(2.326 / 1.645) and P99 likewise.
    assert found["women"]["stature_mm"] == {"p01": pytest.approx(1418.1, abs=0.1), "p05": 1450.0, "p50": 1530.0,
                                            "p95": 1610.0, "p99": pytest.approx(1644.4, abs=0.1)}  # fmt: skip
    assert found["caveats"]
    assert found["statuses"]["stature_mm"] == "seen"


def test_the_same_bytes_again(capsys):
    texts = []
    for _ in range(2):
        main(["people", "hong_kong", "--json", "-"])
        texts.append(capsys.readouterr().out)
    assert texts[0] == texts[1]


def test_json_goes_to_a_file_beside_the_table(tmp_path, capsys):
    target = tmp_path / "people.json"
    assert main(["people", "japan", "--json", str(target)]) == 0
    assert json.loads(target.read_text(encoding="utf-8"))["population"] == "japan"
    assert "Women: dimensions" in capsys.readouterr().out


def test_a_near_miss_is_met_with_the_list_and_the_nearest(capsys):
    assert main(["people", "germany_2006"]) == 3
    said = capsys.readouterr()
    assert said.out == ""
    assert said.err.count("\n") == 1
    assert "did you mean germany_2005?" in said.err
    assert all(name in said.err for name in POPULATIONS)


def test_a_table_of_ones_own(tmp_path, capsys):
    own = tmp_path / "shop [1].csv"
    own.write_text(OWN)
    assert main(["people", str(own)]) == 0
    text = capsys.readouterr().out
    assert text.startswith("shop [1].csv: Your own table")


def test_problems_of_ones_own_table_are_told_together(tmp_path, capsys):
    own = tmp_path / "own.csv"
    own.write_text(OWN.replace("1600,60", "1.6,0.06").replace("kg,75", "lb,165"))
    assert main(["people", str(own)]) == 2
    said = capsys.readouterr()
    assert said.out == ""
    assert "2 problems" in said.err
    assert "own.csv:2" in said.err
    assert "own.csv:5" in said.err


def test_a_file_that_is_not_there_is_missing_data(tmp_path, capsys):
    assert main(["people", str(tmp_path / "nobody.csv")]) == 3
    said = capsys.readouterr().err
    assert said.count("\n") == 1
    assert "there is no file" in said
