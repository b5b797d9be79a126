"""`bandwright schema`: print a JSON Schema, of the band file or of an output."""

from __future__ import annotations

import json
from argparse import Namespace

from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import Parser, one_of


def configure(parser: Parser) -> None:
    """Declare the options."""
    parser.add_argument(
        "name",
        metavar="NAME",
        type=one_of("band-file", "check", "forecast"),
        nargs="?",
        default="band-file",
        help="band-file (default), or check or forecast for what these print with `--as json`",
    )


def run(arguments: Namespace) -> int:
    """Print the schema."""
    if arguments.name == "band-file":
        from bandwright.bandfile.schema import schema_text

        terminal.show(schema_text().rstrip("\n"))
    else:
        from bandwright.faces.command.formats.schemas import schema

        terminal.show(json.dumps(schema(arguments.name), indent=2))
    return 0
