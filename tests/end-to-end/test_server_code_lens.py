"""Code lenses: what stands above each filter."""

from __future__ import annotations

from lsp_client import Client, cut_out

URI = "file:///crane/hoist.bands.yaml"

TEXT = """\
format: bandwright/1
filters:
  größer-🏗️:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
  linear:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 100 Hz, ripple: 0.1 dB}
      - stop: {from: 400 Hz, attenuation: 60 dB}
    phase: linear
  half-typed:
    sample_rate: 4 kHz
    bands: [
  wrong:
    bands: []
    familly: elliptic
"""


def test_each_filter_has_its_smallest_ones_and_its_worst_findings() -> None:
    client = Client()
    client.initialize()
    client.open(URI, TEXT)
    lenses = client.request("textDocument/codeLens", {"textDocument": {"uri": URI}})
    shown = {cut_out(TEXT, lens["range"]): lens["command"]["title"] for lens in lenses}
    assert {lens["command"]["command"] for lens in lenses} == {""}, "there is nothing to run"
    assert "half-typed" not in shown
    smallest_iir, smallest_fir, worst = shown["größer-🏗️"].split(" · ")
    # scipy.signal.ellipord gives 9 for this mask.
    assert smallest_iir == "elliptic order 9"
    assert smallest_fir.startswith("equiripple ~")
    assert smallest_fir.endswith(" taps")
    assert worst == "1 error"
    assert [part.split()[0] for part in shown["linear"].split(" · ")] == ["equiripple"]
    assert shown["wrong"].endswith(" errors")
    assert client.request("textDocument/codeLens", {"textDocument": {"uri": "file:///x.bands.yaml"}}) is None
    assert client.shut_down() == 0
    assert client.errors() == ""
