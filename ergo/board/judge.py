"""The one worker that asks the engine: the newest question of each browser first, older ones dropped."""

import inspect
import threading
import time
from collections import OrderedDict
from collections.abc import Callable
from typing import Any

from ergo.errors import PullwardError
from ergo.evaluation.results import Results
from ergo.study.model import Study

DRAGGED_COUNT, FEWEST = 500, 50
# While the hand moves, a picture should follow within this; beyond `PATIENCE_S` a first picture comes of fewer people.
FOLLOW_S, PATIENCE_S = 0.4, 1.2
RESULTS_KEPT = 48
# The kernels of the engine must not run in two threads at once; whoever calls the engine holds this.
ENGINE = threading.Lock()


class SupersededError(Exception):
    """The question was dropped, since a newer one came from the same browser."""


class Question:
    """One study to be judged; `wait` gives the answer."""

    def __init__(self, owner: str, study: Study) -> None:
        self.owner, self.study, self.key = owner, study, question_key(study)
        self.dropped = False
        self.share, self.what = 0.0, ""
        self._done = threading.Event()
        self._answer: Results | BaseException | None = None

    def wait(self, timeout_s: float = 120.0) -> Results:
        """Return the results; raises `SupersededError`, `TimeoutError`, or what the engine refused with."""
        if not self._done.wait(timeout_s):
            msg = "the engine has not answered in time"
            raise TimeoutError(msg)
        if isinstance(self._answer, BaseException):
            raise self._answer
        assert self._answer is not None
        return self._answer

    def answer(self, answer: "Results | BaseException") -> None:
        """Give the answer to whoever waits."""
        self._answer = answer
        self._done.set()

    def drop(self) -> None:
        """Take the question back."""
        self.dropped = True


class Judge:
    """Holds the engine, a short queue and the last answers."""

    def __init__(self, evaluate: Callable[..., Results]) -> None:
        self._evaluate = evaluate
        self._tells = "tell" in inspect.signature(evaluate).parameters
        self._queue: OrderedDict[str, Question] = OrderedDict()
        self._running: Question | None = None
        self._answers: OrderedDict[str, Results] = OrderedDict()
        self._changed = threading.Condition()
        self.ready = threading.Event()
        self.trouble = ""
        self._cost_s = 0.0

    def start(self, first: Study | None = None) -> None:
        """Start the worker; it compiles the kernels with `first` before it answers."""
        threading.Thread(target=self._work, args=(first,), daemon=True, name="judge").start()

    def known(self, study: Study) -> Results | None:
        """Return the answer to a study that was judged before."""
        with self._changed:
            return self._answers.get(question_key(study))

    def answer_to(self, key: str) -> Results | None:
        """Return an answer by the key of its question, while it is kept."""
        with self._changed:
            return self._answers.get(key)

    def takes_long(self, study: Study) -> bool:
        """Return whether the answer is not known yet and will let the hand wait."""
        return self._cost_s * _size(study) > PATIENCE_S and self.known(study) is None

    def quick_count(self, study: Study) -> int:
        """Return how many operators can be judged while the hand moves, by what the last answer took."""
        can = FOLLOW_S / self._cost_s / study.study.positions if self._cost_s > 0.0 else DRAGGED_COUNT
        return min(study.operators.count, max(FEWEST, min(DRAGGED_COUNT, int(can))))

    def ask(self, owner: str, study: Study, *, quick: bool = False) -> Question:
        """Ask about a study; an older question of the same owner is dropped, even while it is worked on."""
        if quick and self.known(study) is None:
            study = fewer_operators(study, self.quick_count(study))
        question = Question(owner, study)
        with self._changed:
            for old in (self._queue.pop(owner, None), self._running):
                if old is not None and old.owner == owner:
                    old.drop()
                    if old is not self._running:
                        old.answer(SupersededError())
            known = self._answers.get(question.key)
            if known is not None:
                self._answers.move_to_end(question.key)
                question.answer(known)
                return question
            self._queue[owner] = question
            self._changed.notify_all()
        return question

    def lend(self, study: Study, tell: Callable[[float, str], None]) -> Results:
        """Return the answer to a study for long work in the background, behind everything that a hand waits for."""
        known = self.known(study)
        if known is not None:
            return known
        results = self.borrow(study, tell)
        self._remember(question_key(study), results)
        return results

    def borrow(self, study: Study, tell: Callable[[float, str], None], **more: Any) -> Results:
        """Ask the engine with other tables or people for long work in the background; nothing is remembered."""
        with self._changed:
            while self._queue or self._running is not None:
                self._changed.wait(0.5)
                tell(0.0, "the hand goes first")
        extra: dict[str, Any] = {"tell": tell} if self._tells else {}
        with ENGINE:
            return self._evaluate(study, **extra, **more)

    def _remember(self, key: str, results: Results) -> None:
        with self._changed:
            self._answers[key] = results
            self._answers.move_to_end(key)
            while len(self._answers) > RESULTS_KEPT:
                self._answers.popitem(last=False)

    def _work(self, first: Study | None) -> None:
        if first is not None:
            try:
                with ENGINE:
                    self._evaluate(fewer_operators(first, 50))
            except Exception as error:
                self.trouble = f"the engine does not start: {error}"
        self.ready.set()
        while True:
            with self._changed:
                while not self._queue:
                    self._changed.wait()
                _, self._running = self._queue.popitem(last=False)
                question = self._running
            self._answer(question)

    def _answer(self, question: Question) -> None:
        def tell(share: float, what: str) -> None:
            question.share, question.what = share, what
            if question.dropped:
                raise SupersededError

        started = time.perf_counter()
        answer: Results | BaseException
        try:
            with ENGINE:
                extra: dict[str, Any] = {"tell": tell} if self._tells else {}
                answer = self._evaluate(question.study, **extra)
        except (PullwardError, SupersededError) as error:
            answer = error
        except Exception as error:
            answer = PullwardError(f"the engine failed on this study: {type(error).__name__}: {error}")
        if isinstance(answer, Results):
            self._cost_s = (time.perf_counter() - started) / _size(question.study)
            self._remember(question.key, answer)
        with self._changed:
            self._running = None
            self._changed.notify_all()
        question.answer(SupersededError() if question.dropped else answer)


def _size(study: Study) -> int:
    """Return what the engine's time goes with: operators times stroke positions."""
    return study.operators.count * study.study.positions


def fewer_operators(study: Study, count: int) -> Study:
    """Return the study with fewer operators drawn."""
    return study.model_copy(update={"operators": study.operators.model_copy(update={"count": count})})


def question_key(study: Study) -> str:
    """Return what makes two questions the same: content, CSV rows and variant."""
    return f"{study.digest()}:{study.variant_name}"
