"""A figure that nobody can say exactly is quoted as the bound that is certain."""

from __future__ import annotations

from unit.findings.checking import findings

TOO_LONG_TO_DESIGN = """\
format: bandwright/1
filters:
  log:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    phase: linear
    at_most: {multiplications: 60, delay: 25 ms}
"""


def test_a_length_beyond_the_exchange_is_quoted_from_below() -> None:
    messages = {one.id: one.message for one in findings(TOO_LONG_TO_DESIGN)}
    for name in ("multiplications", "delay"):
        assert "at least " in messages[f"cost/{name}-over-maximum"]
