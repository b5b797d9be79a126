"""A real Neovim, driven over its own protocol: keys go in, what is on its screen comes out."""

from __future__ import annotations

from contextlib import suppress
from pathlib import Path

import pynvim

from editors.demo import ROOT, SCREENSHOTS, Place

SET_UP_TEXT = ROOT / "editor-client" / "neovim" / "README.md"

SCREEN = """
vim.cmd('redraw')
local rows = {}
for row = 1, vim.o.lines do
  local cells = {}
  for column = 1, vim.o.columns do cells[column] = vim.fn.screenstring(row, column) end
  rows[row] = table.concat(cells)
end
return rows"""

# Neovim 0.7 leaves floating windows out of screenstring(), so they are read from their buffers.
FLOATING = """
local lines = {}
for _, window in ipairs(vim.api.nvim_list_wins()) do
  if vim.api.nvim_win_get_config(window).relative ~= '' then
    vim.list_extend(lines, vim.api.nvim_buf_get_lines(vim.api.nvim_win_get_buf(window), 0, -1, false))
  end
end
return lines"""

FINDINGS = """
local found = {}
for _, finding in ipairs(vim.diagnostic.get(0)) do
  table.insert(found, { finding.lnum + 1, finding.code or '', finding.source or '', finding.message })
end
return found"""

# Choices come up in a selection that a user may replace; this one takes the entry of the wanted title.
CHOOSE = """
local wanted = ...
vim.ui.select = function(items, options, choose)
  for index, item in ipairs(items) do
    if options.format_item(item) == wanted then return choose(item, index) end
  end
end"""


def set_up(version: str) -> str:
    """The lines that the set-up text gives for a version: the code under its heading."""
    section = SET_UP_TEXT.read_text(encoding="utf-8").partition(f"## Neovim {version} ")[2]
    lines = section.partition("```lua\n")[2].partition("```")[0]
    assert lines, f"the set-up text has no lines for Neovim {version}"
    return lines


class Neovim:
    """One Neovim with the given lines as its only settings, and a file open in it."""

    def __init__(self, program: Path, init: str, file: Path, environment: dict[str, str]) -> None:
        init_file = Path(environment["HOME"]) / "init.lua"
        init_file.write_text(init, encoding="utf-8")
        started = ["env", "-i", *(f"{name}={value}" for name, value in environment.items())]
        options = ["--embed", "--headless", "-u", str(init_file), "-i", "NONE", "-n"]
        self.editor = pynvim.attach("child", argv=[*started, str(program), *options])
        self.editor.command("set columns=150 lines=45")
        self.editor.command(f"cd {file.parent}")
        self.editor.command(f"edit {file.name}")

    def close(self) -> None:
        with suppress(OSError, EOFError):  # it goes before it answers
            self.editor.quit("qall!")
        self.editor.close()

    def keys(self, keys: str) -> None:
        self.editor.input(keys)

    def go(self, place: Place) -> None:
        self.editor.call("setcursorcharpos", place.line, place.column)

    def screen(self) -> str:
        return "\n".join(row.rstrip() for row in self.editor.exec_lua(SCREEN))

    def floating(self) -> str:
        return "\n".join(self.editor.exec_lua(FLOATING))

    def findings(self) -> list[tuple[int, str, str, str]]:
        """(line, id, source, message) of each."""
        return [tuple(found) for found in self.editor.exec_lua(FINDINGS)]

    def choose(self, title: str) -> None:
        """The next selection that comes up is answered with the entry of this title."""
        self.editor.exec_lua(CHOOSE, title)

    def text(self) -> str:
        return "\n".join(self.editor.current.buffer[:])

    def picture(self, name: str) -> None:
        """The screen as a text, for people."""
        SCREENSHOTS.mkdir(parents=True, exist_ok=True)
        (SCREENSHOTS / f"{name}.txt").write_text(
            self.screen() + "\n" + self.floating() + "\n", encoding="utf-8"
        )
