"""The least order by brute force: every place of a prototype's free edge, over samples of the mask's bands.

Straight from the mask and the textbook's band transformations in numpy, with nothing of the code under test.
"""

from __future__ import annotations

import math
from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy import special

from bandwright.theory.closed_form.types import Mask, MaskBand

Floats = NDArray[np.float64]

GOLDEN = 0.5 * (math.sqrt(5.0) - 1.0)


def margin(name: str, order: int, mask: Mask, places: int = 160) -> float:
    """ln of the largest r at which a filter of this prototype order has r times the excesses asked.

    0 or more: some filter of the family meets the mask. The pass band is used to the full, and nothing
    exceeds the highest gain that it admits.
    """
    passes = [band for band in mask.bands if band.kind == "pass"]
    stops = [band for band in mask.bands if band.kind == "stop"]
    peak = min(band.most for band in passes if band.most is not None)
    allowed = [_excess(peak - (band.least or 0.0)) for band in passes]
    depths = [-(band.most or 0.0) if band.relative else peak - (band.most or 0.0) for band in stops]
    asked = [_excess(depth) for depth in depths]
    if len(passes) == 2:
        in_passes = _band_stop(passes, stops[0])
        nearest = [1.0 / float(x.max()) for x in in_passes]

        def ratio(edge: float) -> float:
            at_edge = float(_square(name, order, edge, np.array(edge)))
            squares = [_square(name, order, edge, edge * x) for x in in_passes]
            g = min(a / float(square.max()) for a, square in zip(allowed, squares, strict=True))
            least = min(_least(square) for square in squares) if stops[0].relative else 0.0
            return g * (at_edge - (1.0 + asked[0]) * least) / asked[0]

        free = name in ("chebyshev_1", "elliptic")
    else:
        in_pass, in_stops = _one_pass_band(passes[0], stops)
        nearest = [float(x.min()) for x in in_stops]

        def ratio(edge: float) -> float:
            least = _least(_square(name, order, edge, in_pass))
            return min(
                allowed[0]
                * (float(_square(name, order, edge, x).min()) - ((1.0 + a) * least if band.relative else 0.0))
                / a
                for x, a, band in zip(in_stops, asked, stops, strict=True)
            )

        free = name in ("chebyshev_2", "elliptic")
    best = _largest(ratio, min(nearest), max(nearest), places) if free else ratio(min(nearest))
    return math.log(best) if best > 0.0 else -math.inf


def _least(square: Floats) -> float:
    """The least F^2 of samples: 0 where it lies between them, as F^2 has no other minimum in a pass band."""
    place = int(square.argmin())
    return 0.0 if 0 < place < len(square) - 1 else float(square[place])


def _largest(ratio: Callable[[float], float], nearest: float, farthest: float, places: int) -> float:
    low = math.log(1e-3 * (nearest - 1.0))
    edges = [1.0 + math.exp(low + (math.log(farthest - 1.0) - low) * i / places) for i in range(places + 1)]
    edges = sorted({*edges, nearest, farthest})
    values = [ratio(edge) for edge in edges]
    best = max(values)
    for place in sorted(range(len(edges)), key=values.__getitem__)[-3:]:
        a, b = edges[max(0, place - 1)], edges[min(len(edges) - 1, place + 1)]
        for _ in range(40):
            c, d = b - GOLDEN * (b - a), a + GOLDEN * (b - a)
            at_c, at_d = ratio(c), ratio(d)
            a, b = (a, d) if at_c > at_d else (c, b)
            best = max(best, at_c, at_d)
    return best


def _one_pass_band(passing: MaskBand, stops: list[MaskBand]) -> tuple[Floats, list[Floats]]:
    """Prototype frequencies in the pass band and in the stop bands, the pass edge at 1."""
    below, above = stops[0].low < passing.low, stops[-1].low > passing.low
    low, high = math.tan(passing.low / 2.0), math.tan(min(passing.high, math.pi - 1e-9) / 2.0)

    def prototype(w: Floats) -> Floats:
        warped = np.tan(w / 2.0)
        if below and above:
            return np.abs(warped**2 - low * high) / (warped * (high - low))
        return low / warped if below else warped / high

    return prototype(_samples(passing)), [prototype(_samples(band)) for band in stops]


def _band_stop(passes: list[MaskBand], stopping: MaskBand) -> list[Floats]:
    """Prototype frequencies in the pass bands, the stop edge at 1."""
    low, high = math.tan(stopping.low / 2.0), math.tan(stopping.high / 2.0)

    def prototype(w: Floats) -> Floats:
        warped = np.tan(w / 2.0)
        return warped * (high - low) / np.abs(low * high - warped**2)

    return [prototype(_samples(band)) for band in passes]


def _samples(band: MaskBand, count: int = 800) -> Floats:
    low, high = max(band.low, 1e-9), min(band.high, math.pi - 1e-9)
    warped = np.geomspace(math.tan(low / 2.0), math.tan(high / 2.0), count)
    w = 2.0 * np.arctan(warped)
    w[0], w[-1] = low, high
    return w


def _square(name: str, order: int, edge: float, x: Floats) -> Floats:
    """F^2 of the prototype with pass edge 1 and stop edge `edge`."""
    with np.errstate(all="ignore"):
        if name == "butterworth":
            return x ** (2 * order)
        if name == "chebyshev_1":
            return _chebyshev(order, x) ** 2
        if name == "chebyshev_2":
            return (_chebyshev(order, np.array(edge)) / _chebyshev(order, edge / x)) ** 2
        complement = (edge - 1.0) * (edge + 1.0) / edge**2
        quarter = special.ellipkm1(complement)
        zeros = []
        for i in range(1, order // 2 + 1):
            _, cn, dn, _ = special.ellipj((2 * i - 1) / order * quarter, 1.0 - complement)
            zeros.append(cn / dn)

        def rational(x: Floats) -> Floats:
            product = x if order % 2 else np.ones_like(x)
            for zero in zeros:
                product = product * (x * x - zero * zero) / (1.0 - (zero * x / edge) ** 2)
            return product

        return (rational(x) / rational(np.array(1.0))) ** 2


def _chebyshev(order: int, x: Floats) -> Floats:
    return np.where(
        x <= 1.0,
        np.cos(order * np.arccos(np.minimum(x, 1.0))),
        np.cosh(order * np.arccosh(np.maximum(x, 1.0))),
    )


def _excess(decibels: float) -> float:
    return 10.0 ** (decibels / 10.0) - 1.0
