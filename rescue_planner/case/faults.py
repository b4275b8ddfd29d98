"""What a wrong case is refused with: every problem, each with its path."""

from __future__ import annotations

from collections.abc import Iterable
from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Problem:
    """One thing that stops a computation.

    `path` reads like `plans[1].releases[0].who.females` and is empty for the whole case; `text` is
    one sentence that says what is wrong and what to do.
    """

    path: str
    text: str

    def __str__(self) -> str:
        return f"{self.path}: {self.text}" if self.path else self.text


class InvalidCase(ValueError):
    """Carries every problem of a case, not just the first."""

    def __init__(self, problems: Iterable[Problem]) -> None:
        self.problems: tuple[Problem, ...] = tuple(problems)
        super().__init__("\n".join(str(problem) for problem in self.problems))

    def __reduce__(self) -> tuple[type[InvalidCase], tuple[tuple[Problem, ...]]]:
        return type(self), (self.problems,)
