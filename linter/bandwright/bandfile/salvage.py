"""Band-file text that the parser refuses, taken apart line by line.

What parses by itself is kept; what does not becomes a `Lost` node at exactly its place, with a fault
that points where it went wrong. Brackets and quotes left open are closed at the line's end, and what
stood in them counts as incomplete.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import Final, TypeVar

from ruamel.yaml.error import YAMLError

from bandwright import limits
from bandwright.bandfile.grammar import INSIDE, nearest
from bandwright.bandfile.nodes import (
    Composer,
    Entry,
    Lost,
    Mapping,
    Node,
    Scalar,
    Sequence,
    TooDeepError,
    Tree,
    too_deep,
)
from bandwright.bandfile.slips import HEAD, KEY_NAMES, SPACELESS, find_slip, value_start
from bandwright.bandfile.values import Fault, Mend, Place, Span

Refusal = TooDeepError | YAMLError
"""What composing a text raises."""

_OPENERS: Final = ("{", "[", '"', "'", "|", ">", "&", "*", "!")
_WORD: Final = re.compile(r"[\w.-]+")
_CLOSERS: Final = frozenset("]},")
_MAX_SALVAGE_DEPTH: Final = 12
"""Deeper than the grammar nests, so that nothing of a filter is out of reach."""


def salvaged(text: str, faults: tuple[Fault, ...], error: Refusal, top: bool) -> Tree:
    """The tree of a text that the parser refuses with `error`, after the `faults` found before.

    `top`: the text is the top level of a file; else it starts with a name that the user chose.
    """
    salvage = _Salvage(text, list(faults), top)
    tabs, strays = salvage.expand_tabs(), salvage.take_in_strays()
    root: Node | None = None
    if tabs or strays:
        try:
            composer = Composer("\n".join(salvage.lines), 0, frozenset())
            root = composer.compose()
        except (TooDeepError, YAMLError):
            root = None
        else:
            salvage.keep(composer.faults)
    if root is None:
        root = salvage.group(0, len(salvage.lines), 0)
    if len(salvage.faults) == len(faults):
        salvage.blame(error)
    if not top and isinstance(root, Mapping):
        root = _with_one_name(root, salvage.incomplete)
    return Tree(salvage.moved_back(root), tuple(salvage.faults), False)


def _with_one_name(root: Mapping, lossy: bool) -> Mapping:
    """A block's tree with all that is in it below its name; `lossy`: some of it can't be read."""
    if root.entries and (len(root.entries) > 1 or lossy):
        name, body = root.entries[0]
        if isinstance(body, Scalar) and not body.text:
            body = Mapping([], body.span)
        if isinstance(body, Mapping):
            body = body._replace(entries=[*body.entries, *root.entries[1:]], lossy=lossy)
        return root._replace(entries=[Entry(name, body)])
    return root


class _Salvage:
    """Takes a text apart that the parser refuses as a whole."""

    def __init__(self, text: str, faults: list[Fault], top: bool) -> None:
        self.top = top
        self.original = text.split("\n")
        self.lines = list(self.original)
        self.faults = faults
        self.shifts: dict[int, int] = {}
        self.orphans: list[Entry] = []
        """Keys of the filter that stand too deep, until the mapping is met that they belong in."""
        self.named = 0
        self.incomplete = False
        heads = self.heads(1, len(self.lines)) if not top else []
        self.body = self.indent(heads[0]) if heads else 0
        """Where the keys of the block stand."""

    # ------------------------------------------------------------------------------------------- faults

    def fault(self, form: str, span: Span, *facts: tuple[str, str], mends: tuple[Mend, ...] = ()) -> None:
        """Names what is wrong; only the first few, since one slip often brings others."""
        if self.named < limits.MAX_PARSE_REPAIRS:
            span = self.back(span)
            mends = tuple(
                mend if mend.span is None else Mend((), mend.text, span=self.back(mend.span))
                for mend in mends
            )
            self.faults.append(Fault("syntax/not-yaml", Place((), span=span), facts, form, mends))
        self.named += 1

    def keep(self, faults: Iterable[Fault]) -> None:
        """Takes over what composing a part found."""
        for fault in faults:
            span = fault.place.span
            place = fault.place if span is None else Place((), span=self.back(span))
            self.faults.append(Fault(fault.id, place, fault.facts, fault.form))

    def blame(self, error: Refusal, first: int = 0) -> None:
        """Points where the parser stopped, in a text that starts at line `first`."""
        if isinstance(error, TooDeepError):
            self.keep([too_deep(error)])
            return
        mark = getattr(error, "problem_mark", None)
        line = first if mark is None else min(first + mark.line, len(self.lines) - 1)
        self.fault("other", self.content(line))

    def content(self, line: int) -> Span:
        text = self.lines[line]
        start = len(text) - len(text.lstrip())
        return Span(line, min(start, len(text.rstrip())), line, len(text.rstrip()))

    # --------------------------------------------------------------------------------------------- tabs

    def expand_tabs(self) -> bool:
        """Turns tabs that indent lines into as many spaces as other lines have, or two each; says so once."""
        blanks = [text[: len(text) - len(text.lstrip(" \t"))] for text in self.lines]
        tabbed = [line for line, blank in enumerate(blanks) if "\t" in blank and self.words(line)]
        if not tabbed:
            return False
        others = set(range(1, len(blanks))).difference(tabbed)
        indents = {len(blanks[line]) for line in others if self.words(line)}
        for line in tabbed:
            widths = [len(blanks[line].replace("\t", " " * step)) for step in (2, 4, 8)]
            width = next((width for width in widths if width in indents), widths[0])
            self.lines[line] = " " * width + self.lines[line][len(blanks[line]) :]
            self.shifts[line] = width - len(blanks[line])
        first, last = tabbed[0], tabbed[-1]
        start, stop, end = blanks[first].index("\t"), len(blanks[first]), len(blanks[last])
        stretch = Span(first, 0, last, end)
        spaces = "\n".join((*self.lines[first:last], self.lines[last][: end + self.shifts[last]]))
        self.faults.append(
            Fault(
                "syntax/tab",
                Place((), span=Span(first, start, first, stop)),
                (("lines", str(len(tabbed))),),
                mends=(Mend((), spaces, span=stretch),),
            )
        )
        return True

    def take_in_strays(self) -> bool:
        """Moves keys that stand no deeper than the block's name to where they belong, blanks other lines.

        Says whether there were any; a blanked one leaves the block incomplete.
        """
        if self.top:
            return False
        strays = [line for line in self.heads(0, len(self.lines))[1:] if self.indent(line) <= self.indent(0)]
        for line in strays:
            match = HEAD.match(self.lines[line])
            if match and (match[2] or match[3]):
                self.misplaced(line, self.body)
            else:
                self.fault("no-colon", self.content(line), ("written", self.words(line)))
            if match and match[3] in INSIDE["filter"][()] and not match[2]:
                self.shifts[line] = self.shifts.get(line, 0) + self.body - self.indent(line)
                self.lines[line] = " " * self.body + self.words(line)
            else:
                self.lines[line] = ""
                self.incomplete = True
        return bool(strays)

    def back(self, span: Span) -> Span:
        """The span in the text as written: before tabs became spaces, and without what closes brackets."""
        line, column, end_line, end_column = span
        return Span(line, self.column_back(line, column), end_line, self.column_back(end_line, end_column))

    def column_back(self, line: int, column: int) -> int:
        return min(max(0, column - self.shifts.get(line, 0)), len(self.original[line]))

    def moved_back(self, node: Node | None) -> Node | None:
        """The tree with its spans in the text as written."""
        if node is None:
            return None
        span = self.back(node.span)
        if isinstance(node, Mapping):
            entries = [
                Entry(self.moved_back(e.key) or e.key, self.moved_back(e.value) or e.value)
                for e in node.entries
            ]
            return node._replace(entries=entries, span=span)
        if isinstance(node, Sequence):
            return node._replace(items=[self.moved_back(item) or item for item in node.items], span=span)
        return node._replace(span=span)

    # ------------------------------------------------------------------------------------------- groups

    def group(self, first: int, end: int, depth: int) -> Node | None:
        """Lines `first` to `end`, read key by key or item by item; None where there is nothing."""
        heads = self.heads(first, end)
        if not heads:
            return None
        usual = self.indent(heads[0])
        start = Span(heads[0], usual, heads[0], usual)
        mapping = Mapping([], start)
        lossy = False
        items: list[Node] = []
        for head, stop in zip(heads, [*heads[1:], end], strict=True):
            node = self.segment(head, stop, depth)
            if isinstance(node, Sequence):
                if not items and self.goes_to_last(mapping, node, head):
                    continue
                if mapping.entries and not self.words(head).startswith("-"):
                    self.fault("other", self.content(head))
                    lossy = True
                    continue
                for entry in mapping.entries:
                    self.dash_missing(entry.key.span.line)
                    items.append(Mapping([entry], entry.key.span))
                mapping.entries.clear()
                items.extend(node.items)
            elif isinstance(node, Mapping) and items:
                name = node.entries[0].key if node.entries else None
                if isinstance(name, Scalar) and name.text in INSIDE["filter"][()]:
                    self.misplaced(head, self.body)
                    self.orphans.extend(node.entries)
                else:
                    self.dash_missing(head)
                    items.append(node)
                continue
            elif isinstance(node, Mapping):
                mapping.entries.extend(node.entries)
                lossy = lossy or node.lossy
            if self.indent(head) != usual:
                self.misplaced(head, usual)
        if items:
            return _stretched(Sequence(items, start))
        entries = [Entry(key, _stretched(v) if isinstance(v, Sequence) else v) for key, v in mapping.entries]
        return _stretched(Mapping(entries, start, lossy=lossy))

    def dash_missing(self, line: int) -> None:
        self.fault("no-dash", self.content(line), ("written", self.words(line)))

    def goes_to_last(self, mapping: Mapping, node: Sequence, head: int) -> bool:
        """Whether items stand no deeper than the key before them, whose list they then are."""
        if not mapping.entries:
            return False
        key, value = mapping.entries[-1]
        if isinstance(value, Sequence) and not value.flow:
            if value.span.column != self.indent(head):
                self.misplaced(head, value.span.column)
            value.items.extend(node.items)
            return True
        if isinstance(value, Scalar) and not value.text:
            mapping.entries[-1] = Entry(key, node)
            return True
        return False

    def heads(self, first: int, end: int) -> list[int]:
        """The lines that start a key or an item of the outermost level of these lines."""
        heads: list[int] = []
        for line in range(first, end):
            text = self.lines[line].lstrip(" ")
            if not text or text[0] in "#\r" or text[0] in _CLOSERS or text.isspace():
                continue
            indent = len(self.lines[line]) - len(text)
            if not heads or indent <= self.indent(heads[-1]) or indent < self.indent(heads[0]):
                heads.append(line)
        return heads

    def indent(self, line: int) -> int:
        return len(self.lines[line]) - len(self.lines[line].lstrip(" "))

    def words(self, line: int) -> str:
        return self.lines[line].strip()

    def misplaced(self, head: int, usual: int) -> None:
        facts = (("column", str(self.indent(head))), ("expected", str(usual)))
        self.fault("indent", self.content(head), ("written", self.words(head)), *facts)

    def segment(self, head: int, stop: int, depth: int) -> Node | None:
        """One key or item with all that belongs to it, as a mapping of one or a list of one."""
        try:
            composer = Composer("\n".join(self.lines[head:stop]), head, frozenset())
            node = composer.compose()
        except (TooDeepError, YAMLError) as error:
            return self.broken_segment(head, stop, depth, error)
        self.keep(composer.faults)
        if isinstance(node, Scalar):
            return self.stray(head, stop, depth)
        return node

    def broken_segment(self, head: int, stop: int, depth: int, error: Refusal) -> Node | None:
        match = HEAD.match(self.lines[head])
        assert match is not None  # every part of the pattern is optional
        rest = self.lines[head][match.end() :].strip()
        inline = bool(rest) and not rest.startswith("#")
        deeper = bool(self.heads(head + 1, stop))
        if depth >= _MAX_SALVAGE_DEPTH:
            self.blame(error, head)
            return self.lost(head)
        if match[2] and (match[3] or inline):
            return self.item(head, stop, depth, match)
        if match[2]:
            inner = self.group(head + 1, stop, depth + 1)
            return Sequence([inner or Lost(self.content(head))], self.content(head))
        if match[3] is None:
            return self.stray(head, stop, depth)
        if not inline and deeper:
            key = self.key(head, match)
            inner = self.group(head + 1, stop, depth + 1)
            return self.with_orphans(key, inner or Lost(_behind(key.span)), self.content(head))
        return self.leaf(head, stop, depth)

    def item(self, head: int, stop: int, depth: int, match: re.Match[str]) -> Node:
        """An item whose content starts beside its dash: read without the dash."""
        dashed = self.lines[head]
        dash = len(match[1])
        span = Span(head, dash, head, len(dashed.rstrip()))
        below = [line for line in range(head + 1, stop) if self.lines[line].strip()]
        if below and self.lines[below[0]].lstrip().startswith("- ") and self.indent(below[0]) <= match.end(2):
            alone = self.segment(head, head + 1, depth + 1)
            others = self.group(head + 1, stop, depth + 1)
            if isinstance(alone, Sequence) and isinstance(others, Sequence):
                self.misplaced(below[0], dash)
                return _stretched(Sequence([*alone.items, *others.items], span))
        self.lines[head] = dashed[:dash] + " " + dashed[dash + 1 :]
        inner: Node | None
        if self.words(head)[0] in "{[\"'" and not match[3]:
            inner = self.leaf(head, stop, depth)
        else:
            inner = self.group(head, stop, depth + 1)
        self.lines[head] = dashed
        return _stretched(Sequence([inner or Lost(span)], span))

    def key(self, head: int, match: re.Match[str]) -> Scalar:
        start, end = match.span(3)
        return Scalar(match[3].strip("\"'"), Span(head, start, head, end))

    def lost(self, head: int, span: Span | None = None) -> Node:
        """The segment with its key, if it has one, and a value that can't be read."""
        match = HEAD.match(self.lines[head])
        assert match is not None  # every part of the pattern is optional
        end = len(self.lines[head].rstrip())
        value = span or Span(head, min(match.end() + 1, end), head, end)
        if match[2]:
            return Sequence([Lost(self.content(head))], self.content(head))
        if match[3] is None:
            return Lost(self.content(head))
        return Mapping([Entry(self.key(head, match), Lost(value))], self.content(head))

    def stray(self, head: int, stop: int, depth: int) -> Node:
        """A line that is neither a key nor an item: a key without its colon, most likely."""
        span = self.content(head)
        word = self.words(head)
        spaceless = SPACELESS.match(word)
        if spaceless:
            mend = Mend((), f"{spaceless[1]}: {spaceless[2]}", span=span)
            self.fault("no-space", span, ("key", spaceless[1]), ("written", word), mends=(mend,))
            word = spaceless[1]
        else:
            near = nearest(word, KEY_NAMES) if self.top or depth else None
            facts = (("written", word), ("nearest", near)) if near else (("written", word),)
            self.fault("no-colon", span, *facts)
        if not spaceless and _WORD.fullmatch(word) is None:
            inner = self.group(head + 1, stop, depth + 1) if depth < _MAX_SALVAGE_DEPTH else None
            return Mapping(inner.entries if isinstance(inner, Mapping) else [], span, lossy=True)
        key = Scalar(word, Span(head, span.column, head, span.column + len(word)))
        inner = None
        if not spaceless and depth < _MAX_SALVAGE_DEPTH:
            inner = self.group(head + 1, stop, depth + 1)
        return self.with_orphans(key, inner or Lost(span), span)

    def with_orphans(self, key: Scalar, value: Node, span: Span) -> Mapping:
        entries = [Entry(key, value), *self.orphans]
        self.orphans.clear()
        return Mapping(entries, span)

    # -------------------------------------------------------------------------------------------- leaves

    def leaf(self, head: int, stop: int, depth: int) -> Node | None:
        """A value that stands beside its key or dash: closed or blanked where it breaks."""
        if entries := self.with_neighbours_below(head, stop, depth):
            return entries
        lines = self.lines[head:stop]
        start = value_start(lines[0])
        lossy: set[tuple[int, int]] = set()
        for attempt in range(limits.MAX_PARSE_REPAIRS + 1):
            try:
                composer = Composer("\n".join(lines), head, frozenset(lossy))
                node = composer.compose()
            except TooDeepError as deep:
                self.blame(deep)
                return self.lost(head, deep.span)
            except YAMLError as error:
                slip = find_slip(lines, start, error)
                if not attempt:
                    span = Span(head + slip.line, slip.start, head + slip.line, slip.end)
                    mends = () if slip.mended is None else (Mend((), slip.mended, span=span),)
                    self.fault(slip.form, span, *slip.facts, mends=mends)
                if slip.repaired is None:
                    break
                lines[slip.line] = slip.repaired
                lossy.update((head + slip.line, column) for column in slip.lossy)
            else:
                return node
        return self.lost(head)

    def with_neighbours_below(self, head: int, stop: int, depth: int) -> Mapping | None:
        """An entry that is complete on its line with keys below that stand too deep; None if it is not so."""
        line = self.lines[head]
        below = next(iter(self.heads(head + 1, stop)), None)
        key = HEAD.match(self.lines[below]) if below is not None else None
        if below is None or key is None or not (key[2] or key[3] in KEY_NAMES):
            return None
        if line.startswith(_OPENERS, value_start(line)) or depth >= _MAX_SALVAGE_DEPTH:
            return None
        try:
            alone = Composer(line, head, frozenset()).compose()
        except (TooDeepError, YAMLError):
            return None
        if not isinstance(alone, Mapping):
            return None
        others = self.group(below, stop, depth + 1)
        if isinstance(others, Mapping):
            self.misplaced(below, self.indent(head))
            return _stretched(Mapping([*alone.entries, *others.entries], alone.span))
        self.fault("other", self.content(below))
        return alone._replace(lossy=True)


def _behind(key: Span) -> Span:
    """The empty span behind a key's colon."""
    return Span(key.end_line, key.end_column + 1, key.end_line, key.end_column + 1)


_Collection = TypeVar("_Collection", Mapping, Sequence)


def _stretched(node: _Collection) -> _Collection:
    """The collection with a span that covers all that stands in it."""
    line, column, *end = node.span
    ends = [tuple(end)]
    if isinstance(node, Mapping):
        ends.extend(part.span[2:] for entry in node.entries for part in entry)
    else:
        ends.extend(item.span[2:] for item in node.items)
    return node._replace(span=Span(line, column, *max(ends)))
