"""A band file that the tests of the reader share, and short ways to look at what was read."""

from __future__ import annotations

from bandwright.bandfile.blocks import locate
from bandwright.bandfile.reader import read
from bandwright.bandfile.values import Document, Fault, Filter, Path, Span

EXAMPLE = """\
format: bandwright/1

devices:
  hoist-node:                      # what the filters run on
    sample_rate: 4 kHz
    arithmetic: q31
    structure: cascade
    at_most: {order: 16, multiplications: 60, delay: 25 ms}

filters:
  strain-slow:
    purpose: Static load, ahead of the 50 Hz log
    device: hoist-node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth

  gearbox-envelope:
    device: hoist-node
    sample_rate: 16 kHz            # a filter's own key wins
    bands:
      - stop: {to: 1.8 kHz, attenuation: 50 dB}
      - pass: {from: 2 kHz, to: 4 kHz, ripple: ±0.05 dB}
      - stop: {from: 4.4 kHz, attenuation: 60 dB}
    phase: linear
    structure: symmetric
    at_most: {multiplications: 80}
    accepted:
      - finding: cost/multiplications-over-maximum
        up_to: 110
        reason: The gearbox channel runs on its own core.
        until: 2027-06-30
"""

ONE = """\
format: bandwright/1
filters:
  one:
    sample_rate: 8 kHz
    bands:
      - pass: {to: 1 kHz, ripple: 1 dB}
      - stop: {from: 2 kHz, attenuation: 40 dB}
"""


def with_line(text: str, old: str, new: str) -> str:
    """The text with one stretch replaced that must be there."""
    assert old in text
    return text.replace(old, new, 1)


def filter_of(document: Document, name: str = "one") -> Filter:
    return next(found for _, found in document.filters if found.name == name)


def faults(document: Document) -> list[Fault]:
    return [fault for block in document.blocks for fault in block.faults]


def ids(document: Document) -> list[str]:
    """Every fault as `id` or `id form`."""
    return [f"{fault.id} {fault.form}".strip() for fault in faults(document)]


def pointed_at(document: Document) -> list[str]:
    """The text that each fault points at; of several lines the first."""
    return [text_at(document, span_of(document, fault)) for fault in faults(document)]


def span_of(document: Document, fault: Fault) -> Span:
    index = next(i for i, block in enumerate(document.blocks) if fault in block.faults)
    return locate(document, index, fault.place)


def text_at(document: Document, span: Span) -> str:
    line = lines(document.text)[span.line]
    return line[span.column : span.end_column if span.line == span.end_line else None]


def lines(text: str) -> list[str]:
    return text.replace("\r\n", "\n").replace("\r", "\n").split("\n")


def unknown(found: Filter) -> list[Path]:
    return [path for path, setting in found.settings if not setting.known]


def one_fault(text: str) -> Fault:
    found = faults(read(text))
    assert len(found) == 1, found
    return found[0]
