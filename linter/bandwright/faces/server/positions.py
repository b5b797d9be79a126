"""Between the client's positions and the core's spans, in the encoding that was negotiated.

The core counts code points; a client counts UTF-8 bytes, UTF-16 units or UTF-32 code points. Lines end
at LF, CR LF or CR and nowhere else, as the protocol says: U+2028 and form feed are ordinary characters.
"""

from __future__ import annotations

import re
from itertools import pairwise
from typing import Literal

from lsprotocol import types

from bandwright.bandfile.values import Span

Encoding = Literal["utf-8", "utf-16", "utf-32"]

_LINE_END = re.compile(r"\r\n|\n|\r")


def encoding_of(negotiated: object) -> Encoding:
    """The encoding that client and server have agreed on; without a word of it, UTF-16."""
    match negotiated:
        case "utf-8" | "utf-32":
            return negotiated
    return "utf-16"


def lines_of(text: str) -> list[str]:
    """The lines with their ends; the last one has none, and may be empty."""
    starts = [0, *(match.end() for match in _LINE_END.finditer(text)), len(text)]
    return [text[start:end] for start, end in pairwise(starts)]


class LineIndex:
    """The lines of one text, and the way between its positions and a client's."""

    def __init__(self, text: str, encoding: Encoding) -> None:
        self._text = text
        self._encoding = encoding
        # Where a code point is one unit in every encoding, columns need no conversion.
        self._plain = encoding == "utf-32" or text.isascii()
        self._starts: list[int] | None = None
        self._ends: list[int] = []

    def _index(self) -> list[int]:
        if self._starts is None:
            self._starts = [0]
            for match in _LINE_END.finditer(self._text):
                self._ends.append(match.start())
                self._starts.append(match.end())
            self._ends.append(len(self._text))
        return self._starts

    def line(self, number: int) -> str:
        """The text of a line without its end; empty beyond the last line."""
        starts = self._index()
        return self._text[starts[number] : self._ends[number]] if number < len(starts) else ""

    def plain_range(self, span: Span) -> dict[str, dict[str, int]]:
        """The client's range of a span, as it is sent."""
        line, column, end_line, end_column = span
        if not self._plain:
            column, end_column = self._units(line, column), self._units(end_line, end_column)
        return {
            "start": {"line": line, "character": column},
            "end": {"line": end_line, "character": end_column},
        }

    def place(self, position: types.Position) -> tuple[int, int]:
        """Line and column in code points; beyond the end of a line or the text, that end."""
        last = len(self._index()) - 1
        if position.line > last:
            return last, len(self.line(last))
        number, character = position.line, position.character
        line = self.line(number)
        if self._plain:
            return number, min(character, len(line))
        return number, _code_points(line, character, self._encoding)

    def span(self, wanted: types.Range) -> Span:
        """The span of a client's range."""
        return Span(*self.place(wanted.start), *self.place(wanted.end))

    def _units(self, number: int, column: int) -> int:
        if self._plain:
            return column
        return _size(self.line(number)[:column], self._encoding)


def _size(text: str, encoding: Encoding) -> int:
    if encoding == "utf-32" or text.isascii():
        return len(text)
    if encoding == "utf-8":
        return len(text.encode("utf-8", "surrogatepass"))
    return len(text) + sum(character > "\uffff" for character in text)


def _code_points(line: str, units: int, encoding: Encoding) -> int:
    """How many whole characters of the line lie within its first `units` units."""
    if line.isascii():
        return min(units, len(line))
    used = 0
    for column, character in enumerate(line):
        used += _size(character, encoding)
        if used > units:
            return column
    return len(line)
