"""A filter that nothing can be built for is never passed over in silence, however odd its bands are."""

from __future__ import annotations

from hypothesis import given, settings
from hypothesis import strategies as st

from bandwright.analysis.analyse import Memo, analyse_filter
from bandwright.bandfile.reader import read
from bandwright.findings.catalogue import RULES
from bandwright.findings.rules import LONGEST_SENTENCE

EDGES = st.one_of(
    st.sampled_from(
        ["0 Hz", "2 kHz", "0.1 fs", "0.5 fs", "0.6 fs", "0.2 pi", "1 pi", "1.5 pi", "0.3 nyquist"]
    ),
    st.integers(-100, 3000).map(lambda hertz: f"{hertz} Hz"),
    st.floats(0.001, 5.0).map(lambda kilohertz: f"{kilohertz:.3g} kHz"),
    st.integers(1, 50).map(lambda millihertz: f"{millihertz} mHz"),
)
LEVELS = st.one_of(
    st.sampled_from(["0 dB", "0.001 dB", "-60 dB"]), st.floats(0.01, 150).map("{:.3g} dB".format)
)
GAINS = st.one_of(
    st.sampled_from(["0", "1", "99 %", "-0.2 x", "60 x", "0.99 dB", "1 dB", "0 dB"]),
    st.floats(-100, 40).map("{:.3g} dB".format),
    st.floats(0.001, 3).map("{:.3g} x".format),
)
FAMILIES = st.sampled_from(
    ["butterworth", "chebyshev-1", "chebyshev-2", "elliptic", "equiripple", "kaiser-window"]
)
STRUCTURES = st.sampled_from(["cascade", "direct-form-1", "direct-form-2", "symmetric", "transversal"])


@st.composite
def band(draw: st.DrawFn) -> str:
    """One item of `bands`, with a level of its kind."""
    kind = draw(st.sampled_from(["pass", "stop"]))
    keys = {side: draw(EDGES) for side in ("from", "to") if draw(st.booleans())}
    if draw(st.integers(0, 3)):
        keys["ripple" if kind == "pass" else "attenuation"] = draw(LEVELS)
    else:
        sides = ("min", "max") if kind == "pass" else ("max",)
        keys["gain"] = "{" + ", ".join(f"{side}: {draw(GAINS)}" for side in sides) + "}"
    return f"{kind}: {{{', '.join(f'{key}: {value}' for key, value in keys.items())}}}"


@st.composite
def filter(draw: st.DrawFn) -> str:
    """A band file with one filter."""
    lines = ["sample_rate: 4 kHz"]
    if draw(st.booleans()):
        lines.append(f"family: {draw(FAMILIES)}")
    if draw(st.booleans()):
        lines.append(f"structure: {draw(STRUCTURES)}")
    if draw(st.booleans()):
        lines.append(f"phase: {draw(st.sampled_from(['any', 'linear']))}")
    if draw(st.booleans()):
        lines.append(f"order: {draw(st.integers(1, 20))}")
    bands = draw(st.lists(band(), min_size=1, max_size=4))
    return "\n".join(
        ["format: bandwright/1", "filters:", "  odd:", *(f"    {line}" for line in lines), "    bands:"]
        + [f"      - {item}" for item in bands]
    )


@given(filter())
@settings(max_examples=400, deadline=None)
def test_where_nothing_can_be_built_something_is_found(text: str) -> None:
    document = read(text)
    ((block, value),) = document.filters
    analysis = analyse_filter(value, {}, Memo())
    said = [RULES[hit.id].message(hit) for hit in analysis.hits]
    assert all(len(sentence) <= LONGEST_SENTENCE and "…" not in sentence for sentence in said)
    severe = [hit.id for hit in analysis.hits if RULES[hit.id].severity in ("error", "warning")]
    if analysis.forecast.chosen is None:
        assert severe or document.blocks[block].faults or analysis.open
