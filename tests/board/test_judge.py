"""The worker: the newest question first, dropped ones never answered, everything remembered, refusals told."""

import threading
import time

import pytest

from ergo.board.judge import DRAGGED_COUNT, Judge, SupersededError, fewer_operators
from ergo.errors import NothingMovesError, PullwardError
from ergo.study.reader import read_text
from ergo.study.template import template


def study(length=300.0, count=1000):
    return read_text(template()).with_values({"lever.length_mm": length, "operators.count": count})


@pytest.fixture
def judge(engine):
    made = Judge(engine)
    made.start()
    return made


def test_an_answer_is_remembered(judge, engine):
    first = judge.ask("anna", study()).wait(10)
    again = judge.ask("bert", study()).wait(10)
    assert first is again
    assert len(engine.asked) == 1


def test_a_newer_question_of_the_same_browser_drops_the_older(judge, engine):
    engine.takes_s = 0.3
    old = judge.ask("anna", study(300))
    time.sleep(0.05)
    waiting = judge.ask("anna", study(310))
    new = judge.ask("anna", study(320))
    with pytest.raises(SupersededError):
        old.wait(10)
    with pytest.raises(SupersededError):
        waiting.wait(10)
    assert new.wait(10).study["lever"]["length_mm"] == 320
    assert 310 not in [length for length, _ in engine.asked]
    assert 300 not in [length for length, _ in engine.asked]


def test_another_browsers_question_is_not_dropped(judge, engine):
    engine.takes_s = 0.1
    questions = [judge.ask(owner, study(300 + n)) for n, owner in enumerate(("anna", "bert", "carl"))]
    assert [q.wait(10).study["lever"]["length_mm"] for q in questions] == [300, 301, 302]


def test_while_a_hand_drags_at_most_500_are_judged(judge):
    assert judge.ask("anna", study(count=4000), quick=True).wait(10).people["count"] == DRAGGED_COUNT
    assert judge.ask("anna", study(count=200), quick=True).wait(10).people["count"] == 200


def test_a_slow_engine_judges_fewer_while_a_hand_drags(engine):
    engine.takes_s = 0.4
    judge = Judge(engine)
    judge.start()
    judge.ask("anna", study(count=1000)).wait(10)
    # 1000 operators took about 0.4 s, so within 0.4 s no more than 1000 and never more than 500 are judged.
    assert judge.quick_count(study(310, count=1000)) <= DRAGGED_COUNT
    engine.takes_s = 2.0
    judge.ask("anna", study(320, count=1000)).wait(10)
    assert 50 <= judge.quick_count(study(330, count=1000)) <= 210
    assert judge.takes_long(study(330, count=1000))
    assert not judge.takes_long(study(320, count=1000))


def test_what_the_engine_refuses_is_told_as_it_is():
    def refuse(asked):
        msg = "the linkage does not move"
        raise NothingMovesError(msg)

    judge = Judge(refuse)
    judge.start()
    with pytest.raises(NothingMovesError, match="does not move"):
        judge.ask("anna", study()).wait(10)


def test_a_fault_in_the_engine_does_not_stop_the_worker():
    calls = []

    def fail(asked):
        calls.append(asked)
        raise ZeroDivisionError

    judge = Judge(fail)
    judge.start()
    for length in (300, 310):
        with pytest.raises(PullwardError, match="ZeroDivisionError"):
            judge.ask("anna", study(length)).wait(10)
    assert len(calls) == 2


def test_background_work_waits_for_the_hand(engine):
    order = []

    def note(asked, *, tell=None):
        order.append(asked.lever.length_mm)
        time.sleep(0.15)
        return engine(asked)

    judge = Judge(note)
    judge.start()
    first = judge.ask("anna", study(300))
    time.sleep(0.05)
    lent = threading.Thread(target=judge.lend, args=(study(999), lambda share, what: None))
    lent.start()
    second = judge.ask("bert", study(310))
    first.wait(10)
    second.wait(10)
    lent.join(10)
    assert order == [300, 310, 999]


def test_fewer_operators_leaves_everything_else():
    made = fewer_operators(study(), 60)
    assert made.operators.count == 60
    assert made.with_values({"operators.count": 1000}).content() == study().content()
