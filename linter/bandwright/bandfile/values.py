"""The values that the core works on: a filter and its settings, free of places in the text.

Two filters that say the same are equal, wherever they stand in the file, so an analysis is kept when
only places change. The value of a `Setting` is of the kind that `grammar.KEYS` names for its path:
a `Quantity`, an `int`, a `float`, a `str` (name, text, date), a tuple of those, or `UNKNOWN`.
"""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass, field
from enum import Enum
from typing import Final, Literal, NamedTuple

Path = tuple[str | int, ...]
"""Where a value stands in its block: `("bands", 1, "stop", "from")`; the block's name is not part of it."""


class Unknown(Enum):
    """The value of a setting that is written but can't be read."""

    UNKNOWN = "unknown"


UNKNOWN: Final = Unknown.UNKNOWN

Origin = Literal["own", "device", "default"]


@dataclass(frozen=True, slots=True)
class Quantity:
    """A number and its unit, as written: `Quantity(20.0, "Hz")`. The unit is one of `quantities.UNITS`."""

    number: float
    unit: str
    symmetric: bool = False
    """Written with a plus-minus sign, so the number is half of the peak-to-peak value."""


@dataclass(frozen=True, slots=True)
class Setting:
    """One value of a filter: what it says, how the user wrote it, and who said it."""

    value: object
    written: str
    origin: Origin = "own"

    @property
    def known(self) -> bool:
        return self.value is not UNKNOWN


@dataclass(frozen=True, slots=True)
class Filter:
    """A filter with its device's keys and the defaults laid under its own.

    `settings` holds every leaf of the grammar that is written, inherited or has a default, plus every
    place that is written but can't be read (value `UNKNOWN`), in the order of the grammar.
    """

    name: str
    settings: tuple[tuple[Path, Setting], ...]
    _index: Mapping[Path, Setting] = field(init=False, compare=False, repr=False, hash=False)
    _unknown: tuple[Path, ...] = field(init=False, compare=False, repr=False, hash=False)
    _hash: int = field(init=False, compare=False, repr=False, hash=False)
    """Computed once: an analysis is looked up at every keystroke."""

    def __post_init__(self) -> None:
        object.__setattr__(self, "_index", dict(self.settings))
        unknown = tuple(path for path, setting in self.settings if setting.value is UNKNOWN)
        object.__setattr__(self, "_unknown", unknown)
        object.__setattr__(self, "_hash", hash((self.name, self.settings)))

    def __hash__(self) -> int:
        return self._hash

    def __reduce__(self) -> tuple[type[Filter], tuple[object, ...]]:
        # Hashes of text differ from process to process.
        return Filter, (self.name, self.settings)

    def get(self, *path: str | int) -> Setting | None:
        """The setting at this path, or None where nothing is said."""
        return self._index.get(path)

    def is_unknown(self, *path: str | int) -> bool:
        """Whether the value at `path`, a container of it, or anything inside it is written but unreadable."""
        return any(
            unknown[: len(path)] == path or path[: len(unknown)] == unknown for unknown in self._unknown
        )

    def quantity(self, *path: str | int) -> Quantity | None:
        """The quantity at this path, or None where it is absent or unknown."""
        setting = self._index.get(path)
        return setting.value if setting is not None and isinstance(setting.value, Quantity) else None

    def text(self, *path: str | int) -> str | None:
        """The name or text at this path, or None where it is absent or unknown."""
        setting = self._index.get(path)
        return setting.value if setting is not None and isinstance(setting.value, str) else None

    def count(self, *path: str | int) -> int | None:
        """The whole number at this path, or None where it is absent or unknown."""
        setting = self._index.get(path)
        return setting.value if setting is not None and isinstance(setting.value, int) else None

    def names(self, *path: str | int) -> tuple[str, ...] | None:
        """The names at this path (one name is a list of one), or None where absent or unknown."""
        setting = self._index.get(path)
        return setting.value if setting is not None and isinstance(setting.value, tuple) else None

    def band_kinds(self) -> Iterator[tuple[int, str]]:
        """Index and kind (`pass`, `stop`, `bounds`) of every band item that can be told apart."""
        seen: set[int] = set()
        for path, _ in self.settings:
            if len(path) > 2 and path[0] == "bands" and isinstance(path[1], int) and path[1] not in seen:
                seen.add(path[1])
                yield path[1], str(path[2])


class Span(NamedTuple):
    """A stretch of text, in code points, lines and columns from 0, the end exclusive."""

    line: int
    column: int
    end_line: int
    end_column: int


@dataclass(frozen=True, slots=True)
class Place:
    """What a finding points at: a path inside a block, or a span of it where nothing has a path."""

    path: Path
    part: Literal["key", "value", "all"] = "value"
    block: str = ""
    """"" for the block of the filter itself, else `devices/NAME`, `filters/NAME`, or `/` (top level)."""
    span: Span | None = None
    """From the first line of the block, for text that has no path (a tab, a stray line)."""


@dataclass(frozen=True, slots=True)
class Fault:
    """What the reader could not take, as the id of the finding that reports it, with its facts.

    `facts` are the words and numbers that the finding's sentence quotes, `form` which of its sentences.
    """

    id: str
    place: Place
    facts: tuple[tuple[str, str], ...] = ()
    form: str = ""
    mends: tuple[Mend, ...] = ()
    related: tuple[Place, ...] = ()
    """Other places that the fault has to do with, such as the first of two equal keys."""


@dataclass(frozen=True, slots=True)
class Mend:
    """A correction that the reader can name itself: another spelling of a value or a key, or its removal."""

    path: Path
    text: str | None
    """The new text of the value (or of the key, where `part` is `key`); None removes the entry."""
    part: Literal["key", "value"] = "value"
    reading: str = ""
    """What the corrected text means, for the title: "a frequency, 0.01 pi at 4 kHz"."""
    span: Span | None = None
    """Replace this stretch of the block by `text` instead, for text that has no path."""


@dataclass(frozen=True, slots=True)
class Marks:
    """Where an entry stands, from the first line of its block: its key, its value, and both."""

    key: Span
    value: Span
    all: Span
    flow: bool = False
    """Inside brackets, so that neighbours are parted by commas."""
    shared: bool = False
    """Stands behind an alias: the marks are the alias's, and an edit here would change other places."""


@dataclass(frozen=True, slots=True)
class Block:
    """A piece of the file that is read by itself: one device, one filter, or the top level around them."""

    kind: Literal["device", "filter", "top"]
    name: str
    text: str
    first_line: int
    marks: Mapping[Path, Marks]
    own: tuple[tuple[Path, Setting], ...]
    """The settings that this block itself writes, before devices and defaults are laid under them."""
    faults: tuple[Fault, ...]
    whole: bool = True
    """False where text had to be mended to be read, so that its last good forecast stays on display."""


@dataclass(frozen=True, slots=True)
class Document:
    """A band file as read: its blocks in order and, beside each filter block, the resolved filter."""

    text: str
    blocks: tuple[Block, ...]
    filters: tuple[tuple[int, Filter], ...]
    """(index into `blocks`, filter), in the order of the file."""
    format: str | None = None
    parsed: Mapping[tuple[str, str], Block] = field(default_factory=dict, compare=False, repr=False)
    """Blocks by kind and text, to be reused by the next reading."""
    resolved: Mapping[tuple[str, str], Resolved] = field(default_factory=dict, compare=False, repr=False)
    """Filters by their own text and their device's, to be reused by the next reading."""


class Resolved(NamedTuple):
    """A filter with its device's keys and the defaults laid under it, and what is wrong with that."""

    filter: Filter
    faults: tuple[Fault, ...]


@dataclass(frozen=True, slots=True)
class TextEdit:
    """Replace `span` of the document (code points, from 0) by `text`."""

    span: Span
    text: str
