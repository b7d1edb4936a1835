"""The argument: no claim without its number, nothing said that the rating does not say."""

import re
from dataclasses import replace

import numpy as np
import pytest

from ergo.report.alternatives import changes_between, comparison, paired_served, sentence
from ergo.report.blocks import Claim, Points, Rows, Words
from ergo.report.claims import RATED_HEADS, TABLES, argument, backing
from ergo.report.content import report
from ergo.report.drawings import draw_all
from ergo.report.inputs import bibliography_rows, input_rows, recalled_rows, tables_used
from tests.rating.paired_score import score_interval


@pytest.fixture(scope="module")
def made(short):
    return report(short, draw_all(short))


def claims(results):
    return [c for _, _, rows in argument(results) for c in rows if isinstance(c, Claim)]


def section(made, title):
    return next(s for s in made.sections if s.title.startswith(title))


def text_of(blocks):
    found = []
    for b in blocks:
        if isinstance(b, Words):
            found.append(b.text)
        elif isinstance(b, Points):
            found += b.items
        elif isinstance(b, Rows):
            found += [cell for row in b.rows for cell in row]
        elif isinstance(b, Claim):
            found += [b.sentence, b.number, b.interval]
    return "\n".join(found)


def test_every_claim_has_a_number(short):
    for claim in claims(short):
        assert re.search(r"\d", claim.number), claim.name


def test_every_rating_is_argued_once(short):
    names = [c.name for c in claims(short)]
    for name in ("reach", "direction", "force", "posture", "clearance", "let-go", "served"):
        assert names.count(name) == 1


def test_headings_never_contradict_the_rating(short, meets):
    heads = {name: heading for name, heading, _ in argument(short)}
    assert heads["force"] == RATED_HEADS["force"][1]
    assert heads["reach"] == RATED_HEADS["reach"][0]
    assert {name: h for name, h, _ in argument(meets)}["force"] == RATED_HEADS["force"][0]


def test_page_one_says_what_falls_short(made, short):
    assert not made.meets
    words = text_of(made.opening)
    assert "force 71.3 of 100, target 95.0" in words
    assert "served 75.0 of 100, target 95.0" in words


def test_the_weakest_status_stands_behind_a_claim(short):
    weaker = (*short.sources, {**short.sources[1], "status": "memory"})
    assert dict(backing(replace(short, sources=weaker), "reach"))["boone_azen_1979"] == "memory"
    assert dict(backing(short, "reach"))["boone_azen_1979"] == "seen"


def test_every_table_of_a_claim_is_shipped():
    from ergo.datasets import table_keys

    for name, begins in TABLES.items():
        for begin in begins:
            assert any(key.startswith(begin) for key in table_keys()), (name, begin)


def test_a_method_outside_its_range_says_why(short):
    # At 80 % of the stroke, where the made force is largest, the made table ends.
    words = [w.text for _, _, rows in argument(short) for w in rows if isinstance(w, Words)]
    assert any("not covered" in w and "elbow angle beyond the table" in w for w in words)


def test_overrun_and_balance_are_told_at_the_let_go(short):
    told = {c.name: c for c in claims(short)}
    assert told["overrun"].number == "61\u202fmm"
    assert told["overrun"].interval == "38 to 94\u202fmm"
    assert told["balance"].number == "91.0\u202f%"


def test_a_let_go_that_was_not_asked_for_is_not_claimed(factory):
    steps = {name: (head, rows) for name, head, rows in argument(factory.made(load__lets_go_at=None))}
    head, rows = steps["let_go"]
    assert head == "Let-go was not rated"
    assert not any(isinstance(row, Claim) for row in rows)


def test_the_overrun_is_read_before_the_load_is_gone(short):
    from ergo.pictures.ribbon import let_go_position

    # 84 % lies between the positions 80 and 85 %; the load is still there at 80 %.
    assert let_go_position(short, 0.84) == 16
    assert let_go_position(short, 0.8) == 16


def test_inputs_hold_every_value_with_unit_and_meaning(short):
    rows = {row[0]: row for row in input_rows(short).rows}
    assert rows["lever.length_mm"][1:3] == ("300", "mm")
    assert rows["lever.length_mm"][3] == "pivot to the grip's centre"
    assert rows["zones[1].radius_mm"][1:3] == ("30", "mm")
    assert rows["linkage.arm_mm"][2] == "mm"


def test_all_sources_and_recalled_numbers_are_listed(short):
    assert [row[0] for row in bibliography_rows(short).rows] == ["askew_1987", "boone_azen_1979", "iso_53"]
    assert recalled_rows(short).rows == (
        ("Isometric strength at each joint", "askew_1987", "elbow_flexion 77\u202fN m"),
    )
    assert {row[0] for row in tables_used(short).rows} == {row["title"] for row in short.sources}


def test_what_was_not_varied_is_said(made):
    assert "were not varied" in text_of(section(made, "What would change").blocks)


def test_flips_of_the_results_replace_that_sentence(short):
    told = replace(short, details={**short.details, "flips": {"sentences": ["Elbow flexion 70 N m would do."]}})
    words = text_of(section(report(told, draw_all(told)), "What would change").blocks)
    assert "Elbow flexion 70 N m would do." in words
    assert "were not varied" not in words


def test_cautions_and_trial_are_in_every_report(made, short):
    assert short.cautions[0] in text_of(section(made, "Residual risks").blocks)
    assert "let go on purpose at 80\u202f%" in text_of(section(made, "What to verify").blocks)


def test_paired_difference_on_the_same_people(short):
    crowd = replace(short.crowd, served=np.array([True] + list(short.crowd.served[1:])))
    other = replace(short, crowd=crowd)
    found, span = paired_served(short, other), score_interval(1, 0, 8)
    # One of eight gained and nobody lost.
    assert (found.points, found.low, found.high) == pytest.approx((12.5, 100 * span[0], 100 * span[1]), abs=1e-6)
    assert "12.5 points more" in sentence(short, other)
    assert "no difference beyond chance" in sentence(short, other)


def test_no_paired_difference_for_other_people(short):
    other = replace(short, crowd=replace(short.crowd, stature_mm=short.crowd.stature_mm + 1.0))
    assert paired_served(short, other) is None


def test_alternatives_say_what_changed_and_which_is_best(short, factory):
    other = replace(factory.made(short=False, lever__length_mm=360.0), variant="longer")
    assert changes_between(short, other) == "lever.length_mm 360.0"
    words = text_of(comparison(short, [other]))
    assert "longer meets every target and serves most people, 96.4 %" in words
    assert "71.3 ■" in words
