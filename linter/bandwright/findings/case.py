"""What a finding looks at: one filter, and its forecast with the answers that there are so far."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field
from typing import TypeVar

from bandwright.bandfile.values import Filter
from bandwright.forecast import gaps
from bandwright.forecast.bands import Band
from bandwright.forecast.candidates import Candidate
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.gaps import Gap
from bandwright.forecast.questions import Answer, Question
from bandwright.forecast.types import Figure

T = TypeVar("T")

CHOICE = (
    "bands",
    "sample_rate",
    "phase",
    "family",
    "order",
    "structure",
    "arithmetic",
    "transitions",
    "at_most",
)
"""The keys that decide what the filter is built as: what a finding reads that asks for `Case.chosen`."""


class Waiting(Exception):  # noqa: N818 # it is no error, only too early
    """A finding needs an answer that is not there yet; until then it is silent."""

    def __init__(self, question: Question) -> None:
        super().__init__(question)
        self.question = question


@dataclass(frozen=True, slots=True)
class Case:
    """One filter under examination."""

    filter: Filter
    forecast: Forecast
    _kept: dict[str, object] = field(default_factory=dict, init=False, repr=False, compare=False)

    @property
    def bands(self) -> tuple[Band, ...]:
        """Every band item whose kind can be told."""
        return self.forecast.bands

    @property
    def gaps(self) -> tuple[Gap, ...]:
        """The transitions between pass and stop bands."""
        return self.once("gaps", lambda: gaps.gaps(self.filter, self.bands))

    def once(self, name: str, compute: Callable[[], T]) -> T:
        """What several findings ask for, computed for the first of them."""
        if name not in self._kept:
            self._kept[name] = compute()
        return self._kept[name]  # type: ignore[return-value] # each name is kept with one type only

    def chosen(self) -> Candidate | None:
        """The candidate that the filter will be built as (see `Forecast.chosen`).

        Raises:
            Waiting: an answer that is not there yet could make it another one.
        """
        question = self.forecast.choice_waits_for()
        if question is not None:
            raise Waiting(question)
        return self.forecast.chosen

    def exact(self, figure: Figure) -> float | None:
        """The figure's exact value, to be quoted; None where nobody can say.

        Raises:
            Waiting: its question is not answered yet.
        """
        if figure.exact:
            return figure.value
        if figure.question is not None:
            raise Waiting(figure.question)
        return None

    def answer(self, question: Question) -> Answer:
        """The answer to a question that is no figure's.

        Raises:
            Waiting: there is none yet.
        """
        if question not in self.forecast.answers:
            raise Waiting(question)
        return self.forecast.answers[question]

    def exceeds(self, figure: Figure, limit: float) -> bool:
        """Whether the figure is above the limit, decided on its band where that is enough.

        Where the band straddles the limit and nobody can say more, the answer is no.

        Raises:
            Waiting: the band straddles the limit, and its question is not answered yet.
        """
        if figure.low > limit:
            return True
        if figure.high > limit and figure.question is not None:
            raise Waiting(figure.question)
        return False
