"""Markers: each family has its own shape."""

from __future__ import annotations

from bandwright.drawings.colours import role
from bandwright.drawings.svg import element, number

SIZE = 4.0
"""Half of a marker's height, in pixels."""

_CORNERS: dict[str, tuple[tuple[float, float], ...]] = {
    "butterworth": ((-0.9, -0.9), (0.9, -0.9), (0.9, 0.9), (-0.9, 0.9)),
    "chebyshev-1": ((0.0, -1.2), (1.1, 0.8), (-1.1, 0.8)),
    "chebyshev-2": ((0.0, 1.2), (1.1, -0.8), (-1.1, -0.8)),
    "equiripple": ((0.0, -1.3), (1.3, 0.0), (0.0, 1.3), (-1.3, 0.0)),
    "other": ((-1.0, -1.2), (1.0, -1.2), (0.0, 0.0), (1.0, 1.2), (-1.0, 1.2), (0.0, 0.0)),
}
"""Corners in half heights, y downward; a family without any has a circle."""


def mark(family: str, x: float, y: float) -> str:
    """The marker of a family at a place in pixels."""
    kind = role(family)
    corners = _CORNERS.get(kind)
    if corners is None:
        return element("circle", class_=f"mark {kind}", cx=x, cy=y, r=SIZE)
    points = " ".join(f"{number(x + SIZE * dx)},{number(y + SIZE * dy)}" for dx, dy in corners)
    return element("polygon", class_=f"mark {kind}", points=points)
