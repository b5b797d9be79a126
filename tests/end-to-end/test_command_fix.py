"""`bandwright fix`: a diff that applies, or the files changed in place, and nothing else touched."""

from __future__ import annotations

import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

Run = Callable[..., subprocess.CompletedProcess[bytes]]

SOUND = """\
# the hoist, as measured
format: bandwright/1
filters:
  strain-slow:
    sample_rate: 4 kHz      # of the node
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: elliptic
"""

SLIPPED = SOUND.replace("format:", "fromat:").replace("family:", "familly:").replace("ripple:", "riple:")
"""Three keys with a slip, each with one remedy that keeps the requirement."""


@pytest.fixture
def file(tmp_path: Path) -> Path:
    return tmp_path / "hoist.bands.yaml"


@pytest.mark.parametrize(
    "change",
    [
        str,
        lambda text: f"\ufeff{text}",
        lambda text: text.removesuffix("\n"),
        lambda text: text.replace("hoist", "hoist\u2028"),
    ],
    ids=["plain", "byte-order mark", "no last line end", "a line separator of Unicode"],
)
def test_the_diff_shows_the_remedies_changes_nothing_and_applies(
    bandwright: Run, file: Path, change: Callable[[str], str]
) -> None:
    file.write_text(change(SLIPPED), encoding="utf-8")
    done = bandwright("fix")
    assert done.returncode == 1
    assert b"hoist.bands.yaml: strain-slow: Call it `family` [key/unknown-key]\n" in done.stderr
    assert b"3 remedies to apply with `--in-place`\n" in done.stderr
    assert file.read_text(encoding="utf-8") == change(SLIPPED)
    patched = subprocess.run(["git", "apply", "-p0"], cwd=file.parent, input=done.stdout, check=False)
    assert patched.returncode == 0
    assert file.read_text(encoding="utf-8") == change(SOUND)


@pytest.mark.parametrize("ends", ["\n", "\r\n"])
@pytest.mark.parametrize("mark", ["", "\ufeff"])
@pytest.mark.parametrize("last", ["\n", ""])
def test_in_place_every_other_byte_stays(
    bandwright: Run, file: Path, ends: str, mark: str, last: str
) -> None:
    def bytes_of(text: str) -> bytes:
        return (mark + text.removesuffix("\n") + last).replace("\n", ends).encode()

    file.write_bytes(bytes_of(SLIPPED))
    done = bandwright("fix", "--in-place", "hoist.bands.yaml")
    assert (done.returncode, done.stdout) == (1, b"")
    assert b"3 remedies applied\n" in done.stderr
    assert file.read_bytes() == bytes_of(SOUND)
    again = bandwright("fix", "--in-place", "hoist.bands.yaml")
    assert (again.returncode, again.stderr) == (0, b"0 remedies applied\n")


def test_a_requirement_is_not_changed(bandwright: Run, file: Path) -> None:
    """An attenuation below 0 dB can be read in more than one way, so only a person may choose."""
    written = SOUND.replace("to: 20 Hz", "to: 20")
    file.write_text(written, encoding="utf-8")
    assert bandwright("fix", "--in-place").returncode == 0
    assert "to: 20," in file.read_text(encoding="utf-8")


def test_bytes_that_are_not_utf_8_are_left_alone(bandwright: Run, file: Path) -> None:
    content = SLIPPED.encode().replace(b"hoist", b"ho\xefst")
    file.write_bytes(content)
    done = bandwright("fix", "--in-place")
    assert done.returncode == 2
    assert b"hoist.bands.yaml: is not UTF-8 text, so nothing is changed in it\n" in done.stderr
    assert file.read_bytes() == content


def test_standard_input_gives_a_diff_and_has_no_place(bandwright: Run) -> None:
    done = bandwright("fix", "-", "--stdin-name", "hoist.bands.yaml", input=SLIPPED.encode())
    assert done.stdout.startswith(b"--- hoist.bands.yaml\n+++ hoist.bands.yaml\n")
    refused = bandwright("fix", "-", "--in-place", input=SLIPPED.encode())
    assert (refused.returncode, refused.stdout) == (2, b"")
