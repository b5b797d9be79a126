"""Reads the tree of one block by the grammar: settings, marks and faults, key by key.

A value that can't be read is a fault and an unknown setting, and so is what a broken bracket may have
held or an unknown key may have meant; what is absent is absent for certain.
"""

from __future__ import annotations

import re
from collections.abc import Iterable
from typing import Final

from bandwright.bandfile import grammar, quantities
from bandwright.bandfile.blocks import with_line_feeds
from bandwright.bandfile.grammar import Key, Where, nearest
from bandwright.bandfile.nodes import REPLACED, Alias, Entry, Lost, Mapping, Node, Scalar, Sequence, resolved
from bandwright.bandfile.quantities import Trouble
from bandwright.bandfile.values import UNKNOWN, Fault, Marks, Mend, Path, Place, Setting, Span

_WANTED: Final = {
    "text": "a text",
    "reference": "the name of a device",
    "date": "a date",
    "finding": "the name of a finding",
    "figure": "a number, with its unit if it has one",
    "count": "a whole number",
    "number": "a number",
    "numbers": "a list of numbers",
    "arithmetic": "a number format",
    "mapping": "keys with values",
    "list": "a list",
    "frequency": "a frequency",
    "rate": "a frequency in Hz",
    "level": "a level in dB",
    "gain": "a gain",
    "peak": "a peak value",
    "noise": "a level in dBFS",
    "time": "a time",
    "angle": "an angle",
    "share": "a share",
}


def wanted(row: Key) -> str:
    """What a key asks for, in words."""
    if row.kind in ("name", "names"):
        return "one of " + ", ".join(row.names)
    words = _WANTED[row.dimension or row.kind]
    return ", ".join(row.names) + " or " + words if row.names else words


class BlockReader:
    """Reads the tree of one block into settings, marks and faults; spans count from line `first_line`."""

    def __init__(self, where: Where, text: str, first_line: int = 0) -> None:
        self.where = where
        self.text = text
        self.first_line = first_line
        self.lines: list[str] | None = None
        self.own: dict[Path, Setting] = {}
        self.marks: dict[Path, Marks] = {}
        self.faults: list[Fault] = []

    # ------------------------------------------------------------------------------------------- results

    def say(self, path: Path, value: object, written: str) -> None:
        self.own[path] = Setting(value, written)

    def lose(self, path: Path, node: Node | None = None) -> None:
        """Notes that something stands at this path which can't be read."""
        if path not in self.own:
            self.own[path] = Setting(UNKNOWN, self.written(node) if node is not None else "")

    def written(self, node: Node) -> str:
        """A node as the user wrote it, on one line."""
        found = resolved(node)
        if isinstance(found, Scalar):
            return found.text
        if self.lines is None:
            self.lines = with_line_feeds(self.text).split("\n")
        span = node.span
        line = span.line - self.first_line
        if not 0 <= line < len(self.lines):
            return ""
        text = self.lines[line]
        start = span.column
        while start and text[start - 1 : start] not in ("", " ", ":", "{", "[", ","):
            start -= 1
        return text[start : span.end_column if span.end_line == span.line else None].strip()

    def fault(
        self,
        id: str,
        place: Place,
        facts: Iterable[tuple[str, str]] = (),
        form: str = "",
        mends: Iterable[Mend] = (),
        related: tuple[Place, ...] = (),
    ) -> None:
        marks = self.marks.get(place.path)
        mends = () if marks is not None and marks.shared else tuple(mends)
        self.faults.append(Fault(id, place, tuple(facts), form, mends, related))

    def wrong_kind(self, form: str, row: Key, path: Path, node: Node) -> None:
        """The fault for a value of another kind than its key asks for; the value is unknown."""
        facts = [("key", _name(path)), ("wanted", wanted(row)), ("example", row.example)]
        if form not in ("empty", "text-wanted"):
            facts.insert(1, ("written", self.written(node)))
        self.fault("key/wrong-kind", Place(path, "key" if form == "empty" else "value"), facts, form)
        self.lose(path, node)

    def mark(
        self, path: Path, key: Span | None, value: Span, whole: Span, flow: bool, at: Span | None
    ) -> None:
        if path not in self.marks:
            if at is not None:
                self.marks[path] = Marks(at, at, at, flow, True)
            else:
                self.marks[path] = Marks(key or value, value, whole, flow)

    # ------------------------------------------------------------------------------------------ mappings

    def block(self, entry: Entry) -> str:
        """Reads a device or filter; gives its name."""
        name = entry.key.text if isinstance(entry.key, Scalar) else self.written(entry.key)
        key, value = entry.key.span, entry.value.span
        self.mark((), key, value, union(key, value), False, None)
        row = grammar.ROWS["top"][(f"{self.where}s", "*")]
        body = resolved(entry.value)
        at = entry.value.span if isinstance(entry.value, Alias) else None
        if isinstance(body, Mapping):
            self.mapping(body, (), at)
        elif isinstance(body, Lost):
            self.lose((), entry.value)
        elif isinstance(body, Scalar) and is_empty(body):
            self.mapping(Mapping([], body.span), (), None)
        else:
            facts = (
                ("key", name),
                ("written", self.written(body)),
                ("wanted", wanted(row)),
                ("example", row.example),
            )
            self.fault("key/wrong-kind", Place(()), facts, "mapping-wanted")
            self.lose((), entry.value)
        return name

    def mapping(self, node: Mapping, path: Path, at: Span | None) -> None:
        """Reads the entries of a mapping; `at` is the alias that it stands behind."""
        inside = grammar.INSIDE[self.where].get(grammar.pattern(path), {})
        entries: dict[str, Entry] = {}
        twice: set[str] = set()
        lossy = node.lossy
        for entry in self.without_decimal_commas(node, path):
            key = resolved(entry.key)
            if not isinstance(key, Scalar):
                lossy = True
                if not isinstance(key, Lost):
                    place = Place((), span=entry.key.span)
                    self.fault("key/wrong-kind", place, (("where", self.container(path)),), "key-not-text")
            elif key.text in entries:
                self.duplicate(path, key.text, entry, entries[key.text])
                twice.add(key.text)
            else:
                entries[key.text] = entry
                whole = union(entry.key.span, entry.value.span)
                merged = entry.key.span if isinstance(entry.key, Alias) else at
                self.mark((*path, key.text), entry.key.span, entry.value.span, whole, node.flow, merged)
        for name in entries:
            if name not in inside:
                self.unknown_key(path, name, inside, entries, lossy)
        refused = self.conflicts(path, entries, lossy)
        if refused and grammar.pattern(path) == ("bands", "*"):
            self.lose(path, node)
            return
        refused |= twice
        for name, row in inside.items():
            found = entries.get(name)
            if found is None:
                if row.required and not lossy and not self.is_lost((*path, name)):
                    self.missing(path, name)
            elif name in refused:
                self.lose((*path, name), found.value)
            else:
                reported = len(self.faults)
                self.value(found.value, row, (*path, name), at)
                if lossy and node.entries and found is node.entries[-1]:
                    del self.faults[reported:]  # it may only be half there
        if lossy:
            for leaf in grammar.leaves(self.where, path):
                if leaf[len(path)] not in entries:
                    self.lose(leaf)
            if not inside:
                self.lose(path)
        else:
            self.owed(path, entries)

    def without_decimal_commas(self, node: Mapping, path: Path) -> list[Entry]:
        """The entries of a mapping, with `ripple: 0,1 dB` in brackets, which YAML takes for two, as one."""
        if not node.flow:
            return node.entries
        entries: list[Entry] = []
        for entry in node.entries:
            lost = self.decimal_comma(entries[-1], entry, path) if entries else None
            if lost is None:
                entries.append(entry)
            else:
                entries[-1] = entries[-1]._replace(value=lost)
        return entries

    def decimal_comma(self, before: Entry, entry: Entry, path: Path) -> Lost | None:
        """The number that a comma parts into a value and the key after it, as one that can't be read."""
        key, value, tail = before.key, before.value, entry.key
        if not (isinstance(key, Scalar) and isinstance(value, Scalar) and isinstance(tail, Scalar)):
            return None
        if not (isinstance(entry.value, Scalar) and is_empty(entry.value)):
            return None
        if not (_COMMA_HEAD.fullmatch(value.text) and _COMMA_TAIL.fullmatch(tail.text)):
            return None
        written = f"{value.text},{tail.text}"
        row = grammar.INSIDE[self.where].get(grammar.pattern(path), {}).get(key.text)
        trouble = quantities.parse(written, row.dimension if row and row.dimension else "figure")
        if not isinstance(trouble, Trouble) or trouble.id != "key/decimal-comma":
            return None
        span = union(value.span, tail.span)
        facts = (("key", key.text), ("written", written), *trouble.facts)
        mends = [Mend((), mended, reading=reading, span=span) for mended, reading in trouble.mends]
        self.fault(trouble.id, Place((*path, key.text), span=span), facts, trouble.form, mends)
        return Lost(span)

    def is_lost(self, path: Path) -> bool:
        """Whether something stands at this path, or around it, that can't be read."""
        around = (self.own.get(path[:end]) for end in range(len(path) + 1))
        return any(setting is not None and not setting.known for setting in around)

    def container(self, path: Path) -> str:
        """What the reader of a message calls the mapping at this path."""
        names = [part for part in path if isinstance(part, str)]
        return names[-1] if names else self.where

    def duplicate(self, path: Path, name: str, entry: Entry, first: Entry) -> None:
        place = Place((*path, name), "key", span=entry.key.span)
        facts = (("key", name), ("where", self.container(path)))
        related = (Place((*path, name), "key", span=first.key.span),)
        mends = tuple(
            Mend((*path, name), None, span=union(gone.key.span, gone.value.span), reading=f"keeps {kept}")
            for gone, kept in ((entry, self.called(first)), (first, self.called(entry)))
        )
        self.fault("syntax/duplicate-key", place, facts, mends=mends, related=related)

    def called(self, entry: Entry) -> str:
        """An entry's value where it is short, else its line."""
        written = self.written(entry.value)
        line = entry.key.span.line + 1
        return f"`{written}`" if isinstance(entry.value, Scalar) and written else f"the one of line {line}"

    def missing(self, path: Path, name: str, other: str | None = None) -> None:
        facts = [("key", name), ("where", self.container(path))]
        if other is not None:
            facts.insert(1, ("or", other))
        self.fault("key/missing-key", Place(path, "key"), facts, "" if other is None else "either")

    def unknown_key(
        self, path: Path, name: str, inside: dict[str, Key], entries: dict[str, Entry], lossy: bool
    ) -> None:
        """A key that the grammar does not have here; what it most likely means is then unknown."""
        value = entries[name].value
        place = Place((*path, name), "key")
        facts = [("key", name), ("where", self.container(path))]
        removed = Mend((*path, name), None)
        free = [other for other in inside if other not in entries]
        near = nearest(name, free)
        if isinstance(value, Lost) or (lossy and isinstance(value, Scalar) and is_empty(value)):
            near = near or nearest(name.split(" ")[0], free)  # a fault of the text says what is wrong
        elif not path and name in grammar.RESERVED[self.where]:
            self.fault("key/reserved-key", place, facts)
            return
        elif self.where == "device" and grammar.key("filter", (*path, name)):
            self.fault("key/cannot-apply", place, facts, "device", (removed,))
            return
        elif near is not None:
            self.fault(
                "key/unknown-key", place, [*facts, ("nearest", near)], "", (Mend((*path, name), near, "key"),)
            )
        elif belongs := _elsewhere(self.where, name):
            self.fault("key/unknown-key", place, [*facts, ("belongs", belongs)], "misplaced", (removed,))
        else:
            self.fault("key/unknown-key", place, facts, "", (removed,))
        if near is not None:
            self.lose((*path, near), value)

    def conflicts(self, path: Path, entries: dict[str, Entry], lossy: bool) -> set[str]:
        """The keys of one mapping that can't be taken, because they say the same thing in two ways."""
        pattern = grammar.pattern(path)
        found: set[str] = set()
        if pattern == ("bands", "*"):
            if len(entries) != 1 and not lossy:
                kinds = ", ".join(name for name in grammar.BAND_KINDS if name in entries)
                self.fault("key/wrong-kind", Place(path), (("found", kinds),), "band-keys")
            if len(entries) != 1 or lossy:
                found.update(entries)
        elif pattern[:-1] == ("bands", "*"):
            for name, other in (("gain", "ripple"), ("gain", "attenuation"), ("from", "at"), ("to", "at")):
                if name in entries and other in entries and other in grammar.INSIDE[self.where][pattern]:
                    facts = (("key", name), ("beside", other), ("where", self.container(path)))
                    place = Place((*path, name), "key")
                    self.fault("key/cannot-apply", place, facts, "beside", (Mend((*path, name), None),))
                    found |= {name, other}
        return found

    def owed(self, path: Path, entries: dict[str, Entry]) -> None:
        """What one mapping must hold besides the keys that are always required."""
        pattern = grammar.pattern(path)
        either = _EITHER.get(pattern)
        if either is not None:
            if not any(name in entries or self.is_lost((*path, name)) for name in either):
                self.missing(path, *either)
        elif pattern == ("bands", "*"):
            if not any(name in entries or self.is_lost((*path, name)) for name in grammar.BAND_KINDS):
                self.lose(path)
        elif pattern == ("accepted", "*"):
            if "reason" not in entries and not self.is_lost((*path, "reason")):
                self.no_reason(path, "missing")
        elif path == ("coefficients",) and "feedback" not in entries:
            self.feedback_missing(path)

    def feedback_missing(self, path: Path) -> None:
        """Coefficients `a` are useless while nobody says whether their products are added or subtracted."""
        if any(known[:1] == path and known[-1] == "a" for known in self.marks if len(known) > 1):
            facts = (("key", "feedback"), ("where", "coefficients"))
            mends = (Mend((*path, "feedback"), "subtracted"), Mend((*path, "feedback"), "added"))
            self.fault("key/missing-key", Place(path, "key"), facts, "feedback", mends)

    def no_reason(self, path: Path, form: str) -> None:
        said = self.own.get((*path, "finding"))
        finding = said.written if said is not None else ""
        place = Place(path, "key") if form == "missing" else Place((*path, "reason"))
        self.fault("accepted/no-reason", place, (("finding", finding),) if finding else (), form)

    # -------------------------------------------------------------------------------------------- values

    def value(self, node: Node, row: Key, path: Path, at: Span | None) -> None:
        """Reads the value of a known key."""
        if at is None and isinstance(node, Alias):
            at = node.span
        found = resolved(node)
        if not row.judged and not (isinstance(found, Scalar) and found.text == str(row.default)):
            around = (grammar.ROWS[self.where].get(row.path[:end]) for end in range(1, len(row.path)))
            if all(outer is None or outer.judged for outer in around):
                mends = (Mend(path, None),)
                self.fault("key/not-judged-yet", Place(path, "key"), (("key", _name(path)),), mends=mends)
        if isinstance(found, Lost):
            self.lose(path, node)
        elif isinstance(found, Scalar) and is_empty(found):
            if row.path[-1] == "reason":
                self.no_reason(path[:-1], "empty")
                self.lose(path, node)
            else:
                self.wrong_kind("empty", row, path, node)
        elif isinstance(found, Mapping):
            if row.kind in ("mapping", "arithmetic") and grammar.children(self.where, path):
                self.mapping(found, path, at)
            else:
                self.wrong_kind("list-wanted" if row.kind == "list" else "text-wanted", row, path, node)
        elif isinstance(found, Sequence):
            self.sequence(found, row, path, at, node)
        elif row.kind == "mapping":
            self.wrong_kind("mapping-wanted", row, path, node)
        elif row.kind in ("list", "numbers"):
            self.wrong_kind("list-wanted", row, path, node)
        elif row.kind == "names":
            name = self.scalar(found, row, path)
            if name is not None:
                self.say(path, (name,), found.text)
        else:
            value = self.scalar(found, row, path)
            if value is not None:
                self.say(path, value, found.text)

    def sequence(self, found: Sequence, row: Key, path: Path, at: Span | None, node: Node) -> None:
        if row.kind not in ("list", "names", "numbers"):
            form = "mapping-wanted" if row.kind == "mapping" else "text-wanted"
            return self.wrong_kind(form, row, path, node)
        if not found.items and not found.lossy:
            return self.wrong_kind("empty", row, path, node)
        if found.lossy:
            self.lose(path, node)
            found = found._replace(items=found.items[:-1])  # the last may only be half there
        for index, item in enumerate(found.items):
            whole = item.span if found.flow else self.with_dash(item.span, found.span)
            self.mark((*path, index), None, item.span, whole, found.flow, at)
        if row.kind == "list":
            below = grammar.ROWS[self.where][(*row.path, "*")]
            for index, item in enumerate(found.items):
                self.value(item, below, (*path, index), at)
            return None
        values: list[object] = []
        written: list[str] = []
        for index, item in enumerate(found.items):
            scalar = resolved(item)
            if not isinstance(scalar, Scalar) or is_empty(scalar):
                if not isinstance(scalar, Lost):
                    self.wrong_kind("text-wanted", row, path, node)
                self.lose(path, node)
                continue
            value = self.scalar(scalar, row, (*path, index))
            if value is not None:
                values.append(value)
                written.append(scalar.text)
        if len(values) == len(found.items) and not found.lossy:
            self.say(path, tuple(values), ", ".join(written))
        return None

    def with_dash(self, item: Span, sequence: Span) -> Span:
        """The span of an item of a block list from its dash on."""
        if self.lines is None:
            self.lines = with_line_feeds(self.text).split("\n")
        line = item.line
        while line > sequence.line and not self.lines[line - self.first_line].startswith(
            "-", sequence.column
        ):
            line -= 1
        return Span(line, sequence.column, item.end_line, item.end_column)

    def scalar(self, node: Scalar, row: Key, path: Path) -> object | None:
        """The value of a text by the kind of its key; None where it can't be read, which is then noted."""
        text = node.text
        place_path = path
        if row.kind in ("names", "numbers") and isinstance(path[-1], int):
            path = path[:-1]
        if REPLACED in text:
            self.lose(path, node)
            return None
        kind = row.kind
        found: object
        if kind == "text" or kind == "reference":
            found = text
        elif kind == "name" or kind == "names":
            found = text if text in row.names else _unknown_name(text, row.names)
        elif row.names and text in row.names:
            found = text
        elif kind == "quantity" or kind == "figure":
            found = quantities.parse(text, row.dimension or "figure", row.symmetric)
        elif kind == "count":
            found = quantities.parse_count(text, row.least)
        elif kind == "number" or kind == "numbers":
            found = quantities.parse_number(text)
        elif kind == "arithmetic":
            word = quantities.parse_word(text)
            found = word if isinstance(word, Trouble) else text
        elif kind == "date":
            found = quantities.parse_date(text)
        else:
            found = text if _FINDING.fullmatch(text) else Trouble("key/wrong-kind", "bad-finding")
        if isinstance(found, Trouble):
            self.trouble(found, row, place_path, text)
            self.lose(path, node)
            return None
        if text in row.unjudged_names:
            facts = (("key", _name(path)), ("written", text))
            self.fault("key/not-judged-yet", Place(path), facts, "value", (Mend(path, None),))
        return found

    def trouble(self, trouble: Trouble, row: Key, path: Path, text: str) -> None:
        facts = [("key", _name(path)), ("written", text), *trouble.facts]
        if trouble.id == "key/wrong-kind" and trouble.form not in ("too-small", "out-of-range"):
            facts += [("wanted", wanted(row)), ("example", row.example)]
        mends = [Mend(path, mended, reading=reading) for mended, reading in trouble.mends]
        self.fault(trouble.id, Place(path), facts, trouble.form, mends)


_EITHER: Final[dict[tuple[str, ...], tuple[str, str]]] = {
    ("bands", "*", "pass"): ("ripple", "gain"),
    ("bands", "*", "stop"): ("attenuation", "gain"),
    ("bands", "*", "bounds", "gain"): ("min", "max"),
}
"""Mappings that must hold one key of two."""
_FINDING: Final = re.compile(r"[a-z]+(?:-[a-z]+)*/[a-z0-9]+(?:-[a-z0-9]+)*")
_COMMA_TAIL: Final = re.compile(r"[0-9]+(?: *[A-Za-z%×π°µμ]+)?")
_COMMA_HEAD: Final = re.compile(r"(?:±|\+-|[-+−]?) *[0-9]+")


def is_empty(node: Scalar) -> bool:
    return not node.text.strip() and (not node.quoted or not node.text)


def _name(path: Path) -> str:
    return next((part for part in reversed(path) if isinstance(part, str)), "")


def union(first: Span, last: Span) -> Span:
    return Span(first.line, first.column, last.end_line, last.end_column)


def _unknown_name(text: str, names: Iterable[str]) -> Trouble:
    names = tuple(names)
    near = nearest(text, names)
    facts = (("nearest", near),) if near else ()
    listed = (("names", ", ".join(names)),)
    return Trouble("key/unknown-name", "", facts + listed, ((near, ""),) if near else ())


def _elsewhere(where: Where, name: str) -> str | None:
    """The mapping that a key belongs in which stands in the wrong one."""
    for room in (where, *(("filter", "device") if where == "top" else ())):
        for path in grammar.ROWS[room]:
            if path[-1] == name != "*":
                outer = [part for part in path[:-1] if part != "*"]
                return outer[-1] if outer else room
    return None
