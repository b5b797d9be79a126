"""The lines of `check`: one for each finding, and the counts."""

from __future__ import annotations

import pytest

from bandwright.analysis.types import Finding
from bandwright.bandfile.values import Place, Span
from bandwright.faces.command.formats import check_text
from bandwright.findings.rules import Hit


def finding(message: str) -> Finding:
    return Finding(
        id="order/over-maximum",
        severity="error",
        message=message,
        span=Span(11, 12, 11, 23),
        filter="strain-slow",
        related=(),
        accepted=False,
        tag=None,
        block=0,
        hit=Hit("order/over-maximum", Place(("family",))),
    )


def test_a_line_has_the_gnu_form_and_counts_from_one() -> None:
    line = check_text.line("hoist.bands.yaml", finding("Butterworth needs order 45."), colour=False)
    assert line == "hoist.bands.yaml:12:13: error: Butterworth needs order 45. [order/over-maximum]"


def test_colour_touches_the_severity_only() -> None:
    line = check_text.line("hoist.bands.yaml", finding("Butterworth needs order 45."), colour=True)
    assert line == (
        "hoist.bands.yaml:12:13: \x1b[31merror\x1b[0m: Butterworth needs order 45. [order/over-maximum]"
    )


def test_a_text_of_the_file_can_not_steer_the_terminal() -> None:
    line = check_text.line("a\nb.bands.yaml", finding("No key `\x1b[2J`, Ω is fine."), colour=False)
    assert line == "a\\nb.bands.yaml:12:13: error: No key `\\x1b[2J`, Ω is fine. [order/over-maximum]"


COUNTS = dict.fromkeys(("error", "warning", "information", "hint", "accepted"), 0)


@pytest.mark.parametrize(
    ("files", "filters", "counts", "line"),
    [
        (
            2,
            3,
            {"error": 1, "warning": 2, "accepted": 1},
            "2 files, 3 filters: 1 error, 2 warnings, 1 accepted",
        ),
        (1, 1, {}, "1 file, 1 filter: no findings"),
        (1, 0, {"accepted": 2}, "1 file, 0 filters: no findings, 2 accepted"),
        (
            1,
            9,
            {"error": 2, "information": 3, "hint": 2},
            "1 file, 9 filters: 2 errors, 3 information, 2 hints",
        ),
    ],
)
def test_the_counts(files: int, filters: int, counts: dict[str, int], line: str) -> None:
    assert check_text.count_line(files, filters, {**COUNTS, **counts}) == line
