"""Whole filters, devices and bands with places to fill in, in the notation of the protocol's snippets."""

from __future__ import annotations

import re
from collections.abc import Iterator, Sequence
from typing import NamedTuple

from bandwright.bandfile.edits import as_yaml
from bandwright.bandfile.values import Path


class Snippet(NamedTuple):
    """A text with places to fill in; its further lines are indented as if the first stood at column 0."""

    label: str
    doc: str
    text: str


_SHAPES = {
    "low-pass": (
        "pass: {to: ${3:20 Hz}, ripple: ${4:0.1 dB}}",
        "stop: {from: ${5:40 Hz}, attenuation: ${6:60 dB}}",
    ),
    "high-pass": (
        "stop: {to: ${3:20 Hz}, attenuation: ${4:60 dB}}",
        "pass: {from: ${5:40 Hz}, ripple: ${6:0.1 dB}}",
    ),
    "band-pass": (
        "stop: {to: ${3:80 Hz}, attenuation: ${4:60 dB}}",
        "pass: {from: ${5:100 Hz}, to: ${6:200 Hz}, ripple: ${7:0.1 dB}}",
        "stop: {from: ${8:250 Hz}, attenuation: ${9:60 dB}}",
    ),
    "band-stop": (
        "pass: {to: ${3:80 Hz}, ripple: ${4:0.1 dB}}",
        "stop: {from: ${5:100 Hz}, to: ${6:200 Hz}, attenuation: ${7:60 dB}}",
        "pass: {from: ${8:250 Hz}, ripple: ${9:0.1 dB}}",
    ),
}

_BANDS = {
    "pass": Snippet(
        "pass band",
        "A band to keep, with the height of its gain window.",
        "pass: {from: ${1:10 Hz}, to: ${2:20 Hz}, ripple: ${3:0.1 dB}}",
    ),
    "stop": Snippet(
        "stop band",
        "A band to suppress, with how far the gain stays below the pass bands.",
        "stop: {from: ${1:25 Hz}, to: ${2:50 Hz}, attenuation: ${3:70 dB}}",
    ),
    "bounds": Snippet(
        "bounds",
        "Bounds that hold besides the pass and stop bands; read and not judged by this release.",
        "bounds: {from: ${1:10 Hz}, to: ${2:50 Hz}, gain: {max: ${3:0.5 dB}}}",
    ),
}


def blocks(section: str, devices: Sequence[str]) -> Iterator[Snippet]:
    """The snippets for a new name below `devices` or `filters`; a filter names one of the devices."""
    if section == "devices":
        keys = "sample_rate: ${2:4 kHz}\n  arithmetic: ${3:q31}\n  structure: ${4:[cascade, symmetric]}"
        yield Snippet(
            "device", "What filters run on: its keys are their defaults.", f"${{1:device}}:\n  {keys}\n"
        )
        return
    for shape, bands in _SHAPES.items():
        lines = [f"${{1:{shape}}}:", f"  {_rate(devices)}", "  bands:", *(f"    - {band}" for band in bands)]
        yield Snippet(f"{shape} filter", f"A filter with the bands of a {shape}.", "\n".join(lines) + "\n")


def bands(kinds: set[str], path: Path) -> Iterator[Snippet]:
    """The snippets for a band of one of these kinds, where `path` is that of an item of `bands`."""
    if len(path) == 2 and path[0] == "bands":
        yield from (one for kind, one in _BANDS.items() if kind in kinds)


def _rate(devices: Sequence[str]) -> str:
    """The line that gives the sample rate: by a device where there are some."""
    if not devices:
        return "sample_rate: ${2:4 kHz}"
    names = ",".join(re.sub(r"([\\$}|,])", r"\\\1", as_yaml(name)) for name in devices)
    return f"device: ${{2|{names}|}}"
