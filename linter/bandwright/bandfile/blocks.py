"""A band file cut into blocks: each device, each filter, and the top level around them.

The file is cut at the keys below `devices` and `filters`, so that each block is read by itself, only
a changed one is read again, and a slip in one never hides another.
"""

from __future__ import annotations

import re
from functools import cache
from typing import Final, Literal, NamedTuple

from ruamel.yaml.error import MarkedYAMLError, YAMLError

from bandwright.bandfile.grammar import INSIDE, nearest
from bandwright.bandfile.nodes import Composer, TooDeepError, Tree, parseable
from bandwright.bandfile.salvage import salvaged
from bandwright.bandfile.values import Block, Document, Place, Span

Kind = Literal["device", "filter", "top"]

SECTIONS: Final[dict[str, Kind]] = {"devices": "device", "filters": "filter"}


class Piece(NamedTuple):
    """A stretch of the file in whole lines, from an offset to another."""

    kind: Kind
    first_line: int
    start: int
    end: int
    indent: int = 0
    """Of the block's name."""
    usual: int = 0
    """Of the first name in its section."""


_REST: Final = r"[ \t]*\r?(?:#.*)?$"
_DEEPEST: Final = 200
"""No name stands deeper; it bounds the patterns that are compiled."""
_SECTION: Final = re.compile(rf"[\"']?([A-Za-z_]+)[\"']? *:?{_REST}", re.M)
_TOP_KEY: Final = re.compile(
    r"(?:[\"']?(?:format|masks|together|devices|filters)[\"']? *:|---|\.\.\.)(?=\s|$)", re.M
)
_KEY_LIKE: Final = re.compile(r"[^\n]*?:(?=\s|$)", re.M)
_KEY: Final = re.compile(r"[\"']?([\w-]+)[\"']? *:(?=\s|$)", re.M)
_NAME: Final = re.compile(rf"[\"']?\w[^\n:]*:(?:[ \t]+[{{&*].*|{_REST})", re.M)
_WORD: Final = re.compile(rf"[\w.-]+{_REST}", re.M)
_BELOW: Final = re.compile(r"\n(?:[ \t]*\r?(?:#.*)?\n)*([ \t]*)")
_FIRST_KEY: Final = re.compile(
    rf"[^\n:]+:{_REST}(?:\n[ \t]*\r?(?:#.*)?$)*\n[ \t]+[\"']?([\w-]+)[\"']? *:(?=\s|$)", re.M
)
_LIST_BELOW: Final = re.compile(rf"[^\n:]+:{_REST}(?:\n[ \t]*\r?(?:#.*)?$)*\n[ \t]+-(?=\s|$)", re.M)
_DASH: Final = re.compile(r"-(?=\s|$)", re.M)
_REFERENCE: Final = re.compile(
    r"(?:^[ \t]*|[:?\-,\[{][ \t]+|[\[{,])[&*][^\s,\[\]{}]|^[ \t]*(?:- +)?<<[ \t]*:", re.M
)
_START: Final = re.compile(r"^(?!---)[ \t]*([^\s#])", re.M)
_LONE_RETURN: Final = re.compile(r"\r(?!\n)")


def with_line_feeds(text: str) -> str:
    """The text with each lone CR as LF, so that every line ends in LF and every offset stays."""
    return text if "\r" not in text else _LONE_RETURN.sub("\n", text)


def reads_whole(text: str) -> bool:
    """Whether the text can't be cut: anchors reach across blocks, and brackets ignore lines."""
    first = _START.search(text)
    if first is not None and first[1] in "{[?":
        return True
    marked = "*" in text or "&" in text or "<<" in text  # far quicker than the search, and mostly false
    return marked and _REFERENCE.search(text) is not None


@cache
def _line_above(indent: int) -> re.Pattern[str]:
    """Matches the start of a line with content, less deep than `indent`: its blanks and its first letter."""
    return re.compile(rf"^([ \t]{{0,{indent - 1}}})([^\s#])", re.M)


def cut(text: str) -> list[Piece]:
    """The pieces of a text whose lines all end in LF, in order and without gaps.

    A device or filter starts at its name and runs to the next one. A name may stand ill-indented and may
    be half typed, so that it breaks nothing but itself; a line that is no name, wherever it stands, stays
    in the block that it was found in.
    """
    pieces: list[Piece] = []
    state = _State()
    start = line = first_line = usual = 0
    searched = 0
    while match := _line_above(state.depth_of_interest()).search(text, searched):
        blank, letter = match.groups()
        indent, at = len(blank), match.start(2)
        searched = match.end()
        ends, kind = state.deeper(text, at, blank, letter) if indent else state.first_column(text, at, letter)
        if not ends:
            continue
        offset = match.start()
        if offset > start:
            pieces.append(Piece(state.kind, first_line, start, offset, state.name_indent, usual))
            line += text.count("\n", start, offset)
            start, first_line = offset, line
        state.kind, state.body_indent, state.name_indent = kind, None, indent
        usual = indent if state.usual < 0 else state.usual
    pieces.append(Piece(state.kind, first_line, start, len(text), state.name_indent, usual))
    return pieces


class _State:
    """What a cut knows of the lines before."""

    def __init__(self) -> None:
        self.section: Kind = "top"
        self.kind: Kind = "top"
        self.unseen = dict(SECTIONS)
        self.usual = -1
        """The indent of the first name in the section."""
        self.name_indent = 0
        self.body_indent: int | None = None

    def depth_of_interest(self) -> int:
        """Lines from this indent on are part of what they stand in, for certain."""
        return 1 if self.section == "top" else min(self.body_indent or _DEEPEST, _DEEPEST)

    def first_column(self, text: str, at: int, letter: str) -> tuple[bool, Kind]:
        """Whether a line in the first column ends the piece before it, and what starts there."""
        if letter in "]}," or _DASH.match(text, at):
            return False, "top"
        named = _SECTION.match(text, at)
        name = nearest(named[1], self.unseen) if named else None
        if name is not None:
            self.section, self.usual = self.unseen.pop(name), -1
        elif _TOP_KEY.match(text, at):
            self.section = "top"
        elif self.section != "top" and self.starts_block(text, at):
            return True, self.section
        elif not _KEY_LIKE.match(text, at) or self.is_inside(text, at):
            return False, "top"
        return self.kind != "top", "top"

    def starts_block(self, text: str, at: int) -> bool:
        """Whether the name of a device or filter stands here, by the first key below it."""
        first = _FIRST_KEY.match(text, at)
        return first is not None and first[1] in INSIDE[self.section][()]

    def is_inside(self, text: str, at: int) -> bool:
        """Whether the next line with content goes on with the block's body."""
        below = _BELOW.search(text, at)
        return (
            self.kind != "top" and below is not None and len(below[1]) >= (self.body_indent or self.usual + 1)
        )

    def deeper(self, text: str, at: int, blank: str, letter: str) -> tuple[bool, Kind]:
        """The same for a line further right, below `devices` or `filters`."""
        indent = len(blank)
        dash = _DASH.match(text, at) is not None
        if self.usual < 0 and dash and self.kind == "top":
            self.section = "top"  # a list has no names
        if letter in "]}," or dash:
            return False, "top"
        named = _KEY.match(text, at)
        known = named is not None and named[1] in INSIDE[self.section][()]
        if self.usual < 0:
            if known and not self.starts_block(text, at):
                return self.kind == "top", self.section  # keys without a name above them
            self.usual = indent
            return True, self.section
        if indent > self.usual:
            if self.kind == "top":
                return False, "top"
            if self.body_indent is None:
                self.body_indent = indent
                return False, "top"
        # An ill-indented key of the block stays in it; but a name may be the same as a key.
        ill_indented = indent != self.usual or "\t" in blank or _LIST_BELOW.match(text, at)
        if known and self.kind != "top" and ill_indented:
            return False, "top"
        if _NAME.match(text, at):
            return True, self.section
        word = _WORD.match(text, at) is not None
        return word and (indent == self.usual or not self.is_inside(text, at)), self.section


# ---------------------------------------------------------------------------------------------- parsing


def parse(text: str, top: bool = False) -> Tree:
    """The tree of a text. Never raises: what can't be read becomes `Lost`, with a fault."""
    clean, faults = parseable(text)
    try:
        composer = Composer(clean, 0, frozenset())
        root = composer.compose()
    except (TooDeepError, YAMLError) as error:
        return salvaged(clean, faults, error, top)
    return Tree(root, (*faults, *composer.faults), not composer.faults and not faults)


def parse_whole(text: str) -> Tree | None:
    """The tree of a text that the parser takes as it is, else None."""
    clean, faults = parseable(text)
    try:
        composer = Composer(clean, 0, frozenset())
        root = composer.compose()
    except (TooDeepError, YAMLError):
        return None
    return None if faults or composer.faults else Tree(root)


def opens_at_end(text: str) -> bool:
    """Whether a quote or bracket of this text is still open where it ends."""
    clean, _ = parseable(text)
    try:
        Composer(clean, 0, frozenset()).compose()
    except MarkedYAMLError as error:
        inside = str(error.context or "")
        return ("quoted" in inside or "flow" in inside) and error.problem_mark.line >= clean.count("\n")
    except (TooDeepError, YAMLError):
        pass
    return False


# ----------------------------------------------------------------------------------------------- places


def address(block: Block) -> str:
    """What `Place.block` calls this block: `/`, `devices/NAME` or `filters/NAME`."""
    return "/" if block.kind == "top" else f"{block.kind}s/{block.name}"


def in_document(document: Document, block: Block, span: Span) -> Span:
    """A span of a block as a span of the document."""
    line, end_line = span.line + block.first_line, span.end_line + block.first_line
    mark = document.text.startswith("\ufeff")
    return Span(line, span.column + (mark and not line), end_line, span.end_column + (mark and not end_line))


def locate(document: Document, block_index: int, place: Place) -> Span:
    """Where in the document a place is, that belongs to the block with this index.

    A path that is not written, because it comes from a device or is a default, is where the innermost
    mapping around it has its key.
    """
    block = document.blocks[block_index]
    if place.block:
        block = next((other for other in document.blocks if address(other) == place.block), block)
    if place.span is not None:
        return in_document(document, block, place.span)
    path, part = place.path, place.part
    while path and path not in block.marks:
        path, part = path[:-1], "key"
    marks = block.marks.get(path)
    if marks is None:
        return in_document(document, block, Span(0, 0, 0, 0))
    return in_document(document, block, getattr(marks, part))
