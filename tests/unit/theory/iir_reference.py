"""The same theory in 50 digits, from the textbook formulas alone: elliptic F by its zeros, orders by K.

Nothing here is shared with the code under test, neither the rearranged edges nor AGM or theta series.
"""

from __future__ import annotations

import math
from collections.abc import Callable

from mpmath import MPContext

from bandwright.theory.closed_form import butterworth, chebyshev_1, chebyshev_2, elliptic
from bandwright.theory.closed_form.family import Family
from bandwright.theory.closed_form.types import Design, Mask, MaskBand

# A context of its own, so that no other test's precision counts.
mp = MPContext()
mp.dps = 50
mpf, mpc = mp.mpf, mp.mpc

FAMILIES: dict[str, Family] = {
    "butterworth": butterworth,
    "chebyshev_1": chebyshev_1,
    "chebyshev_2": chebyshev_2,
    "elliptic": elliptic,
}


def excess(decibels: float) -> mpf:
    """10^(A/10) - 1"""
    return mp.power(10, mpf(decibels) / 10) - 1


def prewarped(w: float) -> mpf:
    """tan(w/2) of the double w; the double nearest to pi is Nyquist."""
    return mp.inf if w >= math.pi else mp.tan(mpf(w) / 2)


def real_order(name: str, stop_edge: mpf, discrimination: mpf) -> mpf:
    """The order formulas of the textbooks (Zverev 1967; Antoniou 1979), from memory."""
    root = mp.sqrt(discrimination)
    if name == "butterworth":
        return mp.log(root) / mp.log(stop_edge)
    if name != "elliptic":
        return mp.acosh(root) / mp.acosh(stop_edge)
    m, m1 = 1 / stop_edge**2, 1 / discrimination
    return mp.ellipk(m) * mp.ellipk(1 - m1) / (mp.ellipk(1 - m) * mp.ellipk(m1))


def characteristic(name: str, order: int, stop_edge: mpf) -> Callable[[mpf | mpc], mpf | mpc]:
    """F of the prototype with pass edge 1: F(1) = 1 (up to its sign)."""
    if name == "butterworth":
        return lambda x: mp.power(x, order)
    if name == "chebyshev_1":
        return lambda x: _chebyshev(order, x)
    if name == "chebyshev_2":
        return lambda x: _chebyshev(order, stop_edge) / _chebyshev(order, stop_edge / x)
    m = 1 / stop_edge**2
    quarter = mp.ellipk(m)
    zeros = [mp.ellipfun("cd", u=(2 * i - 1) * quarter / order, m=m) for i in range(1, order // 2 + 1)]

    def rational(x: mpf | mpc) -> mpf | mpc:
        product = x if order % 2 else mpf(1)
        for zero in zeros:
            product *= (x - zero) * (x + zero) / (1 - m * (zero * x) ** 2)
        return product

    scale = rational(mpf(1))
    return lambda x: rational(x) / scale


def _chebyshev(order: int, x: mpf | mpc) -> mpf | mpc:
    return mp.cosh(order * mp.acosh(mpc(x)))


def pole_error(name: str, order: int, stop_edge: mpf, g: mpf, pole: complex) -> tuple[float, float]:
    """How far a pole of the prototype lies from the true one, by one Newton step.

    The error of the real part, as a share of it, and of the imaginary part, as a share of the magnitude.
    """
    f = characteristic(name, order, stop_edge)
    x = mpc(pole) / mpc(0, 1)
    value, step = 1 + g * f(x) ** 2, mpf(10) ** -25 * abs(pole)
    slope = g * (f(x + step) ** 2 - f(x - step) ** 2) / (2 * step)
    correction = mpc(0, 1) * value / slope
    return float(abs(correction.real / pole.real)), float(abs(correction.imag) / abs(pole))


def gain_db(design: Design, w: float) -> mpf:
    """The gain of a design from its angles and gaps."""
    z = mp.expj(mpf(w))
    product = mpf(1)
    for roots, power in ((design.zeros, 1), (design.poles, -1)):
        for root in roots:
            radius = mp.sqrt(1 - mpf(root.gap))
            for angle in (root.angle, -root.angle) if root.pair else (root.angle,):
                # The doubles nearest to pi stand for Nyquist itself.
                exact = mp.pi if angle == math.pi else mpf(angle)
                product *= abs(1 - radius * mp.expj(exact) / z) ** power
    return 20 * mp.log10(product) + 20 * mpf(design.log_gain) / mp.log(10)


def from_edges(
    kind: str, edges: tuple[float, ...], pass_db: float, stop_db: float | tuple[float, float]
) -> Mask:
    """A mask with relative levels from its edges in rad/sample, by rising frequency."""
    cuts = (0.0, *edges, math.pi)
    kinds = {
        "low-pass": ("pass", "stop"),
        "high-pass": ("stop", "pass"),
        "band-pass": ("stop", "pass", "stop"),
        "band-stop": ("pass", "stop", "pass"),
    }[kind]
    depths = list(stop_db) if isinstance(stop_db, tuple) else [stop_db] * 2
    bands = []
    for item, name in enumerate(kinds):
        low, high = cuts[2 * item], cuts[2 * item + 1]
        if name == "pass":
            bands.append(MaskBand("pass", low, high, -pass_db, 0.0, True, item))
        else:
            bands.append(MaskBand("stop", low, high, None, -depths.pop(0), True, item))
    return Mask(tuple(bands))
