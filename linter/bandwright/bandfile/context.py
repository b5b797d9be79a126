"""What may be written at a place: which mapping, list or value a cursor stands in, in half-typed text too.

A text that is being typed does not parse, so that the tree has no answer. This reads lines instead: indents,
dashes, keys and brackets, as far as they go. It never judges; where it is not sure it says nothing.
"""

from __future__ import annotations

import re
from bisect import bisect_right
from dataclasses import dataclass, field
from typing import Final, Literal

from bandwright.bandfile import grammar
from bandwright.bandfile.blocks import SECTIONS, with_line_feeds
from bandwright.bandfile.grammar import Key, Where
from bandwright.bandfile.quantities import FITS
from bandwright.bandfile.values import Document, Path, Span

Part = Literal["name", "key", "item", "value"]


@dataclass(frozen=True, slots=True)
class Context:
    """A place for a new word."""

    where: Where
    path: Path
    """Of the mapping that takes the key, of the item or value itself; of a section for a name."""
    part: Part
    """`name` of a device or filter, `key` of a mapping, `item` of a list without its dash, or `value`."""
    span: Span
    """The word that stands there already, in the document."""
    typed: str
    """That word up to the cursor."""
    there: frozenset[str]
    """The keys of the mapping, or the values of the list, that are written besides."""
    flow: bool
    """Inside brackets."""
    has_colon: bool = False
    """Whether the key has its colon already."""
    lead: str = ""
    """What has to be written before a value: a space right behind the colon."""


_INSTEAD: Final = (("ripple", "gain"), ("attenuation", "gain"), ("at", "from"), ("at", "to"))
"""Keys of a band of which only one can stand."""


def keys(context: Context) -> tuple[Key, ...]:
    """The keys that may still be added, in the order of the grammar."""
    if context.part not in ("key", "item"):
        return ()
    if grammar.pattern(context.path) == ("bands", "*") and context.there:
        return ()  # a band is of one kind
    barred = set(context.there)
    if context.path[:1] == ("bands",) and len(context.path) == 3:
        barred |= {other for pair in _INSTEAD for other in pair if context.there.intersection(pair)}
    return tuple(row for row in grammar.children(context.where, context.path) if row.path[-1] not in barred)


def value_row(context: Context) -> Key | None:
    """The row of the grammar that says what the value may be; of an item of a list of names, the list's."""
    if context.part != "value":
        return None
    row = grammar.key(context.where, context.path)
    if row is None and context.path and isinstance(context.path[-1], int):
        row = grammar.key(context.where, context.path[:-1])
        return row if row is not None and row.kind in ("names", "numbers") else None
    return row


_NUMBER_THEN_UNIT: Final = re.compile(
    r"(?:±|\+-|[-+\N{MINUS SIGN}])? *[0-9]*\.?[0-9]+(?:[eE][-+]?[0-9]+)?( *)(\D*)"
)


def units(context: Context) -> tuple[int, bool, tuple[str, ...]] | None:
    """The units that may follow the number that is typed, the likeliest first; None without a number.

    With them: how many characters of a unit are typed, and whether a space parts them from the number.
    """
    row = value_row(context)
    if row is None or row.kind not in ("quantity", "figure"):
        return None
    match = _NUMBER_THEN_UNIT.fullmatch(context.typed)
    if match is None:
        return None
    return len(match[2]), bool(match[1]), FITS[row.dimension or "figure"]


def context_at(document: Document, line: int, column: int) -> Context | None:
    """What may be written at a place of the document; None where nothing of the grammar may."""
    body = document.text.removeprefix("\ufeff")
    mark = len(document.text) - len(body)
    if line == 0:
        column = max(0, column - mark)
    lines = with_line_feeds(body).split("\n")
    if line >= len(lines):
        return None
    start, section, indent = _start(document, line)
    reading = _Reading(section, indent)
    for number in range(start, line):
        reading.take(number, lines[number].rstrip("\r"))
    whole = lines[line].rstrip("\r")
    before = whole[:column]
    if not before.strip() and whole[column:][:1] in (" ", "\t") and whole.strip():
        return None  # within an indent
    reading.take(line, before, cursor=whole)
    if reading.slot is None:
        return None
    begin = reading.token if reading.token is not None else column
    after = _WORD.match(whole, column)
    end = after.end() if after else column
    span = Span(line, begin + mark * (not line), line, end + mark * (not line))
    holder = reading.stack[-1]
    # Values of a list in block style belong to the key above their dashes.
    outer = reading.stack[-2] if holder.kind == "item" else holder
    complete = _Reading(section, indent)
    for number in range(start, len(lines)):
        complete.take(number, lines[number].rstrip("\r"), skip=(line, begin, end))
        if number >= line and all(one.number != outer.number for one in complete.stack):
            break
    there = complete.seen.get(holder.number, set()) | complete.seen.get(outer.number, set())
    if len(reading.stack) == 1:  # the top level goes around all blocks
        marks = document.blocks[0].marks
        there = {str(path[0]) for path, one in marks.items() if len(path) == 1 and one.key.line != line}
    has_colon = _COLON.match(whole, end) is not None
    lead = " " if before[:begin].endswith(":") else ""
    return _in_grammar(reading, span, before[begin:], frozenset(there), has_colon, lead)


def _start(document: Document, line: int) -> tuple[int, str | None, int]:
    """From which line to read, in which section, and the indent of the name that stands there."""
    index = bisect_right(document.blocks, line, lo=1, key=lambda block: block.first_line) - 1
    block = document.blocks[index] if index > 0 else None
    if block is None or not document.parsed or () not in block.marks:
        return 0, None, 0
    return block.first_line, f"{block.kind}s", block.marks[()].key.column


_WORD: Final = re.compile(r"[\w./%×π-]*")
_COLON: Final = re.compile(r" *:")
_DASH: Final = re.compile(r"-(?:\s+|$)")
_QUOTED: Final = r"\"(?:[^\"\\]|\\.)*\"|'(?:[^']|'')*'"
_KEY: Final = re.compile(rf"({_QUOTED}|[^\s#\[\]{{}},&*!|>'\"%@`-][^:#]*?|-?\w[^:#]*?) *:(?:\s+|$)")
_FLOW_KEY: Final = re.compile(rf"({_QUOTED}|[^\s,\[\]{{}}#:'\"][^,\[\]{{}}:#]*?) *:(?=[\s,\[\]{{}}]|$)")
_FLOW_SCALAR: Final = re.compile(rf"{_QUOTED}|(?:[^,\[\]{{}}\s]|\s+(?!#))+")
_SCALAR: Final = re.compile(rf"{_QUOTED}|(?:\S|\s+(?!#))+")
_LITERAL: Final = re.compile(r"[|>][-+0-9]*\s*(?:#.*)?$")
_ENTRY_LIKE: Final = re.compile(r"-(?:\s|$)|[\w\"'-]+ *:(?:\s|$)")


_Kind = Literal["root", "entry", "item", "map", "list", "pair"]


@dataclass(slots=True)
class _Open:
    """A key, an item or a bracket that is not at its end yet."""

    kind: _Kind
    column: int
    """Of a key or dash; of a bracket the indent of its line."""
    number: int
    """Counts what was opened, so that two readings of the same text can be held against each other."""
    step: str | int | None = None
    """Its key or index; of a bracket the one that is being written."""
    items: int = 0
    filled: bool = False
    """Whether a whole value stands behind the key already, so that nothing can stand below it."""


@dataclass(slots=True)
class _Reading:
    """Reads a text line by line and knows what is open at the end of each."""

    section: str | None
    indent: int
    stack: list[_Open] = field(default_factory=list)
    seen: dict[int, set[str]] = field(default_factory=dict)
    """By number: the keys or values that stand in it."""
    slot: Literal["key", "value"] | None = None
    """What a word at the end of the last line is."""
    token: int | None = None
    """Where the word starts that the last line ends in."""
    count: int = 0
    literal: int | None = None
    """The indent that the lines of a block of text are deeper than, while one is open."""
    skip: tuple[int, int, int] | None = None

    def __post_init__(self) -> None:
        self.open("root", -2)
        if self.section is not None:
            self.open("entry", min(0, self.indent - 1), self.section)

    # ------------------------------------------------------------------------------------------- lines

    def take(
        self, number: int, text: str, *, cursor: str | None = None, skip: tuple[int, int, int] | None = None
    ) -> None:
        """Read the next line.

        `cursor`: the whole line, where `text` is what of it stands before the cursor. `skip`: line, start
        and end of a word that does not count as there.
        """
        self.skip = skip if skip is not None and skip[0] == number else None
        self.slot = self.token = None
        at = len(text) - len(text.lstrip())
        rest = text[at:]
        if self.literal is not None:
            if not rest or at > self.literal:
                return
            self.literal = None
        if self.in_flow() and not self.left_open(at, rest or (cursor or "").strip(), cursor is not None):
            self.flow(text, at)
            return
        if rest.startswith("#") or (not rest and cursor is None):
            return
        if at == 0 and self.section is not None and _is_top_key(rest):
            del self.stack[1:]
        self.close(at, _DASH.match(rest) is not None)
        self.content(text, at)

    def in_flow(self) -> bool:
        return self.stack[-1].kind in ("map", "list", "pair")

    def left_open(self, at: int, rest: str, at_cursor: bool) -> bool:
        """Whether a new line shows that the brackets above it were meant to end; they are ended then."""
        outer = next(one for one in self.stack if one.kind in ("map", "list"))
        nested = any(one.kind in ("entry", "item") for one in self.stack)
        if not nested or rest[:1] in tuple("]},#") or not (rest or at_cursor):
            return False
        if at < outer.column or (at == outer.column and _ENTRY_LIKE.match(rest)):
            del self.stack[self.stack.index(outer) :]
            self.stack[-1].filled = True
            return True
        return False

    def close(self, at: int, dash: bool) -> None:
        """Leave everything that a line with this indent does not go on with."""
        while self.stack[-1].column >= at:
            top = self.stack[-1]
            if dash and top.kind == "entry" and top.column == at and not top.filled:
                return  # a list may stand at the indent of its key
            self.stack.pop()

    def open(
        self,
        kind: Literal["root", "entry", "item", "map", "list", "pair"],
        column: int,
        step: str | int | None = None,
    ) -> None:
        self.stack.append(_Open(kind, column, self.count, step))
        self.count += 1

    def note(self, word: str, start: int) -> None:
        """Remember a key or value of what is open."""
        if self.skip is None or not self.skip[1] <= start <= self.skip[2]:
            self.seen.setdefault(self.stack[-1].number, set()).add(word.strip().strip("'\""))

    # ----------------------------------------------------------------------------------- block style

    def content(self, text: str, at: int) -> None:
        """The dashes, the key and the value of a line."""
        while (dash := _DASH.match(text, at)) is not None:
            self.stack[-1].items += 1
            self.open("item", at, self.stack[-1].items - 1)
            at = dash.end()
        self.slot = "key"
        key = _KEY.match(text, at)
        if key is None:
            self.scalar(text, at)
            return
        name = key[1].strip("'\"")
        self.note(name, at)
        self.open("entry", at, name)
        self.slot = "value"
        at = key.end()
        if _LITERAL.match(text, at):
            self.literal, self.slot = self.stack[-1].column, None
        elif at < len(text) and text[at] != "#":
            self.scalar(text, at)
        elif at < len(text):
            self.slot = None

    def scalar(self, text: str, at: int) -> None:
        """A value, or the start of a key that has no colon yet."""
        if text[at : at + 1] in ("{", "["):
            self.flow(text, at)
            return
        match = _SCALAR.match(text, at)
        if match is None:
            return
        self.token = at
        if self.slot == "value":
            self.stack[-1].filled = True
        elif self.stack[-1].kind == "item" and len(self.stack) > 1:
            item = self.stack.pop()
            self.note(match[0], at)
            self.stack.append(item)
        if match.end() < len(text) or match[0][-1:] in ("'", '"'):
            self.slot = None  # behind the word stands a comment, or a quote has ended

    # ------------------------------------------------------------------------------------- flow style

    def flow(self, text: str, at: int) -> None:
        """What stands in brackets, up to the end of the line or of the brackets."""
        indent = len(text) - len(text.lstrip())
        while True:
            while at < len(text) and text[at].isspace():
                at += 1
            if at >= len(text):
                break
            self.token = None
            letter = text[at]
            if letter == "#":
                self.slot = None
                return
            if letter in "{[":
                self.open("map" if letter == "{" else "list", indent, None if letter == "{" else 0)
                at += 1
            elif letter in "}]":
                self.leave_pair()
                if self.in_flow():
                    self.stack.pop()
                at += 1
                if not self.in_flow():
                    self.stack[-1].filled, self.slot = True, None
                    return
            elif letter == ",":
                self.leave_pair()
                top = self.stack[-1]
                top.step = top.step + 1 if isinstance(top.step, int) else None
                at += 1
            else:
                at = self.word(text, at)
        top = self.stack[-1]
        self.slot = "key" if top.step is None or (top.kind == "list") else "value"

    def leave_pair(self) -> None:
        if self.stack[-1].kind == "pair":
            self.stack.pop()

    def word(self, text: str, at: int) -> int:
        """A key or a value in brackets; gives where it ends."""
        key, top = _FLOW_KEY.match(text, at), self.stack[-1]
        if key is not None:
            name = key[1].strip("'\"")
            if top.step is not None and top.kind != "list":  # the comma before the key is missing
                name = name.split()[-1]
                self.leave_pair()
                top = self.stack[-1]
            if top.kind == "list":
                self.open("pair", top.column, name)
            else:
                self.note(name, at)
                top.step = name
            return key.end()
        scalar = _FLOW_SCALAR.match(text, at)
        if scalar is None:
            return at + 1
        self.token = at
        if top.kind == "list":
            self.note(scalar[0], at)
        return scalar.end()


def _is_top_key(text: str) -> bool:
    """Whether a line in the first column starts with a key of the top level."""
    return text.partition(":")[0].strip("'\" ") in grammar.INSIDE["top"][()] and ":" in text


def _in_grammar(
    reading: _Reading, span: Span, typed: str, there: frozenset[str], has_colon: bool, lead: str
) -> Context | None:
    """The open keys and indexes as a place of the grammar."""
    steps = [one.step for one in reading.stack if one.step is not None]
    holder, flow = reading.stack[-1], reading.in_flow()
    section = steps[0] if steps else None
    named = section in SECTIONS
    where: Where = SECTIONS[str(section)] if named and len(steps) > 1 else "top"
    path: Path = tuple(steps[2:]) if where != "top" else tuple(steps)
    if holder.filled and reading.slot == "key":
        return None
    part: Part = "value"
    if named and len(steps) == 1:
        if reading.slot == "value" and not flow:
            return None
        part = "name"
    elif reading.slot == "key" and path and grammar.key(where, path) is None:
        part = "value"  # an item of a list of names
    elif reading.slot == "key":
        row = grammar.key(where, path) if path else None
        kind = row.kind if row is not None else "mapping"
        has_keys = bool(grammar.children(where, path))  # as an arithmetic has, that may be a name too
        part = "item" if kind == "list" else "key" if kind == "mapping" or has_keys else "value"
        if part == "item":
            path = (*path, holder.items)
    return Context(where, path, part, span, typed, there, flow, has_colon, lead)
