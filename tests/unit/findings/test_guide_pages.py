"""Every finding has a page, and the case of each page is true."""

from __future__ import annotations

import pytest

from bandwright.findings.catalogue import RULES
from unit.findings import checking
from unit.findings.pages import HEADINGS, PAGES, Page

EACH = pytest.mark.parametrize("page", PAGES.values(), ids=PAGES.keys())


def test_every_finding_has_a_page_and_every_page_a_finding() -> None:
    assert PAGES.keys() == RULES.keys()


@EACH
def test_a_page_has_the_title_and_the_six_headings_in_order(page: Page) -> None:
    assert page.text.startswith(f"# {page.id}\n\n## {HEADINGS[0]}\n")
    assert page.headings == HEADINGS


@EACH
def test_the_case_as_written_gives_the_finding(page: Page) -> None:
    assert page.id in checking.ids(page.written)


@EACH
def test_the_case_as_cured_gives_nothing_worse_than_information(page: Page) -> None:
    found = [finding for finding in checking.findings(page.cured) if not finding.accepted]
    assert page.id not in [finding.id for finding in found]
    assert [finding.id for finding in found if finding.severity in ("error", "warning")] == []


@EACH
def test_each_remedy_that_the_case_offers_clears_the_finding(page: Page) -> None:
    document = checking.read(page.written)
    before = checking.found_in(document)
    finding = next(finding for finding in before if finding.id == page.id)
    for offered in checking.offers(document, finding):
        after = checking.ids(checking.applied(document, offered))
        assert after.count(page.id) < [one.id for one in before].count(page.id), offered.title
        assert "{" not in offered.title


@pytest.mark.parametrize("id", [id for id, rule in RULES.items() if rule.remedies])
def test_a_finding_that_has_remedies_offers_one_in_its_case(id: str) -> None:
    document = checking.read(PAGES[id].written)
    finding = next(finding for finding in checking.found_in(document) if finding.id == id)
    assert checking.offers(document, finding)
