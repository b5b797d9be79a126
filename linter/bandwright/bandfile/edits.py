"""Changes of values as changes of text: only what changes is touched, all other characters stay.

Texts are values as the reader gives them, quoted here where YAML needs it; for lists and mappings they
are YAML in brackets. Positions are lines and columns of the document, from 0, in code points.
"""

from __future__ import annotations

import re
from collections.abc import Iterable, Mapping
from typing import Final

from bandwright.bandfile import grammar
from bandwright.bandfile.blocks import in_document
from bandwright.bandfile.values import Block, Document, Marks, Mend, Path, Span, TextEdit

_LINE_END: Final = re.compile(r"\r\n|\n|\r")
_NEEDS_QUOTES: Final = re.compile(
    r"^$|^\s|\s$|^[?:,\[\]{}#&*!|>'\"%@`]|^-(?=\s|$)|:(?=\s|$)|\s#|^(---|\.\.\.)|[\x00-\x1f\x7f-\x9f\u2028\u2029]"
)
_NEEDS_QUOTES_IN_FLOW: Final = re.compile(r"[,\[\]{}:?]")
_ANCHOR: Final = re.compile(r"(?:[&!]\S*\s+)+")


def apply(text: str, edits: Iterable[TextEdit]) -> str:
    """The text with the edits made. Raises ValueError where two of them overlap."""
    starts = [0, *(match.end() for match in _LINE_END.finditer(text))]
    stretches = sorted(
        (
            starts[edit.span.line] + edit.span.column,
            starts[edit.span.end_line] + edit.span.end_column,
            edit.text,
        )
        for edit in edits
    )
    parts: list[str] = []
    done = 0
    for start, end, new in stretches:
        if start < done:
            raise ValueError(f"edits overlap at offset {start}")
        parts += text[done:start], new
        done = end
    return "".join((*parts, text[done:]))


def edits(document: Document, block_index: int, changes: Mapping[Path, str | None]) -> tuple[TextEdit, ...]:
    """The edits that give the values at these paths of a block new texts, add them, or (None) remove them.

    An entry goes with its line or its comma, and what it leaves empty goes too; `{(): None}` removes the
    block. A new entry stands among its neighbours in the order of the grammar. Empty where a path stands
    behind an alias, so that no edit here would change it alone.
    """
    return _Editor(document, block_index).change(changes)


def rename(document: Document, block_index: int, path: Path, name: str) -> tuple[TextEdit, ...]:
    """The edit that gives the key at this path another name; empty where it stands behind an alias."""
    editor = _Editor(document, block_index)
    marks = editor.block.marks.get(path)
    if marks is None or marks.shared:
        return ()
    return (editor.replace(marks.key, as_yaml(name, marks.flow)),)


def mend_edits(document: Document, block_index: int, mend: Mend) -> tuple[TextEdit, ...]:
    """The edits that a mend of this block stands for."""
    if mend.part == "key" and mend.text is not None:
        return rename(document, block_index, mend.path, mend.text)
    if mend.span is None:
        return edits(document, block_index, {mend.path: mend.text})
    editor = _Editor(document, block_index)
    if mend.text is None:
        return (editor.without(mend.span),)
    return (editor.replace(mend.span, mend.text),)


def accept(
    document: Document,
    block_index: int,
    finding: str,
    reason: str,
    up_to: str | None = None,
    until: str | None = None,
) -> tuple[TextEdit, ...]:
    """The edit that adds an accepted finding to a filter; empty where its list stands behind an alias."""
    fields = {"finding": finding, "up_to": up_to, "reason": reason, "until": until}
    return _Editor(document, block_index).accept(
        {key: text for key, text in fields.items() if text is not None}
    )


def as_yaml(text: str, flow: bool = False) -> str:
    """A text as a YAML scalar, in quotes where it needs them; `flow` for inside brackets."""
    if _NEEDS_QUOTES.search(text) is None and not (flow and _NEEDS_QUOTES_IN_FLOW.search(text)):
        return text
    if re.search(r"[\x00-\x1f\x7f-\x9f\u2028\u2029\ud800-\udfff]", text):
        escaped = (f"\\U{ord(c):08x}" if not c.isprintable() else "\\" + c if c in '"\\' else c for c in text)
        return '"' + "".join(escaped) + '"'
    return "'" + text.replace("'", "''") + "'"


class _Editor:
    """Makes the edits of one block."""

    def __init__(self, document: Document, block_index: int) -> None:
        self.document = document
        self.block: Block = document.blocks[block_index]
        self.lines = _LINE_END.split(document.text)
        end = _LINE_END.search(document.text)
        self.line_end = end[0] if end else "\n"

    # ------------------------------------------------------------------------------------------- looking

    def replace(self, span: Span, text: str) -> TextEdit:
        return TextEdit(in_document(self.document, self.block, span), text)

    def line(self, number: int) -> str:
        """A line of the block."""
        return self.lines[number + self.block.first_line]

    def children(self, path: Path) -> list[Path]:
        """The entries or items that are written directly inside, in the order of the text."""
        depth = len(path) + 1
        inside = [known for known in self.block.marks if len(known) == depth and known[:-1] == path]
        return sorted(inside, key=lambda known: self.block.marks[known].all)

    def value(self, path: Path, text: str, flow: bool) -> str:
        """The text of a new value as YAML."""
        row = grammar.key(self.block.kind, path)
        collection = row is not None and (
            row.kind in ("mapping", "list", "numbers")
            or (row.kind in ("names", "arithmetic") and text[:1] in ("[", "{"))
        )
        return text if collection else as_yaml(text, flow)

    def entry(self, path: Path, text: str, flow: bool) -> str:
        """A new entry or item, without the dash of a block list."""
        name = path[-1]
        value = self.value(path, text, flow)
        return value if isinstance(name, int) else f"{as_yaml(name, flow)}: {value}"

    # ------------------------------------------------------------------------------------------- changes

    def change(self, changes: Mapping[Path, str | None]) -> tuple[TextEdit, ...]:
        marks = self.block.marks
        if any(self.is_shared(path) for path in changes):
            return ()
        rewritten = {path: text for path, text in changes.items() if text is not None and path in marks}
        removed = {path for path, text in changes.items() if text is None and path in marks}
        added = self.wrapped({p: text for p, text in changes.items() if text is not None and p not in marks})
        for path in sorted(removed, key=len, reverse=True):
            while len(path) > 1 and path[:-1] not in {new[:-1] for new in added}:
                if not set(self.children(path[:-1])) <= removed:
                    break
                path = path[:-1]
                removed.add(path)
        removed = {path for path in removed if not any(path[:end] in removed for end in range(len(path)))}
        found = [self.rewritten(path, text) for path, text in rewritten.items()]
        for container in {path[:-1] for path in added} | {path[:-1] for path in removed}:
            gone = {path for path in removed if path[:-1] == container and path != container}
            new = {path: text for path, text in added.items() if path[:-1] == container}
            found += self.rearranged(container, gone, new)
        if () in removed:
            found.append(self.without_block())
        return tuple(sorted(found, key=lambda edit: edit.span))

    def wrapped(self, changes: dict[Path, str]) -> dict[Path, str]:
        """The entries to add, each in a mapping that exists: a missing one comes whole, in brackets."""
        added: dict[Path, str] = {}
        missing: dict[Path, list[Path]] = {}
        for path in sorted(changes, key=self.place):
            if len(path) <= 1 or path[:-1] in self.block.marks:
                added[path] = changes[path]
            else:
                missing.setdefault(path[:-1], []).append(path)
        whole = {}
        for container, paths in missing.items():
            inside = ", ".join(self.entry(path, changes[path], True) for path in paths)
            whole[container] = f"[{inside}]" if isinstance(paths[0][-1], int) else f"{{{inside}}}"
        return added | self.wrapped(whole) if whole else added

    def is_shared(self, path: Path) -> bool:
        """Whether a path, or the mapping that it would be added to, stands behind an alias."""
        marks = self.block.marks
        for end in range(len(path), -1, -1):
            if path[:end] in marks:
                inside = end < len(path) and (end > 0 or self.block.kind != "top")
                return marks[path[:end]].shared or (inside and self.is_alias(marks[path[:end]]))
        return False

    def is_alias(self, marks: Marks) -> bool:
        return self.line(marks.value.line).startswith("*", marks.value.column)

    def rewritten(self, path: Path, text: str) -> TextEdit:
        marks = self.block.marks[path]
        value = self.value(path, text, marks.flow)
        start, end = marks.value[:2], marks.value[2:]
        if start == end:
            return self.replace(marks.value, f" {value}" if isinstance(path[-1], str) else value)
        if start[0] != marks.key.end_line and isinstance(path[-1], str):
            colon = self.line(marks.key.end_line).index(":", marks.key.end_column) + 1
            comment = self.line(marks.key.end_line)[colon:]
            return self.replace(Span(marks.key.end_line, colon, *end), f" {value}{comment}")
        anchor = _ANCHOR.match(self.line(start[0]), start[1])
        return self.replace(Span(start[0], anchor.end() if anchor else start[1], *end), value)

    def rearranged(self, container: Path, gone: set[Path], new: dict[Path, str]) -> list[TextEdit]:
        """The edits that take entries out of one mapping or list and put others in."""
        siblings = self.children(container)
        found: list[TextEdit] = []
        if new and siblings and gone.issuperset(siblings):
            first, text = min(new.items(), key=lambda item: grammar.rank(item[0][-1:]))
            kept, gone = siblings[0], gone - {siblings[0]}
            marks = self.block.marks[kept]
            found.append(self.replace(_union(marks.key, marks.all), self.entry(first, text, marks.flow)))
            new = {path: other for path, other in new.items() if path != first}
            siblings = [kept, *(path for path in siblings if path in gone)]
        found += self.removals(siblings, gone)
        found += self.insertions(container, [path for path in siblings if path not in gone], new)
        return found

    # ---------------------------------------------------------------------------------------- removing

    def removals(self, siblings: list[Path], gone: set[Path]) -> list[TextEdit]:
        marks = self.block.marks
        found: list[TextEdit] = []
        index = 0
        while index < len(siblings):
            first = index
            while index < len(siblings) and siblings[index] in gone:
                index += 1
            if index == first:
                index += 1
                continue
            run = siblings[first:index]
            if not marks[run[0]].flow:
                after = siblings[index] if index < len(siblings) else None
                found += self.without_lines(run, after)
            elif index < len(siblings):
                found.append(self.replace(_between(marks[run[0]].all, marks[siblings[index]].all), ""))
            else:
                before = marks[siblings[first - 1]].all if first else None
                start = before[2:] if before else marks[run[0]].all[:2]
                found.append(self.replace(Span(*start, *marks[run[-1]].all[2:]), ""))
        return found

    def without_lines(self, run: list[Path], after: Path | None) -> list[TextEdit]:
        """The edits that remove entries of block style with their lines."""
        found: list[TextEdit] = []
        for path in run:
            whole = self.block.marks[path].all
            if after is not None and self.line(whole.line)[: whole.column].strip():
                # The first entry of an item: its dash stays, for the next one.
                return [self.replace(_between(whole, self.block.marks[after].all), "")]
            found.append(self.cut_lines(whole.line, whole.end_line))
        return found

    def cut_lines(self, first: int, last: int) -> TextEdit:
        """The removal of whole lines of the block."""
        base = self.block.first_line
        if last + 1 + base < len(self.lines):
            return TextEdit(Span(first + base, 0, last + 1 + base, 0), "")
        if first + base == 0:
            return TextEdit(Span(0, 0, last, len(self.lines[last])), "")
        return TextEdit(
            Span(
                first + base - 1, len(self.lines[first + base - 1]), last + base, len(self.lines[last + base])
            ),
            "",
        )

    def without(self, span: Span) -> TextEdit:
        """The removal of an entry that has no path of its own, with its line or its comma."""
        line, end_line = self.line(span.line), self.line(span.end_line)
        rest = end_line[span.end_column :]
        if not line[: span.column].strip() and (not rest.strip() or rest.lstrip().startswith("#")):
            return self.cut_lines(span.line, span.end_line)
        comma = re.match(r"\s*,\s*", rest)
        if comma:
            return self.replace(Span(*span[:3], span.end_column + comma.end()), "")
        before = re.search(r"\s*,\s*$", line[: span.column])
        return self.replace(Span(span.line, before.start() if before else span.column, *span[2:]), "")

    def without_block(self) -> TextEdit:
        """The removal of the whole block: its lines, or its entry where it stands in brackets."""
        marks = self.block.marks[()]
        first, last = self.line(marks.all.line), self.line(marks.all.end_line)
        if first[: marks.all.column].strip() or last[marks.all.end_column :].strip(" \t,}")[:1] not in (
            "",
            "#",
        ):
            return self.without(marks.all)
        if last[marks.all.end_column :].strip()[:1] in (",", "}"):
            return self.without(marks.all)
        end = marks.all.end_line
        following = end + 1
        while following + self.block.first_line < len(self.lines) and not self.line(following).strip():
            following += 1
        if following + self.block.first_line < len(self.lines) and self.line(following)[:1] in (" ", "\t"):
            end = following - 1
        return self.cut_lines(marks.all.line, end)

    # ------------------------------------------------------------------------------------------ adding

    def insertions(self, container: Path, siblings: list[Path], new: dict[Path, str]) -> list[TextEdit]:
        """The edits that add entries to one mapping or list, each in its place by the grammar."""
        if not new:
            return []
        grouped: dict[Path | None, list[Path]] = {}
        for path in sorted(new, key=lambda path: self.place(path)):
            before = [other for other in siblings if self.place(other) < self.place(path)]
            grouped.setdefault(before[-1] if before else None, []).append(path)
        return [self.insertion(container, siblings, before, paths, new) for before, paths in grouped.items()]

    def place(self, path: Path) -> int:
        """Where an entry stands among its neighbours."""
        last = path[-1]
        if isinstance(last, int):
            return last
        names = [row.path[-1] for row in grammar.children(self.block.kind, path[:-1])]
        return names.index(last) if last in names else len(names)

    def insertion(
        self,
        container: Path,
        siblings: list[Path],
        before: Path | None,
        paths: list[Path],
        new: dict[Path, str],
    ) -> TextEdit:
        marks = self.block.marks
        if not siblings:
            return self.into_empty(container, paths, new)
        flow = marks[siblings[0]].flow
        texts = [self.entry(path, new[path], flow) for path in paths]
        if flow:
            if before is not None:
                return self.replace(_end(marks[before].all), "".join(f", {text}" for text in texts))
            first = marks[siblings[0]].all
            return self.replace(_between(first, first), "".join(f"{text}, " for text in texts))
        item = isinstance(paths[0][-1], int)
        column = marks[siblings[0]].all.column if item else marks[siblings[0]].key.column
        lead = " " * column + ("- " if item else "")
        if before is None:
            start = marks[siblings[0]].all[:2]
            text = "".join(f"{text}{self.line_end}{' ' * column}" for text in texts)
            return self.replace(Span(*start, *start), text)
        line = marks[before].all.end_line
        end = len(self.line(line))
        return self.replace(
            Span(line, end, line, end), "".join(self.line_end + lead + text for text in texts)
        )

    def into_empty(self, container: Path, paths: list[Path], new: dict[Path, str]) -> TextEdit:
        """The edit that adds the first entries of a mapping or list."""
        if self.block.kind == "top" and not container:
            lines = "".join(f"{self.entry(path, new[path], False)}{self.line_end}" for path in paths)
            return self.replace(Span(0, 0, 0, 0), lines)
        marks = self.block.marks[container]
        text = self.line(marks.value.line)[marks.value.column :]
        if text[:1] in ("{", "["):
            inside = ", ".join(self.entry(path, new[path], True) for path in paths)
            at = Span(marks.value.line, marks.value.column + 1, marks.value.line, marks.value.column + 1)
            return self.replace(at, inside)
        if container and marks.flow:
            inside = ", ".join(self.entry(path, new[path], True) for path in paths)
            opening, closing = ("[", "]") if isinstance(paths[0][-1], int) else ("{", "}")
            return self.replace(marks.value, f" {opening}{inside}{closing}")
        lead = self.line_end + " " * (marks.key.column + 2)
        dash = "- " if isinstance(paths[0][-1], int) else ""
        line, end = marks.key.end_line, len(self.line(marks.key.end_line))
        lines = "".join(f"{lead}{dash}{self.entry(path, new[path], False)}" for path in paths)
        return self.replace(Span(line, end, line, end), lines)

    def accept(self, fields: dict[str, str]) -> tuple[TextEdit, ...]:
        marks = self.block.marks
        path: Path = ("accepted",)
        if self.is_shared((*path, 0)):
            return ()
        in_brackets = "{" + ", ".join(f"{key}: {as_yaml(text, True)}" for key, text in fields.items()) + "}"
        entries = [f"{key}: {as_yaml(text)}" for key, text in fields.items()]
        items = self.children(path)
        keys = self.children(())
        if items:
            last = marks[items[-1]]
            if last.flow:
                return (self.replace(_end(last.all), f", {in_brackets}"),)
            return (self.below(last.all.end_line, last.all.column, entries),)
        if path in marks:
            return self.change({path: f"[{in_brackets}]"})
        if not keys or marks[keys[0]].flow:
            return self.change({path: f"[{in_brackets}]"})
        before = [key for key in keys if self.place(key) < self.place(path)]
        column = marks[keys[0]].key.column
        line = marks[before[-1] if before else keys[-1]].all.end_line
        listed = self.below(line, column + 2, entries)
        return (TextEdit(listed.span, f"{self.line_end}{' ' * column}accepted:{listed.text}"),)

    def below(self, line: int, column: int, entries: list[str]) -> TextEdit:
        """A new item of a block list, with its dash in `column`, below a line."""
        end = len(self.line(line))
        lead = self.line_end + " " * column
        text = "".join(lead + ("  " if index else "- ") + entry for index, entry in enumerate(entries))
        return self.replace(Span(line, end, line, end), text)


def _union(first: Span, last: Span) -> Span:
    return Span(first.line, first.column, last.end_line, last.end_column)


def _between(first: Span, last: Span) -> Span:
    """From where one span starts to where another starts."""
    return Span(first.line, first.column, last.line, last.column)


def _end(span: Span) -> Span:
    """The empty span behind another."""
    return Span(span.end_line, span.end_column, span.end_line, span.end_column)
