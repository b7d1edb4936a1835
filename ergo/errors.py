"""What can go wrong, in words a machine builder can act on."""

from dataclasses import dataclass

EXIT_DONE = 0
EXIT_FALLS_SHORT = 1
EXIT_PROBLEMS = 2
EXIT_MISSING = 3


@dataclass(frozen=True)
class Problem:
    """One thing wrong with an input: where it is, what is wrong, what was got, what is allowed."""

    where: str
    what: str
    got: str = ""
    allowed: str = ""
    suggestion: str = ""

    def sentence(self) -> str:
        """Return the problem as one sentence, always in the same order."""
        text = f"{self.where}: {self.what}"
        if self.got:
            text += f", got {self.got}"
        if self.allowed:
            text += f" (allowed: {self.allowed})"
        if self.suggestion:
            text += f"; {self.suggestion}"
        return text


class PullwardError(Exception):
    """Anything Pullward refuses to go on with; `exit_code` is what the command returns."""

    exit_code = EXIT_PROBLEMS


class StudyError(PullwardError):
    """A study that cannot be used, with ALL its problems at once."""

    exit_code = EXIT_PROBLEMS

    def __init__(self, problems: "tuple[Problem, ...] | list[Problem]") -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(p.sentence() for p in self.problems))


class NothingMovesError(PullwardError):
    """A linkage that is no mechanism: its mobility count is zero, so there is no stroke to judge."""

    exit_code = EXIT_PROBLEMS


class DataError(PullwardError):
    """Shipped or user data, or a tool, that is missing or damaged."""

    exit_code = EXIT_MISSING
