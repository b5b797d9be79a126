"""A band file cut into blocks: each device, each filter, and the top level around them.

The file is cut at the keys below `devices` and `filters`, so that each block is read by itself, only
a changed one is read again, and a slip in one never hides another.
"""

from __future__ import annotations

import re
from typing import Final, Literal, NamedTuple

from ruamel.yaml.error import MarkedYAMLError, YAMLError

from bandwright.bandfile.grammar import INSIDE, nearest
from bandwright.bandfile.nodes import Composer, Lost, TooDeepError, Tree, parseable, too_deep
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


_LINE: Final = re.compile(r"^([ \t]*)([^\s#])", re.M)
_SECTION: Final = re.compile(r"[\"']?([A-Za-z_]+)[\"']? *:?[ \t]*\r?(?:#.*)?$", re.M)
_TOP_KEY: Final = re.compile(r"[\"']?(?:format|masks|together|devices|filters)[\"']? *:(?=\s|$)", re.M)
_FIRST_KEY: Final = re.compile(
    r"[^\n:]+:[ \t]*\r?(?:#.*)?\n(?:[ \t]*\r?(?:#.*)?\n)*[ \t]+[\"']?([\w-]+)[\"']? *:(?=\s|$)", re.M
)
_KEY: Final = re.compile(r"[\"']?([\w-]+)[\"']? *:(?=\s|$)", re.M)
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
    return (first is not None and first[1] in "{[?") or _REFERENCE.search(text) is not None


def cut(text: str) -> list[Piece]:
    """The pieces of a text whose lines all end in LF, in order and without gaps.

    A device or filter starts at its name and runs to the next one. A line that stands less deep than what
    the block began with is taken for the next name, even if it is only half typed, so that it breaks
    nothing but itself; a closing bracket, a list item, or a key that belongs in the block is not.
    """
    pieces: list[Piece] = []
    section: Kind = "top"
    kind: Kind = "top"
    unseen = dict(SECTIONS)
    start = line = first_line = 0
    name_indent = usual = -1
    body_indent: int | None = None
    for match in _LINE.finditer(text):
        blank, letter = match.groups()
        indent = len(blank)
        if indent and (section == "top" or (body_indent is not None and indent >= body_indent)):
            continue
        if letter in "]},":
            continue
        at = match.start(2)
        next_kind: Kind = section
        if indent == 0:
            named = _SECTION.match(text, at)
            name = nearest(named[1], unseen) if named else None
            if name is not None:
                section, next_kind = unseen.pop(name), "top"
                name_indent = usual = -1
            elif _TOP_KEY.match(text, at):
                section = next_kind = "top"
            elif not _is_block(text, at, section):
                next_kind = "top"
            if next_kind == kind == "top":
                continue
        else:
            dash = _DASH.match(text, at) is not None
            if name_indent < 0:
                if dash:
                    section = "top"
                    continue
                usual = indent
            elif dash:
                continue
            elif indent > name_indent:
                if kind == "top":
                    continue
                if body_indent is None:
                    body_indent = indent
                    continue
                if _is_key(text, at, section):
                    continue
            elif "\t" in blank and kind != "top" and _is_key(text, at, section):
                continue
        offset = match.start()
        if offset > start:
            pieces.append(Piece(kind, first_line, start, offset, max(name_indent, 0), max(usual, 0)))
            line += text.count("\n", start, offset)
            start, first_line = offset, line
        kind, body_indent = next_kind, None
        if kind != "top":
            name_indent = indent
    pieces.append(Piece(kind, first_line, start, len(text), max(name_indent, 0), max(usual, 0)))
    return pieces


def _is_key(text: str, at: int, section: Kind) -> bool:
    """Whether a key of a device or filter stands here, rather than a name."""
    named = _KEY.match(text, at)
    return named is not None and named[1] in INSIDE[section][()]


def _is_block(text: str, at: int, section: Kind) -> bool:
    """Whether a name in the first column is a device's or filter's all the same, by what stands below it."""
    first = _FIRST_KEY.match(text, at) if section != "top" else None
    return first is not None and first[1] in INSIDE[section][()]


# ---------------------------------------------------------------------------------------------- parsing


def parse(text: str, top: bool = False) -> Tree:
    """The tree of a text. Never raises: what can't be read becomes `Lost`, with a fault."""
    clean, faults = parseable(text)
    try:
        composer = Composer(clean, 0, frozenset())
        root = composer.compose()
    except TooDeepError as deep:
        return Tree(Lost(deep.span), (*faults, too_deep(deep)), False)
    except YAMLError as error:
        return salvaged(clean, faults, error, top)
    return Tree(root, (*faults, *composer.faults), not composer.faults and not faults)


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
