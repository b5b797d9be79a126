"""The band files of the demo show what they are there for."""

from __future__ import annotations

from pathlib import Path

import bandwright
from bandwright.findings.catalogue import RULES
from unit.findings import checking

DEMO = Path(bandwright.__file__).parent / "demo"


def test_the_demo_in_order_has_no_finding() -> None:
    assert checking.ids((DEMO / "hoist.bands.yaml").read_bytes()) == []


def test_the_troubled_demo_has_findings_of_every_area() -> None:
    areas = {id.partition("/")[0] for id in checking.ids((DEMO / "hoist-troubled.bands.yaml").read_bytes())}
    assert areas == {id.partition("/")[0] for id in RULES}


def test_some_errors_of_the_troubled_demo_have_a_safe_remedy() -> None:
    document = checking.read((DEMO / "hoist-troubled.bands.yaml").read_bytes())
    kinds = [
        offer.kind
        for finding in checking.found_in(document)
        if finding.severity == "error"
        for offer in checking.offers(document, finding)
    ]
    assert kinds.count("keeps-requirement") >= 5
