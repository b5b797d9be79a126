"""The program `bandwright`: finds the command that is asked for and runs it, loading nothing else."""

from __future__ import annotations

import os
import sys
from collections.abc import Sequence
from importlib import import_module

from bandwright.faces.command import terminal
from bandwright.faces.command.arguments import CAUTION, Parser
from bandwright.faces.command.error import CommandError
from bandwright.faces.command.suggestion import suggestion

COMMANDS = {
    "check": "Report what is wrong, or needlessly dear, in band files.",
    "forecast": "Show what each family of filters would take to meet a mask.",
    "fix": "Apply the remedies that change no requirement.",
    "guide": "Print the page of a finding or a family.",
    "schema": "Print a JSON Schema.",
    "serve": "Run the language server, for editors.",
}

FAILED = 2
"""Exit status where a command could not do its work."""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command and return its exit status.

    0: nothing to report; 1: findings, or changes by remedies to look at; 2: the command could not run.
    """
    terminal.prepare()
    try:
        status = _run(list(sys.argv[1:] if arguments is None else arguments))
        sys.stdout.flush()
    except CommandError as problem:
        terminal.say(str(problem))
        return FAILED
    except BrokenPipeError:  # whoever read our output has seen enough
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
        return FAILED
    except KeyboardInterrupt:
        return 130
    except Exception:
        import traceback

        traceback.print_exc()
        terminal.say(
            "This is a defect of bandwright. Please report it with the lines above and the band file."
        )
        return FAILED
    return status


def _run(arguments: list[str]) -> int:
    name = arguments[0] if arguments else "--help"
    if name in COMMANDS:
        command = import_module(f"bandwright.faces.command.{name}")
        parser = Parser(f"bandwright {name}", COMMANDS[name])
        command.configure(parser)
        options, unknown = parser.parse_known_args(arguments[1:])
        if unknown and name != "serve":  # editors start a server with flags of their own
            parser.error(f"there is no option `{unknown[0]}`")
        status: int = command.run(options)
        return status
    if name == "--version":
        from importlib.metadata import version

        terminal.show(f"bandwright {version('bandwright')}")
    elif name in ("--help", "-h"):
        terminal.show(_help())
    else:
        raise CommandError(f"bandwright: there is no command `{name}`; {suggestion(name, COMMANDS)}")
    return 0 if arguments else FAILED


def _help() -> str:
    from textwrap import wrap

    lines = [
        "usage: bandwright COMMAND [OPTION ...]",
        "",
        "Checks band files: YAML files that hold the requirements of digital filters.",
        "",
        *(f"  {name:<10}{does}" for name, does in COMMANDS.items()),
        "",
        "`bandwright COMMAND --help` tells what a command takes; `--version` the version.",
        "",
        *wrap(CAUTION, 80),
    ]
    return "\n".join(lines)
