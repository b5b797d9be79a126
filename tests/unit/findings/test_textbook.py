"""Three filters that are often shown in books, and what their findings say of them, figure by figure.

Orders 12, 45 and 15: recalled from such a book and recomputed by the formulas of the families.
"""

from __future__ import annotations

import math
from pathlib import Path

import pytest

from bandwright.bandfile.quantities import show_number
from bandwright.forecast.forecast import Forecast
from unit.findings import checking

TEXT = (Path(__file__).resolve().parents[2] / "corpus" / "textbook.bands.yaml").read_text(encoding="utf-8")
DOCUMENT = checking.read(TEXT)
FOUND = checking.found_in(DOCUMENT)
FORECASTS = {filter.name: Forecast(filter, checking.ANSWERS) for _, filter in DOCUMENT.filters}

WIDE, NARROW, CHEBYSHEV = "wide-transition", "narrow-transition", "narrow-transition-chebyshev"


def sentences(name: str) -> dict[str, str]:
    """What is said of a filter, by finding."""
    return {finding.id: finding.message for finding in FOUND if finding.filter == name}


def sizes(name: str) -> tuple[list[float], list[float]]:
    """Magnitudes of the numerator's and the denominator's coefficients, as one polynomial each."""
    forecast = FORECASTS[name]
    chosen = forecast.chosen
    assert chosen is not None
    expanded = forecast.expanded(chosen)
    assert expanded is not None
    return [abs(b) for b in expanded[0]], [abs(a) for a in expanded[1]]


def bits(name: str, structure: str) -> int:
    """The exact bits of the filter in a structure."""
    forecast = FORECASTS[name]
    chosen = forecast.chosen
    assert chosen is not None
    figure = forecast.bits(chosen, structure, "floating")
    assert figure is not None
    assert figure.exact
    return int(figure.value)


@pytest.mark.parametrize(("name", "order"), [(WIDE, 12), (NARROW, 45), (CHEBYSHEV, 15)])
def test_the_orders_are_those_of_the_book(name: str, order: int) -> None:
    chosen = FORECASTS[name].chosen
    assert chosen is not None
    assert chosen.order == order


def test_the_butterworth_order_follows_from_the_edges_and_levels() -> None:
    """N = ln(gs/gp) / (2 ln(Ws/Wp)), W = tan(w/2), g = 1/|H|^2 - 1 (Butterworth 1930)."""
    for name, edge in ((WIDE, 0.4), (NARROW, 0.24)):
        ratio = math.tan(edge * math.pi / 2) / math.tan(0.1 * math.pi)
        order = math.log((1e6 - 1) / (0.99**-2 - 1)) / (2 * math.log(ratio))
        chosen = FORECASTS[name].chosen
        assert chosen is not None
        assert chosen.order_unrounded == pytest.approx(order, rel=1e-9)


def test_the_wide_one_is_carried_but_its_coefficients_differ_by_decades_and_its_zeros_scatter() -> None:
    _, denominator = sizes(WIDE)
    said = sentences(WIDE)
    largest, smallest = show_number(max(denominator), 3), show_number(min(denominator), 3)
    assert said["coefficient/wide-spread"] == (
        f"The denominator of one direct form of order 12 runs from {largest} down to {smallest} and takes"
        f" {bits(WIDE, 'direct-form-2')} of 53 bits; second-order sections take {bits(WIDE, 'cascade')}."
    )
    assert said["coefficient/zeros-scatter"].startswith(
        "Rounded to 53 bits, the 12 zeros of the expanded numerator at z = -1 scatter by about 0.0"
    )
    assert said.keys() == {"coefficient/wide-spread", "coefficient/zeros-scatter", "order/one-less-is-near"}
    assert bits(WIDE, "direct-form-2") < 53


def test_the_narrow_one_can_not_be_carried_and_another_family_can() -> None:
    numerator, denominator = sizes(NARROW)
    said = sentences(NARROW)
    assert said["coefficient/double-precision-not-enough"] == (
        f"One direct form of order 45 needs {bits(NARROW, 'direct-form-2')} bits and is unstable with the 53"
        f" of double precision: denominator up to {one_digit(max(denominator))}, numerator down to"
        f" {one_digit(min(numerator))}; sections need {bits(NARROW, 'cascade')}."
    )
    finding = next(one for one in FOUND if one.id == "coefficient/double-precision-not-enough")
    titles = [offer.title for offer in checking.offers(DOCUMENT, finding)]
    assert "Use the chebyshev-2 family: order 15 instead of 45" in titles


def test_the_chebyshev_filter_gets_no_alarm() -> None:
    _, denominator = sizes(CHEBYSHEV)
    largest, smallest = show_number(max(denominator), 3), show_number(min(denominator), 3)
    severities = {finding.severity for finding in FOUND if finding.filter == CHEBYSHEV}
    assert severities == {"information"}
    assert sentences(CHEBYSHEV) == {
        "coefficient/wide-spread": (
            f"The denominator of one direct form of order 15 runs from {largest} down to {smallest} and takes"
            f" {bits(CHEBYSHEV, 'direct-form-2')} of 53 bits; second-order sections take"
            f" {bits(CHEBYSHEV, 'cascade')}."
        )
    }


def one_digit(value: float) -> str:
    """3e8, 5e-26"""
    mantissa, _, exponent = f"{value:.0e}".partition("e")
    return f"{mantissa}e{int(exponent)}"
