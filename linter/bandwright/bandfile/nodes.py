"""YAML text as a tree of nodes with their places, made of the C parser's events.

Events rather than the parser's own nodes: they say where an alias stands, they need no recursion in the
parser, and a bound on depth and on what aliases expand to can stop them. A scalar is its text; tags are
not looked at. Lines and columns count from 0, columns in code points.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator
from typing import Any, Final, NamedTuple

from ruamel.yaml.cyaml import CSafeLoader
from ruamel.yaml.events import (
    AliasEvent,
    DocumentStartEvent,
    MappingEndEvent,
    MappingStartEvent,
    ScalarEvent,
    SequenceEndEvent,
)

from bandwright import limits
from bandwright.bandfile.values import Fault, Mend, Place, Span

# ------------------------------------------------------------------------------------------------- nodes


class Scalar(NamedTuple):
    """One value, as text; `quoted` covers block scalars too."""

    text: str
    span: Span
    quoted: bool = False


class Mapping(NamedTuple):
    """Keys with values. `lossy`: something that stood in it could not be read."""

    entries: list[Entry]
    span: Span
    flow: bool = False
    lossy: bool = False


class Sequence(NamedTuple):
    """A list. `lossy`: something that stood in it could not be read."""

    items: list[Node]
    span: Span
    flow: bool = False
    lossy: bool = False


class Lost(NamedTuple):
    """Text that could not be read; a fault says why."""

    span: Span


class Alias(NamedTuple):
    """A node that stands somewhere else, behind an anchor."""

    target: Node
    span: Span


Node = Scalar | Mapping | Sequence | Lost | Alias


class Entry(NamedTuple):
    """A key and its value."""

    key: Node
    value: Node


class Tree(NamedTuple):
    """A text as read: its root (None where there is nothing), what went wrong, and whether all was read."""

    root: Node | None
    faults: tuple[Fault, ...] = ()
    whole: bool = True


# -------------------------------------------------------------------------------------------- characters

_ODD: Final = re.compile(
    "[^\n\x20-\x7e\xa0-\u2027\u202a-\ud7ff\ue000-\ufefe\uff00-\ufffc\U00010000-\U0010ffff]"
)
"""Everything that needs a look before the parser sees it, the tab and the return included."""
_NOT_TEXT: Final = re.compile("[\x00-\x08\x0b\x0c\x0e-\x1f\x7f-\x84\x86-\x9f\ud800-\udfff\ufffd-\uffff]")
_SILENT_BREAKS: Final = {ord(mark): " " for mark in "\x85\u2028\u2029\ufeff"}
"""Line breaks to the parser and to nobody else, and the byte-order mark; none is worth a finding."""

_COLON: Final = re.compile(r" *:")

REPLACED: Final = "\ufffd"
"""Stands in the trees for every character that is not text."""


def unify_line_ends(text: str) -> str:
    """The text with every line end as LF; lines and columns stay."""
    return text if "\r" not in text else text.replace("\r\n", "\n").replace("\r", "\n")


def parseable(text: str) -> tuple[str, tuple[Fault, ...]]:
    """The text with LF line ends and only characters that the parser takes, each in its old column."""
    if _ODD.search(text) is None:
        return text, ()
    text = unify_line_ends(text).translate(_SILENT_BREAKS)
    bad = _NOT_TEXT.search(text)
    if bad is None:
        return text, ()
    code = ord(bad[0])
    form = "surrogate" if 0xD800 <= code <= 0xDFFF else "replacement" if code == 0xFFFD else "control"
    line, column = _line_and_column(text, bad.start())
    span = Span(line, column, line, column + 1)
    facts = (("character", f"U+{code:04X}"), ("count", str(len(_NOT_TEXT.findall(text)))))
    fault = Fault("syntax/not-text", Place((), span=span), facts, form, (Mend((), "", span=span),))
    return _NOT_TEXT.sub(REPLACED, text), (fault,)


def _line_and_column(text: str, offset: int) -> tuple[int, int]:
    return text.count("\n", 0, offset), offset - (text.rfind("\n", 0, offset) + 1)


# --------------------------------------------------------------------------------------------- composing


class TooDeepError(Exception):
    """The text nests deeper than `limits.MAX_YAML_DEPTH`; carries where."""

    def __init__(self, span: Span) -> None:
        super().__init__("too deep")
        self.span = span


class Composer:
    """Makes nodes of the parser's events. Raises what the parser raises, and `TooDeepError`."""

    def __init__(self, text: str, first_line: int, lossy: frozenset[tuple[int, int]]) -> None:
        self.text = text
        self.first_line = first_line
        self.lossy = lossy
        self.faults: list[Fault] = []
        self.anchors: dict[str, tuple[Node, int] | None] = {}
        self.nodes = 0
        self.next_event: Callable[[], Any] = CSafeLoader(text).get_event
        self.lines: list[str] | None = None

    def compose(self) -> Node | None:
        """The root; of several documents, one mapping with the entries of all."""
        root: Node | None = None
        while (event := self.next_event()) is not None:
            if type(event) is not DocumentStartEvent:
                continue
            self.anchors.clear()
            if root is not None:
                line = event.start_mark.line + self.first_line
                place = Place((), span=Span(line, 0, line, 3))
                self.faults.append(Fault("syntax/not-yaml", place, (), "several-documents"))
            node = self.node(self.next_event(), 0)
            if root is None:
                root = node
            elif isinstance(root, Mapping) and isinstance(node, Mapping):
                root.entries.extend(node.entries)
        return root

    def node(self, event: Any, depth: int) -> Node:
        start, end = event.start_mark, event.end_mark
        line = start.line + self.first_line
        kind = type(event)
        self.nodes += 1
        if kind is ScalarEvent:
            span = Span(line, start.column, end.line + self.first_line, end.column)
            style = event.style
            if style == "|" or style == ">":
                span = self.trimmed(span)
            node: Node = Scalar(event.value, span, style != "")
            if self.lossy and (line, start.column) in self.lossy:
                node = Lost(span)
            if event.anchor is not None:
                self.anchors[event.anchor] = node, 1
            return node
        if kind is AliasEvent:
            return self.alias(event.anchor, Span(line, start.column, line, end.column))
        if depth >= limits.MAX_YAML_DEPTH:
            raise TooDeepError(Span(line, start.column, line, start.column + 1))
        anchor, before = event.anchor, self.nodes
        if anchor is not None:
            self.anchors[anchor] = None
        node = self.mapping(event, depth) if kind is MappingStartEvent else self.sequence(event, depth)
        if anchor is not None:
            self.anchors[anchor] = node, self.nodes - before
        return node

    def mapping(self, event: Any, depth: int) -> Mapping:
        entries: list[Entry] = []
        merged: list[Entry] = []
        while type(child := self.next_event()) is not MappingEndEvent:
            key = self.node(child, depth + 1)
            value = self.node(self.next_event(), depth + 1)
            if isinstance(value, Scalar) and not value.text and not value.quoted:
                value = value._replace(span=self.after(key.span))
            if isinstance(key, Scalar) and key.text == "<<" and isinstance(value, Alias | Sequence):
                merged.extend(_merged(value))
            else:
                entries.append(Entry(key, value))
        if merged:
            own = {entry.key.text for entry in entries if isinstance(entry.key, Scalar)}
            for entry in merged:
                name = resolved(entry.key)
                if isinstance(name, Scalar) and name.text not in own:
                    own.add(name.text)
                    entries.append(entry)
        span = self.extent(event, child, entries[-1].value.span if entries else None)
        return Mapping(entries, span, bool(event.flow_style), self.is_lossy(event))

    def sequence(self, event: Any, depth: int) -> Sequence:
        items: list[Node] = []
        while type(child := self.next_event()) is not SequenceEndEvent:
            items.append(self.node(child, depth + 1))
        span = self.extent(event, child, items[-1].span if items else None)
        return Sequence(items, span, bool(event.flow_style), self.is_lossy(event))

    def extent(self, start: Any, end: Any, last: Span | None) -> Span:
        """From the collection's start to its closing bracket, or to the end of what stands last in it."""
        line, column = start.start_mark.line + self.first_line, start.start_mark.column
        if start.flow_style or last is None:
            return Span(line, column, end.end_mark.line + self.first_line, end.end_mark.column)
        return Span(line, column, last.end_line, last.end_column)

    def is_lossy(self, event: Any) -> bool:
        mark = event.start_mark
        return bool(self.lossy) and (mark.line + self.first_line, mark.column) in self.lossy

    def alias(self, name: str, span: Span) -> Node:
        anchored = self.anchors.get(name)
        if anchored is None:
            place = Place((), span=span)
            self.faults.append(Fault("syntax/not-yaml", place, (("name", name),), "unknown-alias"))
            return Lost(span)
        node, size = anchored
        if self.nodes + size > limits.MAX_YAML_NODES:
            facts = (("maximum", str(limits.MAX_YAML_NODES)),)
            self.faults.append(Fault("syntax/alias-bomb", Place((), span=span), facts))
            return Lost(span)
        self.nodes += size
        return Alias(node, span)

    def after(self, key: Span) -> Span:
        """Where the value of a key stands that has none: behind its colon, if it has one."""
        text = self.line(key.end_line)
        colon = _COLON.match(text, key.end_column)
        column = colon.end() if colon else key.end_column
        return Span(key.end_line, column, key.end_line, column)

    def line(self, number: int) -> str:
        if self.lines is None:
            self.lines = self.text.split("\n")
        return self.lines[min(number - self.first_line, len(self.lines) - 1)]

    def trimmed(self, span: Span) -> Span:
        """A block scalar's span without the blank lines after it."""
        end = span.end_line - (span.end_column == 0)
        while end > span.line and not self.line(end).strip():
            end -= 1
        return Span(span.line, span.column, end, len(self.line(end).rstrip()))


def _merged(value: Alias | Sequence) -> Iterator[Entry]:
    """The entries that a merge key brings, each standing where the alias stands."""
    if isinstance(value, Sequence):
        for item in value.items:
            if isinstance(item, Alias):
                yield from _merged(item)
        return
    target = resolved(value)
    if isinstance(target, Mapping):
        for entry in target.entries:
            yield Entry(Alias(entry.key, value.span), Alias(entry.value, value.span))


def resolved(node: Node) -> Scalar | Mapping | Sequence | Lost:
    """The node itself, behind any alias."""
    while isinstance(node, Alias):
        node = node.target
    return node


def too_deep(deep: TooDeepError) -> Fault:
    """The fault for text that nests too deep."""
    facts = (("maximum", str(limits.MAX_YAML_DEPTH)),)
    return Fault("syntax/too-deep", Place((), span=deep.span), facts)
