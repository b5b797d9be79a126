"""Masks of published standards, typed as a user would type them, get no finding that they don't deserve."""

from __future__ import annotations

from pathlib import Path

import pytest

from bandwright.forecast.forecast import Forecast
from unit.findings import checking

FOLDER = Path(__file__).parent
MASKS = sorted(FOLDER.glob("*.bands.yaml"))


@pytest.mark.parametrize("mask", MASKS, ids=lambda mask: mask.name.removesuffix(".bands.yaml"))
def test_a_published_mask_checks_clean(mask: Path) -> None:
    assert [
        finding.message
        for finding in checking.findings(mask.read_bytes())
        if finding.severity in ("error", "warning")
    ] == []


@pytest.mark.parametrize("mask", MASKS, ids=lambda mask: mask.name.removesuffix(".bands.yaml"))
def test_a_published_mask_says_where_it_is_from(mask: Path) -> None:
    comment = [line for line in mask.read_text(encoding="utf-8").splitlines() if line.startswith("#")]
    assert any(line.startswith("# Source: ") for line in comment)


def test_the_octave_band_of_class_1_takes_three_pole_pairs() -> None:
    """Octave filters are built of third-order Butterworth prototypes (common practice, no source)."""
    text = (FOLDER / "octave-band.bands.yaml").read_text(encoding="utf-8")
    ((_, filter),) = checking.read(text).filters
    candidate = Forecast(filter, {}).candidate("butterworth")
    assert candidate is not None
    assert candidate.order == 6
