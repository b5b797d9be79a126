"""The table of keys: complete, in order, and true to its own examples."""

from __future__ import annotations

import pytest

from bandwright.bandfile import grammar, quantities
from bandwright.bandfile.grammar import KEYS, Key
from bandwright.bandfile.quantities import Trouble
from bandwright.bandfile.reader import read
from unit.bandfile.example import ONE, ids, with_line


def test_every_key_has_a_sentence_and_stands_after_its_container() -> None:
    seen: set[tuple[str, ...]] = {()}
    for row in KEYS:
        assert row.doc.endswith(".") and row.doc[0].isupper(), row.path
        assert row.path[:-1] in seen, row.path
        assert row.path not in seen, row.path
        seen.add(row.path)


@pytest.mark.parametrize(
    "row", [row for row in KEYS if row.kind == "quantity"], ids=lambda row: ".".join(row.path)
)
def test_the_example_of_a_quantity_can_be_read(row: Key) -> None:
    read_back = row.example in row.names or quantities.parse(row.example, row.dimension, row.symmetric)
    assert not isinstance(read_back, Trouble)


@pytest.mark.parametrize(
    "row",
    [
        row
        for row in KEYS
        if "filter" in row.where and len(row.path) == 1 and row.path[0] not in ("bands", "device")
    ],
    ids=lambda row: row.path[0],
)
def test_the_example_of_a_filter_key_reads_without_a_fault(row: Key) -> None:
    text = ONE.replace("    sample_rate: 8 kHz\n", "") if row.path == ("sample_rate",) else ONE
    found = ids(read(f"{text}    {row.path[0]}: {row.example}\n"))
    allowed = set() if row.judged or row.example == row.default else {"key/not-judged-yet"}
    assert set(found) == allowed


def test_names_of_families_and_structures_are_in_the_table() -> None:
    family, structure = grammar.key("filter", ("family",)), grammar.key("device", ("structure",))
    assert family and structure
    assert family.names == (*grammar.IIR_FAMILIES, *grammar.FIR_FAMILIES)
    assert structure.names == (*grammar.IIR_STRUCTURES, *grammar.FIR_STRUCTURES)
    assert grammar.IIR_FAMILIES[-1] == "legendre" and grammar.FIR_FAMILIES[0] == "equiripple"
    assert grammar.IIR_STRUCTURES[-1] == "state-space" and grammar.FIR_STRUCTURES[0] == "transversal"


def test_paths_find_their_rows() -> None:
    edge = grammar.key("filter", ("bands", 3, "stop", "from"))
    assert edge is not None and edge.dimension == "frequency"
    assert grammar.key("device", ("bands",)) is None
    assert [row.path[-1] for row in grammar.children("device", ("at_most",))] == [
        "order",
        "taps",
        "multiplications",
        "delay",
        "memory",
    ]
    assert ("signal", "peak") in grammar.leaves("device", ())


@pytest.mark.parametrize(
    ("word", "meant"),
    [
        ("riple", "ripple"),
        ("Butterworth", "butterworth"),
        ("buterworth", "butterworth"),
        ("chebyshev1", "chebyshev-1"),
        ("sample-rate", "sample_rate"),
        ("atenuation", "attenuation"),
        ("famil", "family"),
        ("elipitc", "elliptic"),
        ("x", None),
        ("nonsense", None),
    ],
)
def test_the_nearest_name(word: str, meant: str | None) -> None:
    names = (
        "ripple",
        "butterworth",
        "chebyshev-1",
        "sample_rate",
        "attenuation",
        "family",
        "elliptic",
        "to",
        "b",
    )
    assert grammar.nearest(word, names) == meant


def test_a_key_that_is_not_judged_yet_is_named_unless_it_says_the_default() -> None:
    assert ids(read(ONE + "    run: forward\n    zero_db: unity\n    proof: optional\n")) == []
    assert ids(read(ONE + "    run: forward-backward\n")) == ["key/not-judged-yet"]
    assert ids(read(ONE + "    phase: minimum\n")) == ["key/not-judged-yet value"]
    at = with_line(ONE, "stop: {from: 2 kHz,", "stop: {at: 2 kHz,")
    assert ids(read(at)) == ["key/not-judged-yet"]
    bounds = with_line(ONE, "    bands:\n", "    bands:\n      - bounds: {at: 1 kHz, lag: {max: 8 deg}}\n")
    assert ids(read(bounds)) == ["key/not-judged-yet"], "said once, of the outermost key"
