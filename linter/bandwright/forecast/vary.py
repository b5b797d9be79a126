"""A filter with one value changed, to see what the change would bring."""

from __future__ import annotations

from bandwright.bandfile import quantities
from bandwright.bandfile.values import Filter, Path, Quantity, Setting


def varied(filter: Filter, path: Path, value: Quantity) -> Filter:
    """The same filter with another quantity at `path`, which must be a place that says something."""
    setting = Setting(value, quantities.show_quantity(value))
    return Filter(filter.name, tuple((at, setting if at == path else old) for at, old in filter.settings))
