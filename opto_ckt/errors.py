"""What can go wrong, and the exit code each of it ends in."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True)
class Problem:
    """One thing wrong in a design or part file, at the place where the engineer can mend it."""

    file: str
    line: int | None
    key: str
    message: str  #: what is wrong; what is allowed; did you mean ...

    def __str__(self) -> str:
        place = self.file if self.line is None else f"{self.file}:{self.line}"
        return f"{place}: {self.key}: {self.message}" if self.key else f"{place}: {self.message}"


class OptoCktError(Exception):
    """An end that the user is told of in a sentence, never by a traceback."""

    exit_code = 1


class InputError(OptoCktError):
    """A design or part file cannot be used; carries every problem found in one pass."""

    exit_code = 3

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))


class InfeasibleError(OptoCktError):
    """No values exist that bias and stabilise the circuit.

    Parameters
    ----------
    reason : the limit that binds, and by how much.
    remedies : figures that would have to move, and to what; any one of them serves.
    """

    exit_code = 4

    def __init__(self, reason: str, remedies: Iterable[str] = ()) -> None:
        self.reason = reason
        self.remedies = tuple(remedies)
        super().__init__(reason + (f"; would do: {', or '.join(self.remedies)}" if self.remedies else ""))


class OutsideProgramError(OptoCktError):
    """A program beside Opto-ckt (a simulator) is missing or failed."""

    exit_code = 5


class RefusedError(OptoCktError):
    """What was asked for is not done as it would harm a file, or cannot be written."""

    exit_code = 2
