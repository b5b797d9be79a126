"""A device: what it brings to the filters that name it."""

from __future__ import annotations

from bandwright.bandfile.values import Block, Document
from bandwright.faces.markdown import Part


def parts(document: Document, device: Block) -> list[Part]:
    """The keys that the device writes, and who uses it."""
    brings = [
        f"`{'.'.join(map(str, path))}` {setting.written}" for path, setting in device.own if setting.known
    ]
    users = [filter.name for _, filter in document.filters if filter.text("device") == device.name]
    used = f"Used by {', '.join(f'`{name}`' for name in users)}." if users else "No filter uses it."
    return [f"**{device.name}** brings {', '.join(brings) or 'nothing yet'}. {used}"]
