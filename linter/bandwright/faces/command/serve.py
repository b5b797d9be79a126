"""`bandwright serve`: the language server."""

from __future__ import annotations

from argparse import Namespace

from bandwright.faces.command.arguments import Parser, date


def configure(parser: Parser) -> None:
    """Declare the options."""
    parser.add_argument(
        "--tcp",
        metavar="HOST:PORT",
        help="listen on this loopback address, not on standard input and output, for debugging",
    )
    parser.add_argument(
        "--today",
        metavar="DATE",
        type=date,
        help="the day on which accepted findings are judged (default: the day it is, UTC)",
    )


def run(arguments: Namespace) -> int:
    """Serve until the client ends; the exit status that the protocol asks for."""
    from bandwright.faces.server.main import serve

    return serve(tcp=arguments.tcp, today=arguments.today)
