"""Band files of any size, each filter another one, none of which leaves a question open."""

from __future__ import annotations

import random

HEAD = """\
format: bandwright/1

devices:
  node:
    sample_rate: 8 kHz
    arithmetic: float64
    at_most: {order: 16, multiplications: 60}

filters:
"""

FILTER = """\
  channel-{number}:
    purpose: Channel {number}, ahead of the log
    device: node
    bands:
      - pass: {{to: {pass_edge:.2f} Hz, ripple: {ripple:.2f} dB}}
      - stop: {{from: {stop_edge:.2f} Hz, attenuation: {attenuation:.1f} dB}}
    family: elliptic
    structure: cascade
"""


def band_file(filters: int, seed: int = 0) -> str:
    """The text of a band file with this many low-pass filters."""
    dice = random.Random(seed)
    written = []
    for number in range(filters):
        pass_edge = dice.uniform(100.0, 1500.0)
        written.append(
            FILTER.format(
                number=number,
                pass_edge=pass_edge,
                stop_edge=pass_edge * dice.uniform(1.3, 2.0),
                ripple=dice.uniform(0.1, 1.0),
                attenuation=dice.uniform(40.0, 70.0),
            )
        )
    return HEAD + "\n".join(written)
