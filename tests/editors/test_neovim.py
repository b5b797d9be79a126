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
