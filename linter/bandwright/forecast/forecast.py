"""The forecast of one filter: what every family would take.

It is computed from the filter's value and the answers to its questions. Figures that cost more than an
order are computed when somebody asks for them, and kept.
"""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from dataclasses import replace
from typing import Literal, TypeVar

from bandwright import limits
from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter
from bandwright.forecast import bands, summary
from bandwright.forecast.candidates import Candidate, candidates
from bandwright.forecast.families import FAMILIES
from bandwright.forecast.questions import Answers, CoefficientBits, Question, RoundedStability
from bandwright.forecast.settle import settled
from bandwright.forecast.structures import STRUCTURES, StructureRow
from bandwright.forecast.types import Figure, computed
from bandwright.theory.closed_form import bits as bit_theory
from bandwright.theory.closed_form import iir, polynomials, response
from bandwright.theory.closed_form.selectivity import Selectivity, selectivity
from bandwright.theory.closed_form.types import Design

T = TypeVar("T")

MAXIMA = ("order", "taps", "multiplications", "delay", "memory")
"""The keys of `at_most`."""


class Forecast:
    """What every family would take to meet one filter's mask.

    `mask` is None where the filter makes none (see `bands.mask`); then there are no candidates.
    """

    def __init__(self, filter: Filter, answers: Answers) -> None:
        self.filter = filter
        self.answers = answers
        self.sample_rate_hz = bands.sample_rate_hz(filter)
        self.bands = bands.bands(filter)
        self.mask = bands.mask(filter, self.bands)
        self.selectivity: Selectivity | None = selectivity(self.mask) if self.mask is not None else None
        self._kept: dict[tuple[str, ...], object] = {}
        known = not (filter.is_unknown("family") or filter.is_unknown("structure"))
        self.candidates: tuple[Candidate, ...] = (
            candidates(filter, self.mask, self.selectivity, answers)
            if self.mask is not None and known
            else ()
        )

    def candidate(self, family: str) -> Candidate | None:
        """The candidate of this family, where it is listed."""
        return next((one for one in self.candidates if one.family == family), None)

    @property
    def arithmetic(self) -> quantities.Arithmetic | None:
        """The arithmetic that the filter or its device names."""
        return quantities.arithmetic_of(self.filter)

    @property
    def chosen(self) -> Candidate | None:
        """The candidate that the filter will most likely be built as.

        Of those that its keys admit, the cheapest within the maxima, or else the cheapest.
        """
        return self._keep(("chosen",), self._choose)

    def _choose(self) -> Candidate | None:
        ready = [one for one in self.candidates if one.allowed and (one.order or one.taps)]
        return min(ready, key=lambda one: (bool(self.over(one)), self.cost(one)), default=None)

    def choice_waits_for(self) -> Question | None:
        """The question whose answer could still make another candidate the chosen one; None if none could."""
        return self._keep(("choice_waits_for",), self._choice_waits_for)

    def _choice_waits_for(self) -> Question | None:
        chosen = self.chosen
        if chosen is None:
            return None
        worst = self._rank(chosen, "high")
        for other in self.candidates:
            if other is chosen or not other.allowed or not (other.order or other.taps):
                continue
            if self._rank(other, "low") < worst:
                for one in (chosen, other):
                    if one.taps is not None and one.taps.question is not None:
                        return one.taps.question
        return None

    def _rank(self, one: Candidate, end: Literal["low", "high"]) -> tuple[bool, float]:
        """By what candidates are chosen, at the favourable (low) or unfavourable end of their figures."""
        figure = self.multiplications(one)
        within = self.within(one)
        over = within is False if end == "low" else within is not True
        return over, getattr(figure, end) if figure is not None else math.inf

    def cost(self, one: Candidate) -> float:
        """Multiplications per input sample, the measure by which candidates are sorted."""
        figure = self.multiplications(one)
        return figure.value if figure is not None else math.inf

    def design(self, one: Candidate) -> Design | None:
        """The reference design of an IIR candidate; None for FIR, or where its order misses the mask.

        None too where a pinned order is beyond `limits.MAX_IIR_ORDER`.
        """
        if one.order is None or one.least_order is None:
            return None
        if not one.least_order <= one.order <= limits.MAX_IIR_ORDER:
            return None
        theory, select, order = FAMILIES[one.family].theory, self.selectivity, one.order
        if theory is None or select is None:
            return None
        return self._keep(
            ("design", one.family), lambda: iir.reference_design(theory, select, order, centred=True)
        )

    def bits(self, one: Candidate, structure: str, number_format: str) -> Figure | None:
        """Coefficient bits in a structure: mantissa bits (`floating`) or the word with its sign (`fixed`)."""
        row = STRUCTURES.get(structure)
        if row is None or row.kind != one.kind:
            return None
        # Structures that store the same coefficients share one figure.
        return self._keep(
            ("bits", one.family, row.stores, number_format), lambda: self._bits(one, row, number_format)
        )

    def own_bits(self, one: Candidate) -> Figure | None:
        """The bits that the candidate needs in its own structure and the filter's arithmetic.

        Where no arithmetic is named, the bits of a floating mantissa.
        """
        arithmetic = self.arithmetic
        if one.structure is None:
            return None
        return self.bits(one, one.structure, arithmetic.number_format if arithmetic else "floating")

    def _bits(self, one: Candidate, row: StructureRow, number_format: str) -> Figure | None:
        if self.mask is None:
            return None
        form: bit_theory.NumberFormat = "floating" if number_format == "floating" else "fixed"
        if one.taps is not None:
            return self._tap_bits(one.taps, form)
        design = self.design(one)
        if design is None or one.order is None:
            return None
        predict = bit_theory.cascade_bits if row.stores == "sections" else bit_theory.direct_form_bits
        try:
            predicted = predict(design, self.mask, form)
        except ArithmeticError:
            return None  # as many bits as would be needed can't be told in double precision
        if predicted is None:
            return None
        question = CoefficientBits(self.mask, one.family, one.order, _asked_as(row), form)
        figure = Figure(predicted.value, predicted.low, predicted.high, "estimated", "bits", question)
        return settled(figure, self.answers)

    def stability_when_rounded(
        self, one: Candidate, structure: str, number_format: str, has: int
    ) -> Question | None:
        """The question whether an IIR candidate stays stable in a structure with words of `has` bits."""
        row = STRUCTURES.get(structure)
        if row is None or row.kind != one.kind or self.mask is None or one.order is None:
            return None
        form: bit_theory.NumberFormat = "floating" if number_format == "floating" else "fixed"
        return RoundedStability(self.mask, one.family, one.order, _asked_as(row), form, has)

    def _tap_bits(self, taps: Figure, form: bit_theory.NumberFormat) -> Figure | None:
        if self.mask is None:
            return None
        predicted = bit_theory.fir_bits(round(taps.value), self.mask, form)
        return Figure(predicted.value, predicted.low, predicted.high, "estimated", "bits")

    def expanded(self, one: Candidate) -> tuple[list[float], list[float]] | None:
        """Numerator and denominator of the reference design as one polynomial each, in powers of 1/z."""
        design = self.design(one)
        return (
            self._keep(("expanded", one.family), lambda: polynomials.expand(design))
            if design is not None
            else None
        )

    def multiplications(self, one: Candidate) -> Figure | None:
        """Multiplications per input sample: symmetry folded, 0, +-1 and +-2 free, one for the gain."""
        return self._keep(("multiplications", one.family), lambda: self._multiplications(one))

    def _multiplications(self, one: Candidate) -> Figure | None:
        if one.taps is not None:
            return _of_taps(one.taps, lambda taps: (taps + 1) // 2, "multiplications")
        design = self.design(one)
        if design is None:
            return None
        if one.structure is not None and STRUCTURES[one.structure].stores == "expanded":
            both = self.expanded(one)
            return computed(polynomials.multiplications(*both)) if both is not None else None
        return computed(polynomials.section_multiplications(design), "multiplications")

    def memory(self, one: Candidate) -> Figure | None:
        """Bytes for coefficients and state in the filter's arithmetic; None where it names none."""
        arithmetic, multiplications = self.arithmetic, self.multiplications(one)
        if arithmetic is None or multiplications is None or one.structure is None:
            return None
        coefficient_bytes = arithmetic.coefficients.storage_bytes
        data_bytes = arithmetic.data.storage_bytes
        if one.taps is not None:
            return _of_taps(
                one.taps,
                lambda taps: ((taps + 1) // 2) * coefficient_bytes + (taps - 1) * data_bytes,
                "bytes",
            )
        states = (one.order or 0) * STRUCTURES[one.structure].states_per_order
        return computed(multiplications.value * coefficient_bytes + states * data_bytes, "bytes")

    def delay_worst(self, one: Candidate) -> Figure | None:
        """The largest group delay in the pass bands, in samples."""
        return self._keep(("delay_worst", one.family), lambda: self._delay_worst(one))

    def _delay_worst(self, one: Candidate) -> Figure | None:
        if one.taps is not None:
            return _of_taps(one.taps, lambda taps: (taps - 1) / 2, "samples")
        design = self.design(one)
        if design is None or self.mask is None:
            return None
        worst = max(
            response.worst_group_delay(design, band.low, band.high)
            for band in self.mask.bands
            if band.kind == "pass"
        )
        return computed(worst, "samples")

    def delay_dc(self, one: Candidate) -> Figure | None:
        """The group delay at 0 Hz, in samples; None where the mask does not pass 0 Hz."""
        if self.mask is None or not any(b.kind == "pass" and b.low == 0.0 for b in self.mask.bands):
            return None
        if one.taps is not None:
            return self.delay_worst(one)
        design = self.design(one)
        return computed(response.group_delay(design, 0.0), "samples") if design is not None else None

    def maximum(self, name: str) -> float | None:
        """The value of a maximum (delay in samples, memory in bytes), or None where none is set or known."""
        quantity = self.filter.quantity("at_most", name)
        if quantity is not None:
            seconds = quantities.seconds(quantity, self.sample_rate_hz)
            if quantity.unit == "samples":
                return quantity.number
            return seconds * self.sample_rate_hz if seconds is not None and self.sample_rate_hz else None
        count = self.filter.count("at_most", name)
        return float(count) if count is not None else None

    def figure(self, one: Candidate, name: str) -> Figure | None:
        """The figure of a candidate that a maximum of this name limits."""
        match name:
            case "order":
                return computed(one.order, "") if one.order is not None else None
            case "taps":
                return one.taps
            case "multiplications":
                return self.multiplications(one)
            case "delay":
                return self.delay_worst(one)
            case "memory":
                return self.memory(one)
        raise ValueError(f"no maximum is named {name!r}")

    def over(self, one: Candidate) -> tuple[str, ...]:
        """The maxima that the candidate breaks, by the most likely value of its figures."""
        return tuple(name for name, figure, limit in self._limited(one) if figure.value > limit)

    def within(self, one: Candidate) -> bool | None:
        """Whether the candidate keeps all maxima; None while an estimate straddles one of them."""
        if one.order is None and one.taps is None:
            return False
        limited = self._limited(one)
        if any(figure.low > limit for _, figure, limit in limited):
            return False
        return True if all(figure.high <= limit for _, figure, limit in limited) else None

    def _limited(self, one: Candidate) -> tuple[tuple[str, Figure, float], ...]:
        """The figures of a candidate that have a maximum: name, figure, maximum."""
        return self._keep(("limited", one.family), lambda: tuple(self._limits(one)))

    def _limits(self, one: Candidate) -> Iterator[tuple[str, Figure, float]]:
        for name in MAXIMA:
            limit = self.maximum(name)
            figure = self.figure(one, name) if limit is not None else None
            if figure is not None and limit is not None:
                yield name, figure, limit

    def why_not(self, one: Candidate) -> str:
        """Why the candidate does not serve, in a few words: "order 45, maximum 16"; "" where it does."""
        if one.why_not:
            return one.why_not
        if one.order is not None and one.least_order is not None and one.order < one.least_order:
            return f"order {one.order} is pinned, the mask takes {one.least_order}"
        if one.structure is None:
            return "none of the structures asked for suits it"
        if not one.allowed:
            return "not the family asked for"
        broken = ((name, figure, limit) for name, figure, limit in self._limited(one) if figure.value > limit)
        return ", ".join(
            f"{name} {self.in_words(name, figure.value)}, maximum {self.in_words(name, limit)}"
            for name, figure, limit in broken
        )

    def in_words(self, name: str, value: float) -> str:
        """The value of a maximum's figure as a person writes it: `152 ms`, `45`, `1200 bytes`."""
        if name == "delay":
            rate = self.sample_rate_hz
            return f"{value:g} samples" if rate is None else quantities.show(value / rate, "time")
        words = quantities.show_number(value)
        return f"{words} bytes" if name == "memory" else words

    def in_seconds(self, figure: Figure | None) -> Figure | None:
        """A figure in samples as one in seconds; None without a sample rate."""
        rate = self.sample_rate_hz
        if figure is None or rate is None:
            return None
        return replace(
            figure, value=figure.value / rate, low=figure.low / rate, high=figure.high / rate, unit="s"
        )

    def summary(self) -> str:
        """The filter in a few words: "Low-pass, 20 Hz to 25 Hz at 4 kHz"."""
        return summary.summary(self.filter)

    def _keep(self, key: tuple[str, ...], compute: Callable[[], T]) -> T:
        if key not in self._kept:
            self._kept[key] = compute()
        return self._kept[key]  # type: ignore[return-value] # each key is written with one type only


def _asked_as(row: StructureRow) -> str:
    """A structure's name in questions: the four direct forms store the same coefficients and share theirs."""
    return "cascade" if row.stores == "sections" else "direct-form-2"


def _of_taps(taps: Figure, cost: Callable[[int], float], unit: str) -> Figure:
    """A figure that grows with the number of taps, with the same band and question."""
    low, high = (
        cost(math.floor(taps.low)),
        cost(math.ceil(taps.high)) if math.isfinite(taps.high) else math.inf,
    )
    return Figure(cost(round(taps.value)), low, high, taps.certainty, unit, taps.question)
