"""The search for numbers that would flip a verdict, on a judge whose flips are known."""

from types import SimpleNamespace

import ergo
from ergo.evaluation.flips import flips


def test_the_one_row_that_decides_is_found_and_no_other():
    def judge(study, *, library):
        assert (study.operators.count, study.study.positions) == (80, 7)
        lean = library.values("stance_parameters")["lean_max_deg"]
        return SimpleNamespace(ratings={"force": SimpleNamespace(met=lean < 22.0), "reach": SimpleNamespace(met=True)})

    found = flips(ergo.read_study("gasket_punch"), judge)
    assert [(f.table, f.row, f.value, f.changes) for f in found] == [("stance_parameters", "lean_max_deg", 25.0, ("force missed",))]
    assert "lean_max_deg (stance_parameters, memory) at 25 would change: force missed." in found[0].sentence()


def test_nothing_found_where_nothing_depends_on_the_numbers():
    judge = lambda study, *, library: SimpleNamespace(ratings={"force": SimpleNamespace(met=True)})  # noqa: E731
    assert flips(ergo.read_study("gasket_punch"), judge) == ()
