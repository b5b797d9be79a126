"""Where and why one entry of YAML does not parse, and how to get past it.

An entry here is a key with a value beside it, or a value in brackets. What is open is closed at its
line's end, and a value that the parser can't take is blanked, so that its neighbours can be read.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any, Final, NamedTuple

from ruamel.yaml.error import YAMLError

from bandwright.bandfile.grammar import INSIDE

HEAD: Final = re.compile(
    r"( *)(- +|-$)?(?:(\"[^\"\n]*\"|'[^'\n]*'|[^\s\[\]{},#&*!|>@%`\"'][^\n]*?):(?=\s|$))?"
)
"""How a line starts: its indent, its dash, its key; each part may be missing, so that it always matches."""


class Slip(NamedTuple):
    """Where and why a leaf does not parse, and its line with the slip out of the way."""

    form: str
    line: int
    start: int
    end: int
    facts: tuple[tuple[str, str], ...] = ()
    mended: str | None = None
    """What to write from `start` to `end` instead."""
    repaired: str | None = None
    lossy: tuple[int, ...] = ()
    """In which columns of the repaired line scalars or collections start that are not all there."""


_CLOSING: Final = {"{": "}", "[": "]"}
SPACELESS: Final = re.compile(r"([A-Za-z_][\w-]*):(\S.*)")
KEY_NAMES: Final = frozenset(
    name for tables in INSIDE.values() for inside in tables.values() for name in inside if len(name) > 1
)


def value_start(line: str) -> int:
    """Where the text starts that stands behind the key or dash of a line."""
    match = HEAD.match(line)
    end = match.end() if match else 0
    return end + len(line[end:]) - len(line[end:].lstrip())


def find_slip(lines: list[str], start: int, error: YAMLError) -> Slip:
    """What the parser's refusal of a leaf, whose value starts in column `start`, comes from."""
    context, problem = str(getattr(error, "context", "") or ""), str(getattr(error, "problem", "") or "")
    line, column = _position(lines, getattr(error, "problem_mark", None))
    if "quoted scalar" in context and "end of stream" in problem:
        line, column = _position(lines, getattr(error, "context_mark", None))
        text = lines[line].rstrip()
        quote = text[column]
        return Slip(
            "unclosed-quote", line, column, len(text), (("quote", quote),), None, text + quote, (column,)
        )
    in_flow = lines[0][start : start + 1] in ("{", "[")
    if in_flow and (unbalanced := _unbalanced(lines, start)):
        return unbalanced
    extent = _entry_extent(lines[line], column, start if line == 0 else 0) if in_flow else None
    entry, value, end = extent or (0, start if line == 0 else 0, _content_end(lines[line]))
    text = lines[line]
    value += len(text[value:end]) - len(text[value:end].lstrip())
    written = text[value:end].rstrip()
    end = value + len(written)
    repaired = text[:value] + "x" * (end - value) + text[end:] if extent and written else None
    key = _key_facts(text[entry:value])
    facts: tuple[tuple[str, str], ...]
    if (spaceless := SPACELESS.match(written)) and not key and spaceless[1] in KEY_NAMES:
        facts = (("key", spaceless[1]), ("written", written))
        mended = f"{spaceless[1]}: {spaceless[2]}"
        lossy = value + len(spaceless[1]) + 2
        repaired = text[: lossy - 2] + ": " + "x" * (end - lossy) + text[end:]
        return Slip("no-space", line, value, end, facts, mended, repaired if extent else None, (lossy,))
    quoted = "'" + written.replace("'", "''") + "'"
    if written and (
        "start any token" in problem
        or any(word in context for word in ("anchor", "alias", "block scalar", "tag"))
    ):
        facts = (("character", text[value]), *key)
        return Slip("character", line, value, end, facts, quoted, repaired, (value,))
    if written and ("mapping values" in problem or "unexpected ':'" in problem or "expected ','" in problem):
        facts = (*key, ("written", written))
        if extent and (missing := re.search(r" ([A-Za-z_]+): ", written)) and missing[1] in KEY_NAMES:
            mended = written[: missing.start()].rstrip() + ", " + written[missing.start() :].lstrip()
            return Slip(
                "missing-comma",
                line,
                value,
                end,
                facts,
                mended,
                repaired,
                (value, *_bracket_before(text, value)),
            )
        return Slip("colon-in-value", line, value, end, facts, quoted, repaired, (value,))
    return Slip("other", line, value, end, key, None, repaired, (value,))


def _position(lines: list[str], mark: Any) -> tuple[int, int]:
    """A mark of the parser, kept inside the lines."""
    if mark is None:
        return 0, 0
    if mark.line >= len(lines):
        return len(lines) - 1, len(lines[-1])
    return mark.line, mark.column


def _key_facts(text: str) -> tuple[tuple[str, str], ...]:
    match = re.match(r"[\s-]*[\"']?([^\s:\"']+)[\"']?\s*:", text)
    return (("key", match[1]),) if match else ()


def _content_end(line: str) -> int:
    """Where a line ends without its comment."""
    comment = re.search(r"\s#", line)
    return len(line[: comment.start()].rstrip() if comment else line.rstrip())


def _flow_marks(line: str, start: int) -> Iterator[tuple[int, str]]:
    """Brackets and commas of a line that stand outside quotes and comments, with their columns."""
    quote = ""
    before = " "
    for column in range(start, len(line)):
        letter = line[column]
        if quote:
            if letter == quote and not (quote == '"' and before == "\\"):
                quote = ""
        elif letter in "\"'" and before in " [{,":
            quote = letter
        elif letter == "#" and before == " ":
            return
        elif letter in "[]{},":
            yield column, letter
        before = letter


def _unbalanced(lines: list[str], start: int) -> Slip | None:
    """The first bracket that is closed by another kind, or never opened, or else the last one left open."""
    opened: list[tuple[int, int]] = []
    for line, text in enumerate(lines):
        for column, letter in _flow_marks(text, start if line == 0 else 0):
            if letter in "[{":
                opened.append((line, column))
            elif letter != ",":
                if not opened:
                    repaired = text[:column] + " " + text[column + 1 :]
                    return Slip(
                        "unopened-bracket",
                        line,
                        column,
                        column + 1,
                        (("bracket", letter),),
                        "",
                        repaired,
                    )
                at, place = opened.pop()
                bracket = lines[at][place]
                if _CLOSING[bracket] != letter:
                    facts = (("bracket", bracket), ("closing", _CLOSING[bracket]))
                    repaired = text[:column] + _CLOSING[bracket] + text[column + 1 :]
                    return Slip(
                        "unclosed-bracket", line, column, column + 1, facts, _CLOSING[bracket], repaired
                    )
    if not opened:
        return None
    line, column = opened[-1]
    text = lines[line][: _content_end(lines[line])]
    comma = "," if text.endswith(",") and len(opened) > 1 else ""
    bracket = text[column]
    facts = (("bracket", bracket), ("closing", _CLOSING[bracket]))
    repaired = text.rstrip(",") + _CLOSING[bracket] + comma
    return Slip("unclosed-bracket", line, column, len(text), facts, None, repaired, (column,))


def _bracket_before(line: str, column: int) -> tuple[int, ...]:
    """The column of the innermost bracket that is open at `column`, if it is on this line."""
    opened: list[int] = []
    for at, letter in _flow_marks(line[:column], 0):
        if letter in "[{":
            opened.append(at)
        elif letter != "," and opened:
            opened.pop()
    return tuple(opened[-1:])


def _entry_extent(line: str, column: int, from_column: int) -> tuple[int, int, int] | None:
    """Of the flow entry around `column`: where it starts, where its value starts, and where it ends."""
    start = from_column
    end = _content_end(line)
    for at, _ in _flow_marks(line, from_column):
        if at < column:
            start = at + 1
        else:
            end = at
            break
    if start > end:
        return None
    key = re.match(r"\s*(?:\"[^\"]*\"|'[^']*'|[^\s\"'][^:]*):\s+", line[start:end])
    return start, start + key.end() if key else start, end
