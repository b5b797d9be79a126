"""Band-file text that the parser refuses, taken apart line by line.

What parses by itself is kept; what does not becomes a `Lost` node at exactly its place, with a fault
that points where it went wrong. Brackets and quotes left open are closed at the line's end, and what
stood in them counts as incomplete.
"""

from __future__ import annotations

import re
from collections.abc import Iterator
from typing import Any, Final, NamedTuple, TypeVar

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
    after,
    too_deep,
)
from bandwright.bandfile.values import Fault, Mend, Place, Span

_HEAD: Final = re.compile(
    r"( *)(- +|-$)?(?:(\"[^\"\n]*\"|'[^'\n]*'|[^\s\[\]{},#&*!|>@%`\"'][^\n]*?) *:(?=\s|$))?"
)
_TABBED: Final = re.compile(r"^[ \t]*\t[ \t]*(?=\S)", re.M)
_CLOSERS: Final = frozenset("]},")
_MAX_SALVAGE_DEPTH: Final = 12
"""Deeper than the grammar nests, so that nothing of a filter is out of reach."""


def salvaged(text: str, faults: tuple[Fault, ...], error: YAMLError, top: bool) -> Tree:
    """The tree of a text that the parser refuses with `error`, after the `faults` found before.

    `top`: the text is the top level of a file; else it starts with a name that the user chose.
    """
    salvage = _Salvage(text, list(faults), top)
    if salvage.expand_tabs():
        try:
            composer = Composer("\n".join(salvage.lines), 0, frozenset())
            root = composer.compose()
        except (TooDeepError, YAMLError):
            root = salvage.group(0, len(salvage.lines), 0)
        else:
            salvage.faults.extend(composer.faults)
    else:
        root = salvage.group(0, len(salvage.lines), 0)
    if len(salvage.faults) == len(faults):
        salvage.blame(error)
    return Tree(salvage.moved_back(root), tuple(salvage.faults), False)


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

    def blame(self, error: YAMLError) -> None:
        """The parser refuses the whole though it takes every piece: point where it stopped."""
        mark = getattr(error, "problem_mark", None)
        line = min(mark.line, len(self.lines) - 1) if mark is not None else 0
        self.fault("other", self.content(line))

    def content(self, line: int) -> Span:
        text = self.lines[line]
        start = len(text) - len(text.lstrip())
        return Span(line, min(start, len(text.rstrip())), line, len(text.rstrip()))

    # --------------------------------------------------------------------------------------------- tabs

    def expand_tabs(self) -> bool:
        """Turns tabs that indent lines into as many spaces as other lines have, or two each; says so once."""
        tabbed = [line for line, text in enumerate(self.lines) if _TABBED.match(text)]
        if not tabbed:
            return False
        indents = {
            self.indent(line) for line, text in enumerate(self.lines) if line and line not in tabbed and text
        }
        for line in tabbed:
            text = self.lines[line]
            blank = len(text) - len(text.lstrip(" \t"))
            widths = [len(text[:blank].replace("\t", " " * step)) for step in (2, 4, 8)]
            width = next((width for width in widths if width in indents), widths[0])
            self.lines[line] = " " * width + text[blank:]
            self.shifts[line] = width - blank
        first, last = tabbed[0], tabbed[-1]
        start = self.original[first].index("\t")
        end = len(self.original[last]) - len(self.original[last].lstrip(" \t"))
        stretch = Span(first, 0, last, end)
        spaces = "\n".join((*self.lines[first:last], self.lines[last][: end + self.shifts[last]]))
        stop = len(self.original[first]) - len(self.original[first].lstrip(" \t"))
        self.faults.append(
            Fault(
                "syntax/tab",
                Place((), span=Span(first, start, first, stop)),
                (("lines", str(len(tabbed))),),
                mends=(Mend((), spaces, span=stretch),),
            )
        )
        return True

    def back(self, span: Span) -> Span:
        """The span in the text as written, before tabs became spaces."""
        if not self.shifts:
            return span
        line, column, end_line, end_column = span
        return Span(
            line,
            max(0, column - self.shifts.get(line, 0)),
            end_line,
            max(0, end_column - self.shifts.get(end_line, 0)),
        )

    def moved_back(self, node: Node | None) -> Node | None:
        if node is None or not self.shifts:
            return node
        if isinstance(node, Mapping):
            entries = [
                Entry(self.moved_back(e.key) or e.key, self.moved_back(e.value) or e.value)
                for e in node.entries
            ]
            return node._replace(entries=entries, span=self.back(node.span))
        if isinstance(node, Sequence):
            items = [self.moved_back(item) or item for item in node.items]
            return node._replace(items=items, span=self.back(node.span))
        return node._replace(span=self.back(node.span))

    # ------------------------------------------------------------------------------------------- groups

    def group(self, first: int, end: int, depth: int) -> Node | None:
        """Lines `first` to `end`, read key by key or item by item; None where there is nothing."""
        heads = self.heads(first, end)
        if not heads:
            return None
        usual = self.indent(heads[0])
        start = Span(heads[0], usual, heads[0], usual)
        mapping = Mapping([], start)
        items: list[Node] = []
        for head, stop in zip(heads, [*heads[1:], end], strict=True):
            node = self.segment(head, stop, depth)
            if isinstance(node, Sequence):
                if not items and self.goes_to_last(mapping, node, head):
                    continue
                for entry in mapping.entries:
                    self.fault(
                        "no-dash",
                        self.content(entry.key.span.line),
                        ("written", self.words(entry.key.span.line)),
                    )
                    items.append(Mapping([entry], entry.key.span))
                mapping.entries.clear()
                if self.indent(head) != usual:
                    self.misplaced(head, usual)
                items.extend(node.items)
            elif isinstance(node, Mapping) and not items:
                if self.indent(head) != usual:
                    self.misplaced(head, usual)
                mapping.entries.extend(node.entries)
            elif isinstance(node, Mapping):
                name = node.entries[0].key if node.entries else None
                if isinstance(name, Scalar) and name.text in INSIDE["filter"][()]:
                    self.misplaced(head, self.body)
                    self.orphans.extend(node.entries)
                else:
                    self.fault("no-dash", self.content(head), ("written", self.words(head)))
                    items.append(node)
        return _stretched(Sequence(items, start)) if items else _stretched(mapping)

    def goes_to_last(self, mapping: Mapping, node: Sequence, head: int) -> bool:
        """Whether items stand no deeper than the key before them, whose list they then are."""
        if not mapping.entries:
            return False
        key, value = mapping.entries[-1]
        if isinstance(value, Sequence) and not value.flow:
            if value.span.column != self.indent(head):
                self.misplaced(head, value.span.column)
            value.items.extend(node.items)
            mapping.entries[-1] = Entry(key, _stretched(value))
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
        except TooDeepError as deep:
            self.faults.append(too_deep(deep))
            return self.lost(head, deep.span)
        except YAMLError as error:
            return self.broken_segment(head, stop, depth, error)
        self.faults.extend(composer.faults)
        if isinstance(node, Scalar):
            return self.stray(head, stop, depth)
        return node

    def broken_segment(self, head: int, stop: int, depth: int, error: YAMLError) -> Node | None:
        match = _HEAD.match(self.lines[head])
        assert match is not None  # every part of the pattern is optional
        rest = self.lines[head][match.end() :].strip()
        inline = bool(rest) and not rest.startswith("#")
        deeper = any(self.lines[line].strip() for line in range(head + 1, stop))
        if depth >= _MAX_SALVAGE_DEPTH:
            self.blame_line(head, error)
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
            return self.with_orphans(key, inner or Lost(after(key.span)), self.content(head))
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
        match = _HEAD.match(self.lines[head])
        assert match is not None  # every part of the pattern is optional
        value = span or Span(
            head, min(match.end() + 1, len(self.lines[head])), head, len(self.lines[head].rstrip())
        )
        if match[2]:
            return Sequence([Lost(self.content(head))], self.content(head))
        if match[3] is None:
            return Lost(self.content(head))
        return Mapping([Entry(self.key(head, match), Lost(value))], self.content(head))

    def stray(self, head: int, stop: int, depth: int) -> Node:
        """A line that is neither a key nor an item: a key without its colon, most likely."""
        span = self.content(head)
        word = self.words(head)
        spaceless = _SPACELESS.match(word)
        if spaceless:
            mend = Mend((), f"{spaceless[1]}: {spaceless[2]}", span=span)
            self.fault("no-space", span, ("key", spaceless[1]), ("written", word), mends=(mend,))
            word = spaceless[1]
        else:
            near = nearest(word, _KEY_NAMES) if self.top or depth else None
            facts = (("written", word), ("nearest", near)) if near else (("written", word),)
            self.fault("no-colon", span, *facts)
        key = Scalar(word.split(" ")[0], Span(head, span.column, head, span.column + len(word.split(" ")[0])))
        inner: Node | None = None
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
        lines = self.lines[head:stop]
        start = _value_start(lines[0])
        lossy: set[tuple[int, int]] = set()
        for attempt in range(limits.MAX_PARSE_REPAIRS + 1):
            try:
                composer = Composer("\n".join(lines), head, frozenset(lossy))
                node = composer.compose()
            except TooDeepError as deep:
                self.faults.append(too_deep(deep))
                return self.lost(head, deep.span)
            except YAMLError as error:
                slip = _slip(lines, start, error)
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
        if (
            any(self.lines[line].strip() for line in range(head + 1, stop))
            and lines[0][start : start + 1] not in _OPENERS
        ):
            alone = self.segment(head, head + 1, depth)
            if isinstance(alone, Mapping) and not isinstance(alone.entries[-1].value, Lost):
                return self.with_misplaced(alone, head, stop, depth)
        return self.lost(head)

    def with_misplaced(self, alone: Mapping, head: int, stop: int, depth: int) -> Mapping:
        """Lines that stand deeper than the complete entry before them: its neighbours, most likely."""
        below = self.group(head + 1, stop, depth + 1) if depth < _MAX_SALVAGE_DEPTH else None
        entries = list(alone.entries)
        if isinstance(below, Mapping):
            self.misplaced(below.span.line, self.indent(head))
            entries.extend(below.entries)
        return _stretched(Mapping(entries, alone.span))

    def blame_line(self, head: int, error: YAMLError) -> None:
        mark = getattr(error, "problem_mark", None)
        self.fault(
            "other", self.content(head if mark is None else min(head + mark.line, len(self.lines) - 1))
        )


class _Slip(NamedTuple):
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


_OPENERS: Final = ("{", "[", '"', "'", "|", ">", "&", "*", "!")
_CLOSING: Final = {"{": "}", "[": "]"}
_SPACELESS: Final = re.compile(r"([A-Za-z_][\w-]*):(\S.*)")
_KEY_NAMES: Final = frozenset(
    name for tables in INSIDE.values() for inside in tables.values() for name in inside if name != "*"
)


def _value_start(line: str) -> int:
    """Where the text starts that stands behind the key or dash of a line."""
    match = _HEAD.match(line)
    end = match.end() if match else 0
    return end + len(line[end:]) - len(line[end:].lstrip())


def _slip(lines: list[str], start: int, error: YAMLError) -> _Slip:
    """What the parser's refusal of a leaf, whose value starts in column `start`, comes from."""
    context, problem = str(getattr(error, "context", "") or ""), str(getattr(error, "problem", "") or "")
    line, column = _position(lines, getattr(error, "problem_mark", None))
    if "quoted scalar" in context and "end of stream" in problem:
        line, column = _position(lines, getattr(error, "context_mark", None))
        text = lines[line].rstrip()
        quote = text[column]
        return _Slip(
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
    if (spaceless := _SPACELESS.match(written)) and not key and spaceless[1] in _KEY_NAMES:
        facts = (("key", spaceless[1]), ("written", written))
        mended = f"{spaceless[1]}: {spaceless[2]}"
        lossy = value + len(spaceless[1]) + 2
        repaired = text[: lossy - 2] + ": " + "x" * (end - lossy) + text[end:]
        return _Slip("no-space", line, value, end, facts, mended, repaired if extent else None, (lossy,))
    quoted = "'" + written.replace("'", "''") + "'"
    if written and (
        "start any token" in problem
        or any(word in context for word in ("anchor", "alias", "block scalar", "tag"))
    ):
        facts = (("character", text[value]), *key)
        return _Slip("character", line, value, end, facts, quoted, repaired, (value,))
    if written and ("mapping values" in problem or "unexpected ':'" in problem or "expected ','" in problem):
        facts = (*key, ("written", written))
        if extent and (missing := re.search(r" +([A-Za-z_]+): ", written)) and missing[1] in _KEY_NAMES:
            mended = written[: missing.start()] + ", " + written[missing.start() :].lstrip()
            return _Slip(
                "missing-comma",
                line,
                value,
                end,
                facts,
                mended,
                repaired,
                (value, *_bracket_before(text, value)),
            )
        return _Slip("colon-in-value", line, value, end, facts, quoted, repaired, (value,))
    return _Slip("other", line, value, end, key, None, repaired, (value,))


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


def _unbalanced(lines: list[str], start: int) -> _Slip | None:
    """The first bracket that is closed by another kind, or never opened, or else the last one left open."""
    opened: list[tuple[int, int]] = []
    for line, text in enumerate(lines):
        for column, letter in _flow_marks(text, start if line == 0 else 0):
            if letter in "[{":
                opened.append((line, column))
            elif letter != ",":
                if not opened:
                    repaired = text[:column] + " " + text[column + 1 :]
                    return _Slip(
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
                    return _Slip(
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
    return _Slip("unclosed-bracket", line, column, len(text), facts, None, repaired, (column,))


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
    key = re.match(r"\s*(?:\"[^\"]*\"|'[^']*'|[^\s\"'][^:]*?)\s*:\s+", line[start:end])
    return start, start + key.end() if key else start, end


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
