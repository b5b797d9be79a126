"""From a low-pass prototype to a digital filter: band transformation and bilinear transform of its roots.

A root s gives z = (1 + s)/(1 - s); what is kept of it is the angle and 1 - |z|^2 = -4 Re s / |1 - s|^2,
which stay exact where |z| is next to 1 (Constantinides 1970 for the band transformations).
"""

from __future__ import annotations

import cmath
import math
from collections.abc import Iterator

from bandwright.theory.closed_form import response
from bandwright.theory.closed_form.family import Prototype
from bandwright.theory.closed_form.selectivity import Selectivity
from bandwright.theory.closed_form.types import Design, Root
from bandwright.theory.closed_form.warping import frequency

AT_DC = Root(0.0, 0.0, pair=False)
AT_NYQUIST = Root(math.pi, 0.0, pair=False)


def to_digital(
    prototype: Prototype, selectivity: Selectivity, stop_edge: float, log_dc_gain: float
) -> Design:
    """The digital filter of a prototype whose pass band ends at 1 and whose stop band starts at `stop_edge`.

    `log_dc_gain` is ln of the prototype's gain at 0 over its peak, below 0 for an even order with ripple. The
    peak is placed at the top of the mask's pass window.
    """
    poles = tuple(root for pole in prototype.poles for root in _poles(pole, selectivity, stop_edge))
    zeros = tuple(_zeros(prototype, selectivity, stop_edge))
    match selectivity.kind:
        case "high-pass":
            image_of_dc = math.pi
        case "band-pass":
            image_of_dc = frequency(selectivity.centre)
        case _:
            image_of_dc = 0.0
    wanted = log_dc_gain + selectivity.peak_db * math.log(10.0) / 20.0
    unscaled = Design(poles, zeros, 0.0)
    return Design(poles, zeros, wanted - response.log_gain(unscaled, image_of_dc))


def _poles(pole: complex, selectivity: Selectivity, stop_edge: float) -> Iterator[Root]:
    width = selectivity.width
    match selectivity.kind:
        case "low-pass":
            yield _root(pole * width)
            return
        case "high-pass":
            yield _root(width / pole)
            return
        case "band-pass":
            images = _band_images(pole * width, selectivity.centre)
        case "band-stop":
            images = _band_images(stop_edge * width / pole, selectivity.centre)
    if pole.imag != 0.0:
        # The conjugate pole has the conjugate images, so each image stands for a pair.
        yield from (_root(image) for image in images)
    elif images[0].imag != 0.0:
        yield _root(images[0])
    else:
        yield from (_root(image) for image in images)


def _zeros(prototype: Prototype, selectivity: Selectivity, stop_edge: float) -> Iterator[Root]:
    width, centre = selectivity.width, selectivity.centre
    at_infinity = prototype.order - 2 * len(prototype.zeros)
    match selectivity.kind:
        case "low-pass":
            yield from (_on_circle(zero * width) for zero in prototype.zeros)
            yield from (AT_NYQUIST,) * at_infinity
        case "high-pass":
            yield from (_on_circle(width / zero) for zero in prototype.zeros)
            yield from (AT_DC,) * at_infinity
        case "band-pass":
            for zero in prototype.zeros:
                yield from _mirrored(zero * width, centre)
            yield from (AT_DC, AT_NYQUIST) * at_infinity
        case "band-stop":
            for zero in prototype.zeros:
                yield from _mirrored(stop_edge * width / zero, centre)
            yield from (_on_circle(centre),) * at_infinity


def _mirrored(difference: float, centre: float) -> Iterator[Root]:
    """The two frequencies with W - W0^2/W = +-difference, for a zero on the imaginary axis."""
    half = 0.5 * difference
    upper = half + math.hypot(half, centre)
    yield _on_circle(upper)
    yield _on_circle(centre * centre / upper)


def _band_images(scaled: complex, centre: float) -> tuple[complex, complex]:
    """Both roots of s^2 - scaled s + W0^2: the larger by the formula, the other as W0^2 over it."""
    half = 0.5 * scaled
    root = cmath.sqrt((half - centre) * (half + centre))
    larger = half + root if abs(half + root) >= abs(half - root) else half - root
    return larger, centre * centre / larger


def _root(s: complex) -> Root:
    """The image of one root of the left half plane; a complex one stands for its pair."""
    gap = -4.0 * s.real / abs(1.0 - s) ** 2
    if s.imag == 0.0:
        return Root(0.0 if abs(s) < 1.0 else math.pi, gap, pair=False)
    return Root(abs(math.atan2(2.0 * s.imag, (1.0 - abs(s)) * (1.0 + abs(s)))), gap, pair=True)


def _on_circle(warped: float) -> Root:
    return Root(frequency(warped), 0.0, pair=True)
