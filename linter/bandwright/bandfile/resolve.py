"""What blocks have to do with each other: names looked up, devices and defaults laid under filters."""

from __future__ import annotations

from typing import Final

from bandwright.bandfile import grammar, quantities
from bandwright.bandfile.grammar import nearest
from bandwright.bandfile.values import (
    UNKNOWN,
    Block,
    Document,
    Fault,
    Filter,
    Mend,
    Origin,
    Path,
    Place,
    Quantity,
    Resolved,
    Setting,
    Span,
)

_NAMES_LISTED: Final = 12
"""As many devices a message can name."""


def linked(
    text: str,
    top: Block,
    found: list[tuple[Block, bool]],
    parsed: dict[tuple[str, str], Block],
    before: Document | None,
) -> Document:
    """The document of these blocks: names looked up, devices and defaults laid under the filters."""
    faults: list[list[Fault]] = [[] for _ in found]
    devices: dict[str, Block | None] = {}
    first: dict[tuple[str, str], Block] = {}
    for index, (block, ill_indented) in enumerate(found):
        if ill_indented and block.whole:
            faults[index].append(_ill_indented(block, found))
        named = (block.kind, block.name)
        if named in first:
            facts = (("name", block.name), ("kind", block.kind))
            other = Place((), "key", block="", span=_from_block(first[named], block))
            faults[index].append(Fault("key/duplicate-name", Place((), "key"), facts, related=(other,)))
        first.setdefault(named, block)
        if block.kind == "device":
            devices[block.name] = None if block.name in devices else block
    known = before.resolved if before is not None else {}
    kept: dict[tuple[str, str], Resolved] = {}
    filters: list[tuple[int, Filter]] = []
    used: set[str] | None = set()
    for index, (block, _) in enumerate(found):
        if block.kind != "filter":
            continue
        asked = _device_of(block)
        if asked is UNKNOWN:
            used = None
        device = devices.get(asked) if isinstance(asked, str) else None
        if isinstance(asked, str) and asked not in devices:
            faults[index].append(_unknown_device(asked, devices))
            if used is not None:
                used.update(near for near in [nearest(asked, devices)] if near)
        elif isinstance(asked, str) and used is not None:
            used.add(asked)
        key = (block.text, device.text if device is not None else "" if asked is None else "?")
        result = (known.get(key) or kept.get(key)) if parsed else None
        if result is None:
            result = _resolve(block, device, asked is not None and device is None)
        kept[key] = result
        filters.append((index + 1, result.filter))
        faults[index].extend(result.faults)
    for index, (block, _) in enumerate(found):
        if block.kind == "device" and used is not None and block.name and block.name not in used:
            unused = Fault(
                "key/unused-device", Place((), "key"), (("device", block.name),), mends=(Mend((), None),)
            )
            faults[index].append(unused)
    every = [
        with_faults(block, tuple(more)) if more else block
        for (block, _), more in zip(found, faults, strict=True)
    ]
    version = next((s.value for path, s in top.own if path == ("format",) and isinstance(s.value, str)), None)
    return Document(text, (top, *every), tuple(filters), version, parsed, kept)


def _from_block(target: Block, block: Block) -> Span:
    """The span of the target's name, counted from the first line of `block`."""
    span = target.marks[()].key
    shift = target.first_line - block.first_line
    return Span(span.line + shift, span.column, span.end_line + shift, span.end_column)


def _ill_indented(block: Block, found: list[tuple[Block, bool]]) -> Fault:
    usual = next(other.marks[()].key.column for other, ill in found if not ill and other.kind == block.kind)
    span = block.marks[()].key
    facts = (("written", block.name), ("column", str(span.column)), ("expected", str(usual)))
    return Fault("syntax/not-yaml", Place((), span=span), facts, "indent")


def _device_of(block: Block) -> object | None:
    """What the filter gives as its device: a name, UNKNOWN, or None."""
    for path, setting in block.own:
        if path == ("device",) or path == ():
            return setting.value
    return None


def _unknown_device(asked: str, devices: dict[str, Block | None]) -> Fault:
    place = Place(("device",))
    if not devices:
        return Fault(
            "key/unknown-device", place, (("written", asked),), "no-devices", (Mend(("device",), None),)
        )
    near = nearest(asked, devices)
    names = tuple(devices)[:_NAMES_LISTED]
    facts = (("written", asked), *((("nearest", near),) if near else ()), ("names", ", ".join(names)))
    return Fault(
        "key/unknown-device",
        place,
        facts,
        mends=tuple(Mend(("device",), name) for name in ((near,) if near else names)),
    )


def _resolve(block: Block, device: Block | None, device_unknown: bool) -> Resolved:
    """The filter of a block with its device's keys, then the defaults, under its own."""
    settings = dict(block.own)
    if () in settings:
        return Resolved(Filter(block.name, (((), settings[()]),)), ())
    device_own = dict(device.own) if device is not None else {}
    if device_unknown:
        name = settings.get(("device",))
        settings[("device",)] = Setting(UNKNOWN, name.written if name else "")
    if device_unknown or () in device_own:
        device_own = {(row.path[0],): Setting(UNKNOWN, "") for row in grammar.children("device", ())}
    own_roots = {path[0] for path in settings}
    for path, setting in device_own.items():
        if path[0] not in grammar.MERGED:
            if path[0] not in own_roots:
                _lay(settings, path, setting, "device")
        elif len(path) == 1:
            if path not in settings:
                for leaf in grammar.leaves("device", path):
                    if leaf not in settings:
                        _lay(settings, leaf, setting, "device")
        elif path not in settings and path[:1] not in settings:
            _lay(settings, path, setting, "device")
    for row in grammar.KEYS:
        if row.default is None or "filter" not in row.where or row.path in settings:
            continue
        merged = len(row.path) == 2 and row.path[0] in grammar.MERGED and row.path[:1] not in settings
        if len(row.path) == 1 or merged:
            settings[row.path] = Setting(row.default, str(row.default), "default")
    ordered = tuple(sorted(settings.items(), key=lambda item: grammar.rank(item[0])))
    requirement = Filter(block.name, ordered)
    return Resolved(requirement, _rate_missing(requirement, block))


def _lay(settings: dict[Path, Setting], path: Path, setting: Setting, origin: Origin) -> None:
    settings[path] = Setting(setting.value, setting.written, origin)


def _rate_missing(requirement: Filter, block: Block) -> tuple[Fault, ...]:
    """The fault of a filter with an edge in Hz and no sample rate."""
    if requirement.get("sample_rate") is not None:
        return ()
    for path, setting in requirement.settings:
        if path[0] == "bands" and path[-1] in ("from", "to", "at"):
            quantity = setting.value
            if isinstance(quantity, Quantity) and quantities.radians(quantity) is None:
                facts = (("key", "sample_rate"), ("where", "filter"))
                return (Fault("key/missing-key", Place((), "key"), facts),)
    return ()


def with_faults(block: Block, faults: tuple[Fault, ...]) -> Block:
    every = (*block.faults, *faults)
    return Block(
        block.kind, block.name, block.text, block.first_line, block.marks, block.own, every, block.whole
    )
