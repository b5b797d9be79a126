"""Plots to test, and what is in them."""

from __future__ import annotations

import xml.etree.ElementTree as ET
from functools import cache
from pathlib import Path

from bandwright.bandfile import reader
from bandwright.drawings.labels import Box, text_box
from bandwright.drawings.plot import plot
from bandwright.forecast.forecast import Forecast

DEMO = Path(__file__).resolve().parents[3] / "linter" / "bandwright" / "demo" / "hoist.bands.yaml"

HARD = """\
format: bandwright/1
filters:
  a-name-so-long-that-no-title-of-a-plot-could-ever-hold-it-beside-the-summary-of-its-bands-<&"'>:
    sample_rate: 8 kHz
    bands:
      - stop: {to: 500 Hz, attenuation: 40 dB}
      - pass: {from: 600 Hz, to: 900 Hz, ripple: 1 dB}
      - stop: {from: 1 kHz, to: 2 kHz, attenuation: 60 dB}
      - stop: {from: 2 kHz, attenuation: 50 dB}
  sharp:
    sample_rate: 48 kHz
    bands:
      - pass: {to: 20 kHz, ripple: 0.0001 dB}
      - stop: {from: 20.01 kHz, attenuation: 120 dB}
  many:
    sample_rate: 44.1 kHz
    bands:
      - pass: {to: 1 kHz, ripple: 1 dB}
      - stop: {from: 1.2 kHz, to: 2 kHz, attenuation: 60 dB}
      - pass: {from: 2.2 kHz, to: 4 kHz, gain: {min: -1 dB, max: 6 dB}}
      - stop: {from: 4.4 kHz, to: 5 kHz, attenuation: 60 dB}
      - pass: {from: 5.6 kHz, to: 9 kHz, ripple: 1 dB}
      - stop: {from: 9.6 kHz, to: 9.7 kHz, attenuation: 61 dB}
      - pass: {from: 11 kHz, ripple: 1 dB}
  touching:
    bands:
      - pass: {to: 0.3 pi, gain: {min: -3 dB}}
      - bounds: {from: 0.3 pi, to: 0.4 pi, gain: {max: 3 dB}}
      - stop: {from: 0.4 pi, attenuation: 20 dB}
  everything-passes:
    sample_rate: 1 kHz
    bands:
      - pass: {ripple: 1 dB}
  narrow:
    sample_rate: 1 MHz
    bands:
      - stop: {to: 99 kHz, attenuation: 50 dB}
      - pass: {from: 99.9 kHz, to: 100.1 kHz, ripple: 1 dB}
      - stop: {from: 101 kHz, attenuation: 50 dB}
"""
"""Filters that are hard to draw: crowded edges, levels and names, bounds on one side, no edge at all."""


@cache
def forecasts() -> dict[str, Forecast]:
    """The forecast of every filter of the demo and of `HARD`."""
    texts = (DEMO.read_text(encoding="utf-8"), HARD)
    filters = [filter for text in texts for _, filter in reader.read(text).filters]
    return {filter.name: Forecast(filter, {}) for filter in filters}


NAMES = sorted(forecasts())


@cache
def drawn(name: str) -> str:
    """The plot of a filter."""
    return plot(forecasts()[name])


def elements(svg: str, tag: str) -> list[ET.Element]:
    """Every element of this name."""
    return list(ET.fromstring(svg).iter(f"{{http://www.w3.org/2000/svg}}{tag}"))


def text_boxes(svg: str) -> dict[str, Box]:
    """Each text with the box that it takes at most."""
    found = {}
    for text in elements(svg, "text"):
        words = text.text or ""
        x, y = float(text.attrib["x"]), float(text.attrib["y"])
        strong = "strong" in text.attrib["class"]
        size, anchor = float(text.attrib["font-size"]), text.attrib.get("text-anchor", "start")
        box = text_box(x, y, words, size, anchor, strong=strong)
        if "transform" in text.attrib:  # turned to the left about its own place
            box = Box(x + box.top - y, y - box.right + x, x + box.bottom - y, y - box.left + x)
        found[f"{words} at {x:.0f}, {y:.0f}"] = box
    return found
