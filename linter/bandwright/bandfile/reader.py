"""Reads a band file: any text gives a document, with a fault for whatever it could not take.

`read` cuts the text into blocks, reads each by the table in `grammar`, and lays a device's keys and the
defaults under the keys of each filter.
"""

from __future__ import annotations

import re
from typing import Final, NamedTuple

from bandwright import limits
from bandwright.bandfile import blocks, grammar
from bandwright.bandfile.block_reader import BlockReader, is_empty, union
from bandwright.bandfile.nodes import Entry, Lost, Mapping, Node, Scalar, Sequence, Tree, resolved
from bandwright.bandfile.resolve import linked, with_faults
from bandwright.bandfile.values import Block, Document, Fault, Marks, Mend, Path, Place, Span

# ---------------------------------------------------------------------------------------------- decoding


class Decoded(NamedTuple):
    """A file's text without its byte-order mark, whether it had one, and the fault of bytes not UTF-8."""

    text: str
    bom: bool
    fault: Fault | None


def decode(data: bytes) -> Decoded:
    """The text of a file. Bytes that are not UTF-8 read as U+FFFD, with a fault at the first one."""
    for mark, form in ((b"\xff\xfe\0\0", "utf-32"), (b"\xff\xfe", "utf-16"), (b"\xfe\xff", "utf-16")):
        if data.startswith(mark):
            text = data.decode(form, "replace").removeprefix("\ufeff")
            facts = (("byte", f"0x{data[0]:02X}"), ("offset", "0"))
            return Decoded(
                text, True, Fault("syntax/not-utf-8", Place((), span=Span(0, 0, 0, 0)), facts, form)
            )
    bom = data.startswith(b"\xef\xbb\xbf")
    data = data[3:] if bom else data
    try:
        return Decoded(data.decode("utf-8"), bom, None)
    except UnicodeDecodeError as error:
        before = blocks.with_line_feeds(data[: error.start].decode("utf-8", "replace"))
        line, column = before.count("\n"), len(before) - (before.rfind("\n") + 1)
        facts = (("byte", f"0x{data[error.start]:02X}"), ("offset", str(error.start + 3 * bom)))
        place = Place((), span=Span(line, column, line, column + 1))
        return Decoded(data.decode("utf-8", "replace"), bom, Fault("syntax/not-utf-8", place, facts, "byte"))


# ------------------------------------------------------------------------------------------- the document


def read(text: str, before: Document | None = None, fault: Fault | None = None) -> Document:
    """The document that a text writes. It never raises.

    `before` is an earlier reading whose unchanged blocks are used again; the result is the same without.
    `fault` is one that decoding found; it is reported with the top level.
    """
    extra = () if fault is None else (fault,)
    if len(text) * 4 > limits.MAX_FILE_BYTES:
        size = len(text.encode("utf-8", "surrogatepass"))
        if size > limits.MAX_FILE_BYTES:
            facts = (("bytes", str(size)), ("maximum", str(limits.MAX_FILE_BYTES)))
            large = Fault("syntax/too-large", Place((), span=Span(0, 0, 0, 0)), facts)
            return Document(text, (Block("top", "", "", 0, {}, (), (*extra, large), False),), ())
    body = text.removeprefix("\ufeff")
    layout = blocks.with_line_feeds(body)
    if blocks.reads_whole(layout):
        return _read_whole(text, body, extra)
    cached = before.parsed if before is not None else {}
    parsed: dict[tuple[str, str], Block] = {}
    found: list[tuple[Block, bool]] = []
    around: list[str] = []
    pieces = blocks.cut(layout)
    index = 0
    while index < len(pieces):
        piece = pieces[index]
        index += 1
        own_text = body[piece.start : piece.end]
        if piece.kind == "top":
            around.append(layout[piece.start : piece.end])
            continue
        key = (piece.kind, own_text)
        block = cached.get(key) or parsed.get(key) or _read_block(*key)
        parsed[key] = block
        if not block.whole and (joined := _joined(body, layout, pieces, index - 1)):
            index, own_text = joined
            key = (piece.kind, own_text)
            block = parsed[key] = cached.get(key) or _read_block(*key)
        around.append("\n" * blocks.with_line_feeds(own_text).count("\n"))
        found.append((_at_line(block, piece.first_line), piece.indent != piece.usual))
    top_text = "".join(around)
    top = cached.get(("top", top_text))
    if top is None:
        tree = blocks.parse(top_text, top=True)
        if _holds_blocks(tree):
            return _read_whole(text, body, extra)
        top = _read_top(top_text, tree)
    parsed["top", top_text] = top
    if extra:
        top = with_faults(top, extra)
    return linked(text, top, found, parsed, before)


def _at_line(block: Block, line: int) -> Block:
    if line == block.first_line:
        return block
    return Block(block.kind, block.name, block.text, line, block.marks, block.own, block.faults, block.whole)


def _joined(body: str, layout: str, pieces: list[blocks.Piece], index: int) -> tuple[int, str] | None:
    """A block whose quote or bracket ends in a later piece, with the index of the piece after it."""
    start = pieces[index].start
    if not blocks.opens_at_end(layout[start : pieces[index].end]):
        return None
    for last in range(index + 1, min(index + 1 + limits.MAX_PARSE_REPAIRS, len(pieces))):
        text = body[start : pieces[last].end]
        tree = blocks.parse_whole(text)
        if tree is not None and isinstance(tree.root, Mapping) and len(tree.root.entries) == 1:
            return last + 1, text
    return None


def _holds_blocks(tree: Tree) -> bool:
    """Whether devices or filters stand in the tree of the top level, because they could not be cut out."""
    if not isinstance(tree.root, Mapping):
        return False
    return any(
        isinstance(entry.key, Scalar)
        and entry.key.text in blocks.SECTIONS
        and isinstance(entry.value, Mapping)
        for entry in tree.root.entries
    )


def _read_top(text: str, tree: Tree) -> Block:
    """The top level: the format, and what stands beside the devices and filters."""
    reader = BlockReader("top", text)
    faults = list(tree.faults)
    if isinstance(tree.root, Mapping):
        reader.mark((), tree.root.span, tree.root.span, tree.root.span, False, None)
        _top_keys(reader, tree.root)
    elif (isinstance(tree.root, Scalar) and not is_empty(tree.root)) or isinstance(tree.root, Sequence):
        kind = "list" if isinstance(tree.root, Sequence) else "text"
        span = tree.root.span
        line_end = Span(
            span.line,
            span.column,
            span.line,
            max(span.column, span.end_column * (span.line == span.end_line)),
        )
        faults.append(Fault("syntax/not-yaml", Place((), span=line_end), (("found", kind),), "not-a-mapping"))
    elif not isinstance(tree.root, Lost):
        _top_keys(reader, Mapping([], Span(0, 0, 0, 0)))
    return Block(
        "top", "", text, 0, reader.marks, tuple(reader.own.items()), (*faults, *reader.faults), tree.whole
    )


def _top_keys(reader: BlockReader, root: Mapping) -> None:
    known = grammar.INSIDE["top"][()]
    seen: dict[str, Entry] = {}
    for entry in root.entries:
        key = resolved(entry.key)
        if not isinstance(key, Scalar):
            if not isinstance(key, Lost):
                place = Place((), span=entry.key.span)
                reader.fault("key/wrong-kind", place, (("where", "top"),), "key-not-text")
            continue
        name = key.text
        path: Path = (name,)
        if name in seen:
            reader.duplicate((), name, entry, seen[name])
            continue
        seen[name] = entry
        reader.mark(
            path, entry.key.span, entry.value.span, union(entry.key.span, entry.value.span), root.flow, None
        )
    for name in seen:
        if name not in known:
            reader.unknown_key((), name, known, seen, root.lossy)
    lossy = root.lossy or reader.is_lost(("format",))
    if "format" in seen:
        _format(reader, seen["format"])
    elif not lossy:
        facts = (("known", grammar.FORMAT),)
        reader.fault("key/format-missing", Place(()), facts, mends=(Mend(("format",), grammar.FORMAT),))
    for name in blocks.SECTIONS:
        value = resolved(seen[name].value) if name in seen else None
        if isinstance(value, Sequence) or (isinstance(value, Scalar) and not is_empty(value)):
            reader.wrong_kind("mapping-wanted", known[name], (name,), seen[name].value)
        elif value is None and known[name].required and not root.lossy and not reader.is_lost((name,)):
            reader.missing((), name)


def _format(reader: BlockReader, entry: Entry) -> None:
    path: Path = ("format",)
    value = resolved(entry.value)
    row = grammar.ROWS["top"][("format",)]
    if isinstance(value, Lost):
        reader.lose(path, entry.value)
    elif not isinstance(value, Scalar):
        reader.wrong_kind("text-wanted", row, path, entry.value)
    elif is_empty(value):
        reader.wrong_kind("empty", row, path, entry.value)
    else:
        reader.say(path, value.text, value.text)
        if value.text != grammar.FORMAT:
            facts = (("written", value.text), ("known", grammar.FORMAT))
            reader.fault("key/format-unknown", Place(path), facts, mends=(Mend(path, grammar.FORMAT),))


def _read_whole(text: str, body: str, extra: tuple[Fault, ...]) -> Document:
    """A document that can't be cut: read in one, then divided into blocks all the same."""
    tree = blocks.parse(body, top=True)
    lines = _LINE_ENDS.split(body)
    starts: list[tuple[int, blocks.Kind, Entry]] = []
    if isinstance(tree.root, Mapping):
        for section in tree.root.entries:
            key, value = resolved(section.key), resolved(section.value)
            if isinstance(key, Scalar) and key.text in blocks.SECTIONS and isinstance(value, Mapping):
                kind = blocks.SECTIONS[key.text]
                starts.extend((entry.key.span.line, kind, entry) for entry in value.entries)
    starts.sort(key=lambda start: start[0])
    by_line: dict[int, list[Fault]] = {}
    for fault in tree.faults:
        by_line.setdefault(fault.place.span.line if fault.place.span else 0, []).append(fault)
    found: list[tuple[Block, bool]] = []
    for line, kind, entry in starts:
        end = max(line, entry.value.span.end_line) + 1
        reader = BlockReader("device" if kind == "device" else "filter", "".join(lines[line:end]), line)
        name = reader.block(entry)
        inside = [fault for number in range(line, end) for fault in by_line.pop(number, ())]
        faults = (*inside, *reader.faults)
        block = Block(kind, name, reader.text, 0, reader.marks, tuple(reader.own.items()), faults, not inside)
        found.append((_moved(block, line), False))
    faults = tuple(fault for others in by_line.values() for fault in others)
    top = _read_top(body, Tree(_hollow(tree.root), faults, not faults))
    return linked(text, with_faults(top, extra) if extra else top, found, {}, None)


_LINE_ENDS: Final = re.compile(r"(?<=\n)|(?<=\r)(?!\n)")


def _hollow(root: Node | None) -> Node | None:
    """The root without what its sections hold."""
    if not isinstance(root, Mapping):
        return root
    entries = []
    for entry in root.entries:
        value = resolved(entry.value)
        section = isinstance(entry.key, Scalar) and entry.key.text in blocks.SECTIONS
        hollow = Scalar("", entry.value.span) if section and isinstance(value, Mapping) else entry.value
        entries.append(Entry(entry.key, hollow))
    return root._replace(entries=entries)


def _moved(block: Block, line: int) -> Block:
    """The block with spans that count from `line`, where it starts in the document."""

    def span(old: Span) -> Span:
        return Span(old.line - line, old.column, old.end_line - line, old.end_column)

    def place(old: Place) -> Place:
        return old if old.span is None else Place(old.path, old.part, old.block, span(old.span))

    marks = {
        path: Marks(span(m.key), span(m.value), span(m.all), m.flow, m.shared)
        for path, m in block.marks.items()
    }
    faults = tuple(
        Fault(
            fault.id,
            place(fault.place),
            fault.facts,
            fault.form,
            tuple(
                Mend(m.path, m.text, m.part, m.reading, span(m.span) if m.span else None) for m in fault.mends
            ),
            tuple(place(related) for related in fault.related),
        )
        for fault in block.faults
    )
    return Block(block.kind, block.name, block.text, line, marks, block.own, faults, block.whole)


def _read_block(kind: blocks.Kind, text: str) -> Block:
    """A device or filter from its own text, as if it began the file."""
    tree = blocks.parse(text)
    reader = BlockReader("device" if kind == "device" else "filter", text)
    whole = tree.whole
    if isinstance(tree.root, Mapping) and tree.root.entries:
        name = reader.block(tree.root.entries[0])
    else:
        name, whole = _read_stray(reader, tree, text), False
    return Block(
        kind, name, text, 0, reader.marks, tuple(reader.own.items()), (*tree.faults, *reader.faults), whole
    )


def _read_stray(reader: BlockReader, tree: Tree, text: str) -> str:
    """A line in the place of a name that is none, such as a name being typed; gives what it says."""
    first = blocks.with_line_feeds(text).split("\n")[0]
    start = len(first) - len(first.lstrip())
    span = Span(0, start, 0, max(start, len(first.rstrip())))
    if not tree.faults:
        reader.fault("syntax/not-yaml", Place((), span=span), (("written", first.strip()),), "no-colon")
    reader.mark((), span, span, span, False, None)
    reader.lose(())
    return first.strip()
