"""Elements of SVG as text."""

from __future__ import annotations


def number(value: float) -> str:
    """A coordinate with one decimal at most; nobody sees a twentieth of a pixel."""
    text = f"{value:.1f}".removesuffix(".0")
    return "0" if text == "-0" else text


def escaped(text: str) -> str:
    """Text that can stand in an element or an attribute; what XML can't hold or nobody sees is left out."""
    visible = "".join(sign for sign in text if sign.isprintable())
    return visible.replace("&", "&amp;").replace("<", "&lt;").replace(">", "&gt;").replace('"', "&quot;")


def element(name: str, content: str = "", **attributes: str | float) -> str:
    """An element; `content` is markup. Names of attributes: `class_` for class, `_` for each hyphen."""
    written = "".join(
        f' {key.rstrip("_").replace("_", "-")}="{value if isinstance(value, str) else number(value)}"'
        for key, value in attributes.items()
    )
    return f"<{name}{written}>{content}</{name}>" if content else f"<{name}{written}/>"


def line(kind: str, x1: float, y1: float, x2: float, y2: float) -> str:
    """A straight line of a class."""
    return element("line", class_=kind, x1=x1, y1=y1, x2=x2, y2=y2)


def rectangle(kind: str, left: float, top: float, right: float, bottom: float) -> str:
    """A rectangle of a class."""
    return element("rect", class_=kind, x=left, y=top, width=right - left, height=bottom - top)
