"""Orders of the four classical families from closed forms, against scipy's four order functions."""

from __future__ import annotations

import math

from scipy import signal

from bandwright.forecast.families import FAMILIES
from bandwright.theory.closed_form import iir
from bandwright.theory.closed_form.selectivity import selectivity
from bandwright.theory.closed_form.types import BandKind, Mask, MaskBand
from benchmarks.rows import Row, seconds

RIPPLE_DB, ATTENUATION_DB = 1.0, 60.0
THEORIES = [row.theory for row in FAMILIES.values() if row.theory is not None]
SCIPY = (signal.buttord, signal.cheb1ord, signal.cheb2ord, signal.ellipord)


def measure() -> list[Row]:
    # Edges as fractions of Nyquist.
    low_pass = mask(("pass", 0.0, 0.2), ("stop", 0.25, 1.0))
    band_stop = mask(("pass", 0.0, 0.1), ("stop", 0.2, 0.5), ("pass", 0.6, 1.0))
    return [
        compared("orders of four families, low-pass / scipy", low_pass, 0.2, 0.25, bar=1 / 10),
        compared("orders of four families, band-stop / scipy", band_stop, [0.1, 0.6], [0.2, 0.5], bar=1 / 50),
    ]


def mask(*bands: tuple[BandKind, float, float]) -> Mask:
    """A mask with the same ripple and the same attenuation everywhere."""
    return Mask(tuple(band(item, *one) for item, one in enumerate(bands)))


def band(item: int, kind: BandKind, low: float, high: float) -> MaskBand:
    least, most = (-RIPPLE_DB, 0.0) if kind == "pass" else (None, -ATTENUATION_DB)
    return MaskBand(kind, low * math.pi, high * math.pi, least, most, relative=True, item=item)


def compared(
    what: str, of: Mask, passed: float | list[float], stopped: float | list[float], bar: float
) -> Row:
    def ours() -> None:
        shape = selectivity(of)
        assert shape is not None
        for theory in THEORIES:
            iir.least_order(theory, shape)

    def theirs() -> None:
        for order in SCIPY:
            order(passed, stopped, RIPPLE_DB, ATTENUATION_DB)

    mine, scipys = seconds(ours), seconds(theirs)
    return Row(what, mine / scipys, bar, f"{1e6 * mine:.0f} us / {1e6 * scipys:.0f} us")
