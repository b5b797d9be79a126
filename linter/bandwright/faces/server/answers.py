"""The answers that all open files share, with a bound on how many are kept."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Set

from bandwright import limits
from bandwright.forecast.questions import Answer, Question


class Lookups(Mapping[Question, Answer]):
    """The answers as one analysis sees them; it remembers which of them were looked up."""

    def __init__(self, answers: dict[Question, Answer]) -> None:
        self._answers = answers
        self.used: set[Question] = set()

    def __getitem__(self, question: Question) -> Answer:
        answer = self._answers[question]
        self.used.add(question)
        return answer

    def __contains__(self, question: object) -> bool:
        return question in self._answers

    def __iter__(self) -> Iterator[Question]:
        return iter(self._answers)

    def __len__(self) -> int:
        return len(self._answers)


class Answers:
    """The answers that there are. One that is in use is never dropped, so no figure goes back."""

    def __init__(self) -> None:
        self.kept: dict[Question, Answer] = {}
        self._trim_beyond = limits.MAX_ANSWERS_KEPT

    def add(self, question: Question, answer: Answer, in_use: Callable[[], Set[Question]]) -> None:
        """Keep an answer; where there are too many, drop the oldest of those that nobody uses."""
        self.kept[question] = answer
        if len(self.kept) <= self._trim_beyond:
            return
        used = in_use() | {question}
        excess = len(self.kept) - limits.MAX_ANSWERS_KEPT
        for old in [old for old in self.kept if old not in used][:excess]:
            del self.kept[old]
        # Looking through what is in use costs much, so it waits until a quarter more has come.
        self._trim_beyond = max(limits.MAX_ANSWERS_KEPT, len(self.kept)) * 5 // 4
