"""bandwright checks band files, the YAML files that hold the requirements of digital filters.

The public functions are loaded on first use, so that `import bandwright` costs next to nothing.
"""

from __future__ import annotations

from typing import TYPE_CHECKING

if TYPE_CHECKING:
    from bandwright.public import check as check
    from bandwright.public import forecast as forecast

__all__ = ["check", "forecast"]


def __getattr__(name: str) -> object:
    if name in __all__:
        from bandwright import public

        return getattr(public, name)
    raise AttributeError(f"module 'bandwright' has no attribute {name!r}")
