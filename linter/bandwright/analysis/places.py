"""From the places that hits name to spans of the document."""

from __future__ import annotations

from dataclasses import replace

from bandwright.bandfile.blocks import address, locate
from bandwright.bandfile.values import Document, Filter, Place, Span


def find_block(document: Document, name: str, own: int) -> int:
    """Index of the block that a place names (see `Place.block`), its own where there is no such block."""
    if name:
        for index, block in enumerate(document.blocks):
            if address(block) == name:
                return index
    return own


def span_of(document: Document, own: int, place: Place, filter: Filter | None) -> Span:
    """The smallest text of the document that the place means.

    A value that the filter has from its device is shown at its `device` key; one that nobody wrote, at
    the nearest entry around it that somebody did write, in the end the block's name.
    """
    index = find_block(document, place.block, own)
    if filter is not None and not place.block and _from_device(filter, place):
        place = replace(place, path=("device",), part="value")
    return locate(document, index, place)


def device_line(document: Document, place: Place, filter: Filter) -> tuple[Span, str] | None:
    """Where the device writes the value that a place means, with a few words; None for own values."""
    name = filter.text("device")
    if place.block or name is None or not _from_device(filter, place):
        return None
    device = find_block(document, f"devices/{name}", -1)
    if device < 0:
        return None
    return locate(document, device, replace(place, block="")), f"from `{name}`"


def _from_device(filter: Filter, place: Place) -> bool:
    setting = filter.get(*place.path)
    return setting is not None and setting.origin == "device"
