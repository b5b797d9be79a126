"""What a terminal gets to see."""

from __future__ import annotations

import io
import sys

import pytest

from bandwright.faces.command import terminal


class Screen(io.StringIO):
    def isatty(self) -> bool:
        return True


def test_a_terminal_with_few_characters_gets_the_others_written_out(monkeypatch: pytest.MonkeyPatch) -> None:
    """cp1252 has the plus-minus sign, and no pi."""
    received = io.BytesIO()
    monkeypatch.setattr(sys, "stdout", io.TextIOWrapper(received, encoding="cp1252", newline="\n"))
    terminal.prepare()
    terminal.show("±0.05 dB, 0.2 π")
    sys.stdout.flush()
    assert received.getvalue() == b"\xb10.05 dB, 0.2 \\u03c0\n"


@pytest.mark.parametrize(
    ("settings", "stream", "wanted"),
    [
        ({}, Screen(), True),
        ({}, io.StringIO(), False),
        ({"NO_COLOR": "1"}, Screen(), False),
        ({"NO_COLOR": ""}, Screen(), True),
        ({"TERM": "dumb"}, Screen(), False),
    ],
)
def test_colour_is_for_people_who_want_it(
    monkeypatch: pytest.MonkeyPatch, settings: dict[str, str], stream: io.StringIO, wanted: bool
) -> None:
    monkeypatch.delenv("NO_COLOR", raising=False)
    monkeypatch.setenv("TERM", "xterm")
    for name, value in settings.items():
        monkeypatch.setenv(name, value)
    assert terminal.wants_colour(stream) is wanted


def test_progress_is_shown_to_people_only(monkeypatch: pytest.MonkeyPatch) -> None:
    for stream, shown in ((io.StringIO(), ""), (Screen(), "\r\x1b[K1 of 2\r\x1b[K")):
        monkeypatch.setattr(sys, "stderr", stream)
        progress = terminal.Progress()
        progress.show("1 of 2")
        progress.clear()
        progress.clear()
        assert stream.getvalue() == shown
