"""Dotted paths into a study, and studies that are written and read again."""

from pathlib import Path

import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st

from ergo.datasets import library
from ergo.errors import StudyError
from ergo.sources import folder
from ergo.study import loads, machine
from ergo.study.paths import steps
from ergo.study.reader import MOST_PROBLEMS, read, read_text
from tests.study.bad_cases import FILES, GOOD

SHIPPED = sorted((folder("datasets") / "studies").glob("*.toml"))
ZONE = '[[zones]]\nname = "a"\nshape = "ball"\ncentre_mm = [0, 900, 1000]\nradius_mm = 10\n'
NUMBERS = {
    "lever.length_mm": (100.0, 500.0), "lever.start_deg": (-40.0, 0.0), "lever.end_deg": (20.0, 60.0),
    "lever.mass_kg": (0.0, 5.0), "grip.tilt_deg": (-30.0, 30.0), "bench.floor_friction": (0.1, 1.0),
    "operators.women_share": (0.0, 1.0), "load.force_n": (0.0, 400.0), "lever.pivot_mm[0]": (-100.0, 300.0),
}  # fmt: skip


def attempt(text):
    """Return the study of a text and no problems, or none and its problems."""
    try:
        return read_text(text, SHIPPED[0].parent), ()
    except StudyError as error:
        return None, error.problems


@pytest.mark.parametrize(
    ("path", "expected"),
    [("lever.length_mm", ["lever", "length_mm"]), ("lever.pivot_mm[2]", ["lever", "pivot_mm", 2]),
     ("zones[0].radius_mm", ["zones", 0, "radius_mm"]), ("a..b", None), ("", None), ("zones[-1].x", None), ("a b.c", None)],
)  # fmt: skip
def test_paths(path, expected):
    assert steps(path) == expected


def test_one_number_of_a_point_and_of_a_zone():
    study = read_text(GOOD + ZONE).with_values({"lever.pivot_mm[2]": 1050.0, "zones[0].radius_mm": 25.0})
    assert study.lever.pivot_mm == (150.0, 250.0, 1050.0)
    assert study.zones[0].radius_mm == 25.0


def test_another_kind_keeps_only_its_own_keys():
    study = read_text(GOOD).with_values({"linkage.pinion_radius_mm": 20.0, "linkage.kind": "rack"})
    assert study.linkage.pinion_radius_mm == 20.0
    assert study.with_values({"linkage.kind": "handle"}).linkage.kind == "handle"


@pytest.mark.parametrize("path", SHIPPED, ids=lambda p: p.stem)
def test_shipped_studies_and_their_variants_read_back_the_same(path):
    study = read(path)
    for made in (study, *(study.variant(v.name) for v in study.variants)):
        again = read_text(made.as_toml(), path.parent, path.name)
        assert again.content() == made.content()
        assert again.digest() == made.digest()


def test_a_measured_path_reads_back(tmp_path):
    (tmp_path / "path.csv").write_text(FILES["path.csv"])
    study = read_text('[path]\nfile = "path.csv"\n', tmp_path)
    assert read_text(study.as_toml(), tmp_path).digest() == study.digest()


@settings(max_examples=60)
@given(st.fixed_dictionaries({}, optional={k: st.floats(*ends, allow_nan=False) for k, ends in NUMBERS.items()}))
def test_any_study_reads_back_the_same(values):
    study = read_text(GOOD).with_values(values)
    again = read_text(study.as_toml())
    assert again.content() == study.content()
    assert again.digest() == study.digest()


@settings(max_examples=150, suppress_health_check=[HealthCheck.too_slow])
@given(st.data())
def test_a_damaged_study_gets_problems_or_is_sound_and_never_falls_over(data):
    text = data.draw(st.sampled_from([GOOD, GOOD + ZONE, SHIPPED[0].read_text(encoding="utf-8")]))
    words = st.sampled_from(["nan", "-1", "1e308", "true", "[]", '""', "{}", "[[1]]", "\x00", "\n", "[x]", "=", '"', "9" * 60, "é"])
    for _ in range(data.draw(st.integers(1, 4))):
        start = data.draw(st.integers(0, len(text)))
        stop = min(len(text), start + data.draw(st.integers(0, 12)))
        text = text[:start] + data.draw(st.one_of(words, st.text(max_size=4))) + text[stop:]
    study, problems = attempt(text)
    assert all(p.where and p.what for p in problems)
    assert (study is None) == bool(problems)
    if study is not None:
        assert read_text(study.as_toml(), SHIPPED[0].parent).digest() == study.digest()


def test_a_byte_order_mark_is_no_fault(tmp_path):
    path = tmp_path / "s.toml"
    path.write_bytes(b"\xef\xbb\xbf" + GOOD.encode())
    assert read(path).lever.length_mm == 300.0


def test_what_repeats_without_end_is_cut():
    many = "".join(f'[[zones]]\nname = "z{n}"\nshape = "ball"\ncentre_mm = [0, 900, 1000]\nradius_mm = -1\n' for n in range(300))
    with pytest.raises(StudyError) as caught:
        read_text(GOOD + many)
    assert len(caught.value.problems) == MOST_PROBLEMS + 1
    assert "has 100 more problems" in str(caught.value)


@pytest.mark.parametrize(
    ("choices", "table"),
    [(loads.DRILLED, "drilling_materials_mh31"), (loads.PRESSED, "elastic_constants"), (machine.METALS, "lever_materials"),
     (machine.THREADS, "metric_threads_coarse")],
)  # fmt: skip
def test_choices_are_the_rows_of_their_tables(choices, table):
    names = [row["name"].split(":")[0] for row in library().table(table).rows]
    assert tuple(dict.fromkeys(names)) == choices


def test_what_a_study_is_read_from_may_be_a_folder_of_its_own(tmp_path):
    """CSV files are looked for beside the study, wherever the command runs."""
    (tmp_path / "people.csv").write_text(
        "sex,dimension,unit,mean,sd\nmale,stature,mm,1750,70\nmale,body_mass,kg,80,12\nfemale,stature,mm,1620,65\nfemale,body_mass,kg,66,11\n"
    )
    path = Path(tmp_path / "s.toml")
    path.write_text(GOOD + '[operators]\npopulation = "people.csv"\n')
    assert read(path).operators.population == "people.csv"
