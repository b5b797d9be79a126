"""The findings of the band files in `tests/corpus`, sentence by sentence.

`tests/corpus/expected.txt` holds them. After a change that is meant, look through the difference of
`python3 tests/unit/findings/test_corpus.py > tests/corpus/expected.txt`.
"""

from __future__ import annotations

import re
import sys
from collections.abc import Iterator
from pathlib import Path

import pytest

TESTS = Path(__file__).resolve().parents[2]
if __name__ == "__main__":
    sys.path.insert(0, str(TESTS))

from bandwright.analysis.types import Finding  # noqa: E402 # the path has to be set first
from bandwright.bandfile.faults import FAULTS  # noqa: E402
from bandwright.findings.catalogue import RULES  # noqa: E402
from bandwright.findings.rules import LONGEST_SENTENCE, Hit  # noqa: E402
from unit.findings import checking  # noqa: E402
from unit.findings.pages import PAGES  # noqa: E402

CORPUS = TESTS / "corpus"
EXPECTED = CORPUS / "expected.txt"
FILES = sorted(path.relative_to(CORPUS).as_posix() for path in CORPUS.rglob("*.bands.yaml"))

HALF_A_CHARACTER = "format: bandwright/1\n\nfilters:\n  load:\n    purpose: \ud83d\n    bands: []\n"
"""No file holds a lone surrogate as UTF-8, but an editor may send one."""

OUR_WORDS = ("names", "units", "wanted", "example", "found", "dimension", "kind", "lines", "count", "column")
"""Facts that are not the user's words."""

NUMERALS = re.compile(r"UTF-(8|16|32)|\b0 Hz|\b2 pi|\bgain (of )?[01]\b")
"""Digits that stand in sentences: names and constants, no figures."""


def report(name: str) -> Iterator[str]:
    """One line for each finding of a file of the corpus."""
    for finding in checking.findings((CORPUS / name).read_bytes()):
        place = f"{finding.span.line + 1}:{finding.span.column + 1}"
        accepted = " (accepted)" if finding.accepted else ""
        yield f"{place} {finding.severity}{accepted} {finding.id}: {finding.message}"


def expected() -> dict[str, list[str]]:
    """The reviewed lines, by file."""
    found: dict[str, list[str]] = {}
    lines: list[str] = []
    for line in EXPECTED.read_text(encoding="utf-8").splitlines():
        if line.startswith("# "):
            lines = found.setdefault(line.removeprefix("# "), [])
        elif line:
            lines.append(line)
    return found


def every_finding() -> Iterator[Finding]:
    """All findings of the corpus and of the guide's cases."""
    for name in FILES:
        yield from checking.findings((CORPUS / name).read_bytes())
    for page in PAGES.values():
        yield from checking.findings(page.written)
    yield from checking.findings(HALF_A_CHARACTER)


@pytest.mark.parametrize("name", FILES)
def test_the_corpus_has_the_findings_that_were_reviewed(name: str) -> None:
    assert list(report(name)) == expected().get(name, [])


def test_no_expectation_is_left_of_a_file_that_is_gone() -> None:
    assert expected().keys() == set(FILES)


def test_every_sentence_of_every_finding_is_said_somewhere() -> None:
    said = {(finding.id, finding.hit.form) for finding in every_finding()}
    assert {(rule.id, form) for rule in RULES.values() for form in rule.says} - said == set()


def test_a_sentence_is_one_short_sentence_with_all_its_facts() -> None:
    for finding in every_finding():
        words = re.sub(r"`[^`]*`|character .;", "`quoted`", finding.message)
        assert len(finding.message) <= LONGEST_SENTENCE, finding.message
        assert finding.message.endswith("."), finding.message
        assert not re.search(r"[.!?] [A-Z]|[!\n]", words), finding.message
        assert "``" not in words and "  " not in words, finding.message
        assert "…" not in words or RULES[finding.id].find is None, finding.message
        assert "{" not in words or "bracket" in words, finding.message


def test_no_figure_is_typed_into_a_sentence() -> None:
    for rule in RULES.values():
        for sentences in rule.says.values():
            for sentence in sentences:
                words = re.sub(r"\{[^}]*\}|`[^`]*`", "", sentence)
                assert not re.search(r"[0-9]", NUMERALS.sub("", words)), sentence


@pytest.mark.parametrize(("id", "form"), [(id, form) for id, forms in FAULTS.items() for form in forms])
def test_however_long_the_words_of_a_user_are_the_sentence_is_short(id: str, form: str) -> None:
    facts = [(name.removesuffix("?"), "x" * 80) for name in FAULTS[id][form] if name not in OUR_WORDS]
    ours = [(name, "x") for name in OUR_WORDS]
    message = RULES[id].message(Hit(id, checking.NOWHERE, (*facts, *ours, ("mend", "x" * 80)), form))
    assert len(message) <= LONGEST_SENTENCE, message


def test_every_fault_of_the_reader_has_its_sentences() -> None:
    for id, forms in FAULTS.items():
        assert RULES[id].find is None
        assert RULES[id].says.keys() == forms.keys(), id
    reported = {id for id, rule in RULES.items() if rule.find is None and id.startswith(("syntax/", "key/"))}
    assert reported == {id for id in FAULTS if id.startswith(("syntax/", "key/"))}


@pytest.mark.parametrize(("id", "form"), [(id, form) for id, forms in FAULTS.items() for form in forms])
def test_the_last_sentence_of_a_fault_needs_no_fact_that_may_be_missing(id: str, form: str) -> None:
    always = {name for name in FAULTS[id][form] if not name.endswith("?")}
    quoted = set(re.findall(r"\{([^}]*)\}", RULES[id].says[form][-1]))
    assert quoted <= always


if __name__ == "__main__":
    for each in FILES:
        sys.stdout.write("\n".join([f"# {each}", *report(each), "", ""]))
