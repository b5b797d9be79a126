"""A sample rate: Nyquist and the time between samples."""

from __future__ import annotations

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Quantity
from bandwright.faces.markdown import Part


def parts(rate: Quantity) -> list[Part]:
    """The rate as written, half of it and its inverse."""
    hertz = quantities.hertz(rate)
    if hertz is None or hertz <= 0.0:
        return []
    nyquist, period = quantities.show(hertz / 2.0, "frequency"), quantities.show(1.0 / hertz, "time")
    return [f"**{quantities.show_quantity(rate)}**: Nyquist is {nyquist}, one sample lasts {period}."]
