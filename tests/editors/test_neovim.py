"""The set-ups for Neovim, as they stand in their README, in Neovim 0.7 and 0.11."""

from __future__ import annotations

import shutil
from collections.abc import Iterator
from pathlib import Path

import pytest

from editors.demo import Trouble
from editors.install import NEOVIM_NEW
from editors.neovim import Neovim, set_up
from editors.waiting import until


@pytest.fixture
def with_more(request: pytest.FixtureRequest, project: Path, environment: dict[str, str]) -> Iterator[Neovim]:
    """Neovim 0.11 with hints, lenses and completion, and a file without findings."""
    assert NEOVIM_NEW.is_file(), "Neovim 0.11 is missing: run `python3 tests/editors/install.py`"
    lines = set_up("0.11") + set_up("0.11 with")
    editor = Neovim(NEOVIM_NEW, lines, project / "hoist.bands.yaml", environment)
    yield editor
    editor.picture(request.node.name)
    editor.close()


@pytest.fixture(params=["0.7", "0.11"])
def neovim(
    request: pytest.FixtureRequest, project: Path, environment: dict[str, str], trouble: Trouble
) -> Iterator[Neovim]:
    version: str = request.param
    program = NEOVIM_NEW if version == "0.11" else Path(shutil.which("nvim") or "nvim")
    assert program.is_file(), f"Neovim {version} is missing: run `python3 tests/editors/install.py`"
    editor = Neovim(program, set_up(version), project / trouble.file, environment)
    yield editor
    editor.picture(request.node.name)
    editor.close()


def test_findings_stand_beside_their_lines(neovim: Neovim, trouble: Trouble) -> None:
    def shown() -> list[tuple[int, str]]:
        return sorted((line, id) for line, id, _, _ in neovim.findings())

    until("the findings of `bandwright check`", lambda: shown() == trouble.findings)
    assert {source for _, _, source, _ in neovim.findings()} == {"bandwright"}
    neovim.go(trouble.finding)
    start = trouble.message[:40]
    row = next(row for row in until("the screen", neovim.screen).splitlines() if start in row)
    assert neovim.text().splitlines()[trouble.finding.line - 1].strip() in row


def test_hover_on_a_name_shows_the_least_order_of_each_family(neovim: Neovim, trouble: Trouble) -> None:
    until("findings", neovim.findings)
    neovim.go(trouble.name)
    neovim.keys("K")
    hover = until("the hover", neovim.floating)
    assert len(trouble.orders_in(hover)) >= 3, hover


def test_a_remedy_clears_its_finding(neovim: Neovim, trouble: Trouble) -> None:
    def messages() -> list[str]:
        return [message for *_, message in neovim.findings()]

    until("the finding", lambda: trouble.message in messages())
    before = neovim.text()
    neovim.go(trouble.finding)
    neovim.choose(trouble.remedy)
    neovim.keys("gra")
    until("the remedy's edit", lambda: neovim.text() != before)
    until("the finding's end", lambda: trouble.message not in messages())


def row(neovim: Neovim, start: str) -> str:
    """The first row of the screen whose text starts so."""
    return next((row for row in neovim.screen().splitlines() if row.strip().startswith(start)), "")


def test_hints_and_lenses_show_the_figures_of_each_filter(with_more: Neovim) -> None:
    until("the hint beside a family", lambda: "elliptic order" in row(with_more, "family: elliptic"))
    assert "Hz wide, ratio " in row(with_more, "- stop: {from: 25.6 Hz")
    assert "4 kHz, q31" in row(with_more, "device: hoist-node")
    assert "±0.05 dB, ±0.576 %" in row(with_more, "- pass: {to: 20 Hz, ripple: 0.1 dB")
    lens = until("the lens of a filter", lambda: row(with_more, "strain-slow: elliptic order"))
    assert " taps" in lens


def test_completion_comes_while_typing_and_its_entry_is_taken(with_more: Neovim) -> None:
    until("the server", lambda: row(with_more, "family: elliptic").count("order"))
    with_more.keys("Gotransitions: ")
    until("the list", lambda: "unbounded" in with_more.screen())
    with_more.picture("completion")
    with_more.keys("un<C-n><C-y><CR>at_most: {delay: 25 ")
    until("the units", lambda: "samples" in with_more.screen())
    with_more.keys("<C-n><C-y>}<Esc>")
    lines = until("both lines", lambda: with_more.text().splitlines()[-2:])
    assert lines == ["    transitions: unbounded", "    at_most: {delay: 25 ms}"]
