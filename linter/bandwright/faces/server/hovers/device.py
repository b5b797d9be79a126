"""A device: what it brings to the filters that name it."""

from __future__ import annotations

from collections.abc import Iterable

from bandwright.bandfile.values import Block, Document, Path, Setting
from bandwright.faces.markdown import Part


def parts(document: Document, device: Block) -> list[Part]:
    """The keys that the device writes, and who uses it."""
    brings = [
        f"`{'.'.join(map(str, path))}` {setting.written}" for path, setting in device.own if setting.known
    ]
    users = [filter.name for _, filter in document.filters if filter.text("device") == device.name]
    used = f"Used by {', '.join(f'`{name}`' for name in users)}." if users else "No filter uses it."
    return [f"**{device.name}** brings {', '.join(brings) or 'nothing yet'}. {used}"]


BROUGHT = ("sample_rate", "arithmetic", "structure")
"""The keys of a device that are worth a look at each filter."""


def at_a_glance(settings: Iterable[tuple[Path, Setting]]) -> str:
    """The chief ones of these settings of a device: "4 kHz, q31, cascade or symmetric"."""
    whole = ((), ("coefficients",))
    written = {path[0]: one.written for path, one in settings if one.known and path[:1] and path[1:] in whole}
    return ", ".join(written[key].replace(", ", " or ") for key in BROUGHT if key in written)
