"""The palette: contrasts after WCAG 2.1 (W3C 2018), success criteria 1.4.3 and 1.4.11, in both schemes."""

from __future__ import annotations

from collections.abc import Mapping
from itertools import combinations

import pytest

from bandwright.drawings.colours import DARK, LIGHT, NOT_CURVES, style_sheet
from bandwright.drawings.marks import mark

CURVES = [name for name in LIGHT if name not in NOT_CURVES]
SCHEMES = pytest.mark.parametrize("colours", [LIGHT, DARK], ids=["light", "dark"])


def luminance(colour: str) -> float:
    """Relative luminance of an sRGB colour, WCAG 2.1."""
    parts = [int(colour[at : at + 2], 16) / 255.0 for at in (1, 3, 5)]
    red, green, blue = (one / 12.92 if one <= 0.03928 else ((one + 0.055) / 1.055) ** 2.4 for one in parts)
    return 0.2126 * red + 0.7152 * green + 0.0722 * blue


def contrast(one: str, other: str) -> float:
    dark, light = sorted((luminance(one), luminance(other)))
    return (light + 0.05) / (dark + 0.05)


def test_contrast_is_that_of_the_standard() -> None:
    assert contrast("#000000", "#ffffff") == pytest.approx(21.0)  # WCAG 2.1, "contrast ratio", note 1
    assert contrast("#767676", "#ffffff") == pytest.approx(4.54, abs=0.01)  # from memory


@SCHEMES
@pytest.mark.parametrize("role", ["ink", "quiet"])
def test_text_can_be_read(colours: Mapping[str, str], role: str) -> None:
    assert contrast(colours[role], colours["ground"]) >= 4.5


@SCHEMES
@pytest.mark.parametrize("role", ["frame", "limit", *CURVES])
def test_lines_can_be_seen(colours: Mapping[str, str], role: str) -> None:
    assert contrast(colours[role], colours["ground"]) >= 3.0


@SCHEMES
def test_the_hatching_is_fainter_than_every_curve_and_no_grid(colours: Mapping[str, str]) -> None:
    hatch = contrast(colours["hatch"], colours["ground"])
    assert hatch >= 2.5
    assert all(contrast(colours[name], colours["ground"]) > 1.5 * hatch for name in CURVES)


def test_both_schemes_have_the_same_roles_and_both_are_in_the_style_sheet() -> None:
    assert LIGHT.keys() == DARK.keys()
    light, _, dark = style_sheet().partition("@media screen and (prefers-color-scheme:dark)")
    assert all(colour in light for colour in LIGHT.values())
    assert all(colour in dark for colour in DARK.values())


def test_every_rule_keeps_to_the_plot() -> None:
    """So that the plot can stand in a page."""
    sheet = style_sheet().replace("@media screen and (prefers-color-scheme:dark){", "").rstrip("}")
    for rule in sheet.split("}"):
        assert all(one.startswith(".bandwright-plot ") for one in rule.partition("{")[0].split(","))


@pytest.mark.parametrize(("one", "other"), list(combinations(CURVES, 2)))
def test_no_two_families_share_a_marker(one: str, other: str) -> None:
    assert mark(one, 0.0, 0.0).replace(one, "") != mark(other, 0.0, 0.0).replace(other, "")
