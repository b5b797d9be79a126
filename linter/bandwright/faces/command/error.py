"""What keeps a command from running, as a sentence for the person who started it."""

from __future__ import annotations


class CommandError(Exception):
    """Ends the command with exit status 2; its text says what is wrong and what to do."""
