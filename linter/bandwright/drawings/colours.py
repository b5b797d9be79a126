"""The palette of the plots, light and dark, and the style sheet made from it.

A family has its own colour, and besides it its own marker: in grey, on paper and to a colour-blind reader
the markers, the weight of the line and the label on it tell the families apart.
"""

from __future__ import annotations

from collections.abc import Mapping

LIGHT: Mapping[str, str] = {
    "ground": "#fcfbf7",
    "ink": "#1c2430",
    "quiet": "#4a5361",
    "frame": "#59616d",
    "grid": "#e6e3d9",
    "hatch": "#a3937c",
    "limit": "#6b5a45",
    "butterworth": "#0b6e69",
    "chebyshev-1": "#b0431e",
    "chebyshev-2": "#7a3e9d",
    "elliptic": "#1d3f8f",
    "equiripple": "#5c6b00",
    "other": "#8a2f5b",
}
DARK: Mapping[str, str] = {
    "ground": "#12161d",
    "ink": "#eceae2",
    "quiet": "#b9bdc4",
    "frame": "#8d949f",
    "grid": "#262c36",
    "hatch": "#7a705f",
    "limit": "#b5a68d",
    "butterworth": "#4fc7bd",
    "chebyshev-1": "#f39a6d",
    "chebyshev-2": "#c79bee",
    "elliptic": "#86aef5",
    "equiripple": "#c3cc55",
    "other": "#ef8fb8",
}
"""Role -> colour. `ink` and `quiet` are text; all others but `ground`, `grid` and `hatch` are lines."""

NOT_CURVES = ("ground", "ink", "quiet", "frame", "grid", "hatch", "limit")

FONT = 'system-ui,"Segoe UI",Roboto,"Helvetica Neue",Arial,sans-serif'

HATCH = "bandwright-hatch"
"""The id of the pattern of forbidden areas."""

_WEIGHTS = (
    f"text{{font-family:{FONT}}}.strong{{font-weight:600}}"
    ".frame,.curve,.hatch,.grid,.edge,.ring{fill:none}"
    f".limit{{fill:url(#{HATCH});stroke-width:1.4}}.edge{{stroke-width:.8}}"
    ".frame,.grid,.hatch,.leader{stroke-width:1}.ring{stroke-width:2}.mark{stroke-width:1.5}"
    ".curve{stroke-width:1.5;stroke-linejoin:round;stroke-linecap:round}.chosen{stroke-width:3}"
)


def role(family: str) -> str:
    """The role whose colour the curve of a family has."""
    return family if family in LIGHT and family not in NOT_CURVES else "other"


def style_sheet() -> str:
    """CSS: light, and dark where a screen asks for it. Every rule stays inside `.bandwright-plot`."""
    dark = _rules(DARK)
    return (
        f"{_scoped(_WEIGHTS + _rules(LIGHT))}@media screen and (prefers-color-scheme:dark){{{_scoped(dark)}}}"
    )


def _rules(colours: Mapping[str, str]) -> str:
    ground, ink, frame = colours["ground"], colours["ink"], colours["frame"]
    fixed = (
        f".ground,.plate{{fill:{ground}}}.ink{{fill:{ink}}}.quiet{{fill:{colours['quiet']}}}"
        f".frame,.edge,.leader{{stroke:{frame}}}.grid{{stroke:{colours['grid']}}}"
        f".hatch{{stroke:{colours['hatch']}}}.limit,.ring{{stroke:{colours['limit']}}}"
        f".mark{{fill:{ground}}}"
    )
    curves = "".join(
        f".{name}{{stroke:{colour}}}" for name, colour in colours.items() if name not in NOT_CURVES
    )
    return fixed + curves


def _scoped(rules: str) -> str:
    parts = [rule.partition("{") for rule in rules.split("}") if rule]
    return "".join(
        ",".join(f".bandwright-plot {name}" for name in names.split(",")) + "{" + body + "}"
        for names, _, body in parts
    )
