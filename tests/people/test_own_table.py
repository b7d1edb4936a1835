"""A user's own population table: enough, or every problem told at once with its line."""

import numpy as np
import pytest

from ergo.datasets import library
from ergo.errors import StudyError
from ergo.people.operators import draw
from ergo.people.own_table import read_own_table
from ergo.people.percentiles import percentiles

LIBRARY = library()
HEAD = "sex,dimension,unit,mean,sd\n"
ENOUGH = (
    "female,stature,mm,1600,60\nfemale,body_mass,kg,65,11\nmale,stature,mm,1720,65\nmale,body_mass,kg,75,12\n"
)


def problems_of(folder, text):
    """Return the sentences for a file of this text (str or bytes)."""
    path = folder / "own.csv"
    path.write_bytes(text if isinstance(text, bytes) else text.encode("utf-8"))
    with pytest.raises(StudyError) as caught:
        read_own_table(LIBRARY, path)
    return [p.sentence() for p in caught.value.problems]


def test_stature_and_mass_are_enough(tmp_path):
    own = tmp_path / "own.csv"
    own.write_text(HEAD + ENOUGH)
    people = draw(LIBRARY, own, women_share=0.5, count=4000, seed=1)
    # Means of 2000 people: standard errors 1.3 mm, 0.27 kg and 1 mm of the SD; four of each are allowed.
    assert people.stature_m[people.women].mean() == pytest.approx(1.600, abs=0.005)
    assert people.mass_kg[~people.women].mean() == pytest.approx(75.0, abs=1.0)
    assert people.stature_m[~people.women].std() == pytest.approx(0.065, abs=0.004)
    assert percentiles(LIBRARY, own)["population"] == "own.csv"


def test_percentiles_may_stand_for_mean_and_sd(tmp_path):
    own = tmp_path / "own.csv"
    rows = ENOUGH.replace("\n", ",,,\n").replace("female,stature,mm,1600,60,,,", "female,stature,mm,,,1500,1610,1700")
    own.write_text(HEAD.strip() + ",p05,p50,p95\n" + rows)
    marks = percentiles(LIBRARY, own)["women"]["stature_mm"]
    assert (marks["p05"], marks["p50"], marks["p95"]) == (1500, 1610, 1700)


def test_a_dimension_of_the_users_own_is_honoured(tmp_path):
    own = tmp_path / "own.csv"
    own.write_text(HEAD + ENOUGH + "male,elbow_grip_length,mm,300,15\nfemale,shoulder_height_sitting,mm,540,25\n")
    people = draw(LIBRARY, own, women_share=0.5, count=4000, seed=1)
    assert people.forearm_grip_m[~people.women].mean() == pytest.approx(0.300 - 0.013, abs=0.002)
    assert people.acromion_above_seat_m[people.women].mean() == pytest.approx(0.540, abs=0.003)
    found = percentiles(LIBRARY, own)
    assert found["statuses"]["stature_mm"] == "memory"
    assert any("your own" in caveat for caveat in found["caveats"])


def test_every_problem_is_told_at_once_with_its_line(tmp_path):
    told = problems_of(tmp_path, HEAD + "women,stature,mm,1600,60\nmale,hieght,mm,1720,65\nmale,stature,cm,172,x\n")
    assert any(t.startswith("own.csv:2: has an unknown sex, got women") and "did you mean female?" in t for t in told)
    assert any(t.startswith("own.csv:3: has an unknown dimension") and "did you mean stature?" in t for t in told)
    assert any(t.startswith("own.csv:4: has the wrong unit, got cm (allowed: mm)") for t in told)
    assert any(t.startswith("own.csv:4: sd is no number above zero, got x") for t in told)
    assert any(t.startswith("own.csv: has no body_mass of the sex male") for t in told)


@pytest.mark.parametrize(
    ("row", "expected"),
    [
        ("female,stature,mm,1.6,0.06", "stature is no body size in mm, got 1.6"),
        ("female,stature,mm,1600000,60000", "stature is no body size in mm"),
        ("female,stature,mm,-1600,60", "mean is no number above zero, got -1600"),
        ("female,stature,mm,nan,60", "mean is no number above zero, got nan"),
        ("female,stature,mm,inf,60", "mean is no number above zero, got inf"),
        ("female,stature,mm,1600,0", "sd is no number above zero, got 0"),
        ("female,stature,mm,1600,6", "sd is no spread of a body size beside its mean, got 6"),
        ("female,stature,mm,1600,900", "sd is no spread of a body size beside its mean, got 900"),
        ("female,stature,,1600,60", "has the wrong unit, got nothing (allowed: mm)"),
        ("female,stature,mm,1600,60,70", "has more cells than the first line names, got 70"),
        ("female,stature,mm,,", "mean is no number above zero, got nothing"),
        ("female,shoulder_height_sitting,mm,54,3", "shoulder_height_sitting is no body size in mm, got 54"),
    ],
)
def test_a_bad_row_is_told(tmp_path, row, expected):
    told = problems_of(tmp_path, HEAD + ENOUGH.replace("female,stature,mm,1600,60", row))
    assert any(t.startswith("own.csv:2: ") and expected in t for t in told), told


def test_a_slip_of_unit_is_met_with_what_was_meant(tmp_path):
    told = problems_of(tmp_path, HEAD + ENOUGH.replace("1600,60", "1.6,0.06"))
    assert len(told) == 1
    assert told[0].startswith("own.csv:2: stature is no body size in mm, got 1.6 (allowed: ")
    assert told[0].endswith("did you mean 1600?")


@pytest.mark.parametrize(
    ("marks", "expected"),
    [
        ("1700,1610,1500", "percentiles do not rise, got 1700, 1610, 1500"),
        ("1500,,1700", "p50 is no number above zero, got nothing"),
        ("1650,1700,1750", "mean lies outside p05 to p95, got 1600"),
    ],
)
def test_bad_percentiles_are_told(tmp_path, marks, expected):
    rows = ENOUGH.replace("\n", ",,,\n").replace("1600,60,,,", f"1600,60,{marks}")
    told = problems_of(tmp_path, HEAD.strip() + ",p05,p50,p95\n" + rows)
    assert any(expected in t for t in told), told


def test_the_same_dimension_twice_is_told(tmp_path):
    told = problems_of(tmp_path, HEAD + ENOUGH + "male,stature,mm,1730,65\n")
    assert any(t.startswith("own.csv:6: gives the same sex and dimension again") and "own.csv:4" in t for t in told)


@pytest.mark.parametrize(
    ("content", "expected"),
    [
        (b"", "lacks the columns sex, dimension, unit, mean, sd"),
        (b"sex,dimension,mean,sd\n", "lacks the columns unit"),
        (HEAD.encode(), "has no rows"),
        (b"\xff\xfe\x00", "is not UTF-8 text"),
        (b'sex,dimension,unit,mean,sd\nfemale,"stature,mm,1,2\n', "cannot be read"),
        (b"x" * 1_000_001, "is too large for a table, got 1.0 MB (allowed: up to 1 MB)"),
    ],
)
def test_a_file_that_is_no_table_is_told(tmp_path, content, expected):
    told = problems_of(tmp_path, content)
    assert len(told) == 1
    assert expected in told[0]


def test_a_missing_file_or_a_folder_is_told(tmp_path):
    with pytest.raises(StudyError, match="there is no such file"):
        read_own_table(LIBRARY, tmp_path / "nobody.csv")
    with pytest.raises(StudyError, match="cannot be read"):
        read_own_table(LIBRARY, tmp_path)


def test_a_byte_order_mark_and_blanks_do_no_harm(tmp_path):
    own = tmp_path / "own.csv"
    own.write_bytes(b"\xef\xbb\xbf" + (HEAD + ENOUGH).replace(",", " , ").encode())
    assert len(read_own_table(LIBRARY, own)) == 4


def test_women_of_the_users_table_do_not_touch_its_men(tmp_path):
    first, other = tmp_path / "first.csv", tmp_path / "other.csv"
    first.write_text(HEAD + ENOUGH)
    other.write_text(HEAD + ENOUGH.replace("1600,60", "1650,55"))
    men = [draw(LIBRARY, p, women_share=0.0, count=64, seed=5).stature_m for p in (first, other)]
    assert np.array_equal(*men)
