"""`bandwright check` as a user, a hook and a program run it."""

from __future__ import annotations

import json
import os
import pty
import subprocess
from collections.abc import Callable
from pathlib import Path

import jsonschema
import pytest

from bandwright.faces.command import check

Run = Callable[..., subprocess.CompletedProcess[bytes]]
SCHEMAS = Path(__file__).resolve().parents[2] / "schemas"

GOOD = """\
format: bandwright/1
filters:
  strain-slow:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: elliptic
"""
"""Order 8.22 before rounding up, so a slightly wider transition saves one: a piece of information."""

CROWDED = GOOD + "    arithmetic: q31\n    structure: direct-form-2\n"
"""One direct form takes 67-bit coefficients (a figure of the reference design), where 32 are there."""

BAD = GOOD.replace("family: elliptic", "family: butterworth")
"""Order 45 (a figure of the reference design), where 12 is the maximum."""

ACCEPTING = """\
    accepted:
      - finding: order/over-maximum
        up_to: 45
        reason: Computed on recorded data, at night.
        until: 2027-06-30
"""


@pytest.fixture
def write(tmp_path: Path) -> Callable[..., None]:
    """Writes files into the folder that the program runs in."""

    def write(**texts: str | bytes) -> None:
        for name, text in texts.items():
            content = text if isinstance(text, bytes) else text.encode()
            (tmp_path / f"{name}.bands.yaml").write_bytes(content)

    return write


Write = Callable[..., None]


def lines(done: subprocess.CompletedProcess[bytes]) -> list[str]:
    return done.stdout.decode().splitlines()


def test_a_sound_file_has_no_findings(bandwright: Run, write: Write) -> None:
    write(channel=GOOD.replace("25 Hz", "26 Hz"))
    done = bandwright("check", "channel.bands.yaml", "--at-least", "information")
    assert (done.returncode, done.stderr) == (0, b"")
    assert lines(done) == ["1 file, 1 filter: no findings"]


def test_a_finding_is_one_line_with_its_place_and_the_exit_status_is_1(bandwright: Run, write: Write) -> None:
    write(hoist=BAD)
    done = bandwright("check", "hoist.bands.yaml")
    assert (done.returncode, done.stderr) == (1, b"")
    [line] = [line for line in lines(done) if "[order/over-maximum]" in line]
    assert line.startswith("hoist.bands.yaml:8:13: error: Butterworth needs order 45, maximum 12, ")
    assert "1 error" in lines(done)[-1]


def test_findings_are_sorted_by_file_and_place_and_folders_are_searched(
    bandwright: Run, write: Write
) -> None:
    write(b=BAD, a=BAD + BAD.partition("filters:\n")[2].replace("strain-slow", "strain-fast"))
    done = bandwright("check", "b.bands.yaml", ".")
    places = [line.split(": ")[0] for line in lines(done) if "[order/over-maximum]" in line]
    assert places == ["a.bands.yaml:8:13", "a.bands.yaml:14:13", "b.bands.yaml:8:13"]
    assert lines(done)[-1].startswith("2 files, 3 filters: 3 errors")


def test_without_a_path_this_folder_is_checked(bandwright: Run, write: Write) -> None:
    write(hoist=BAD)
    assert bandwright("check").stdout == bandwright("check", ".").stdout


@pytest.mark.parametrize(
    ("text", "worst", "statuses"),
    [
        (GOOD, "information", {"error": 0, "warning": 0, "information": 1}),
        (CROWDED, "warning", {"error": 0, "warning": 1, "information": 1}),
        (BAD, "error", {"error": 1, "warning": 1, "information": 1}),
    ],
    ids=["information", "warning", "error"],
)
def test_at_least_decides_what_fails(
    bandwright: Run, write: Write, text: str, worst: str, statuses: dict[str, int]
) -> None:
    write(hoist=text)
    found = [line.split(": ")[1] for line in lines(bandwright("check"))[:-1]]
    assert min(found, key=["error", "warning", "information"].index) == worst
    assert {name: bandwright("check", "--at-least", name).returncode for name in statuses} == statuses
    assert bandwright("check").returncode == statuses["warning"]


def test_an_accepted_finding_is_counted_and_fails_nothing_until_its_day_is_over(
    bandwright: Run, write: Write
) -> None:
    write(hoist=BAD + ACCEPTING)
    done = bandwright("check", "--at-least", "error", "--today", "2027-06-30")
    assert done.returncode == 0
    assert not any("[order/over-maximum]" in line for line in lines(done))
    assert lines(done)[-1].endswith(", 1 accepted")
    done = bandwright("check", "--at-least", "error", "--today", "2027-07-01")
    assert done.returncode == 1
    assert any("[order/over-maximum]" in line for line in lines(done))


def test_what_can_not_be_read_is_told_and_the_rest_is_checked(
    bandwright: Run, write: Write, tmp_path: Path
) -> None:
    write(hoist=BAD)
    (tmp_path / "gone.bands.yaml").symlink_to("nowhere")
    done = bandwright("check", ".", "missing.bands.yaml")
    assert done.returncode == 2
    assert done.stderr.decode().splitlines() == [
        "missing.bands.yaml: there is no such file or folder",
        "gone.bands.yaml: can't be read: No such file or directory",
    ]
    assert any("[order/over-maximum]" in line for line in lines(done))
    assert lines(done)[-1].startswith("1 file, 1 filter: ")


def test_a_folder_without_band_files_is_a_mistake_to_be_told(bandwright: Run) -> None:
    done = bandwright("check")
    assert (done.returncode, done.stdout) == (2, b"")
    assert done.stderr == b"There is no band file (*.bands.yaml, *.bands.yml) in this folder.\n"


def test_bytes_that_are_not_utf_8_are_a_finding(bandwright: Run, write: Write) -> None:
    write(hoist=GOOD.encode().replace(b"format", b"# caf\xe9\nformat"))
    done = bandwright("check")
    assert done.returncode == 1
    [line] = [line for line in lines(done) if line.endswith("[syntax/not-utf-8]")]
    assert line.startswith("hoist.bands.yaml:1:6: error: The byte 0xE9 ")


def test_standard_input_has_a_name(bandwright: Run) -> None:
    done = bandwright("check", "-", "--stdin-name", "hoist.bands.yaml", input=BAD.encode())
    assert done.returncode == 1
    assert lines(done)[0].startswith("hoist.bands.yaml:")
    assert lines(bandwright("check", "-", input=BAD.encode()))[0].startswith("standard-input:")


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        (
            ("check", "--as", "yaml"),
            "argument --as: `yaml` is not one of text, json, sarif, junit.",
        ),
        (("check", "--fromat"), "bandwright check: there is no option `--fromat`."),
        (("check", "--today", "30.6.2027"), "`30.6.2027` is not a date such as 2027-06-30."),
        (("chek",), "bandwright: there is no command `chek`; did you mean `check`?"),
        (
            ("check", "--to", "no/folder/x.txt", "-"),
            "no/folder/x.txt: can't be written: No such file or directory",
        ),
    ],
)
def test_a_slip_on_the_command_line_is_told_in_words(
    bandwright: Run, arguments: tuple[str, ...], words: str
) -> None:
    done = bandwright(*arguments, input=GOOD.encode())
    assert (done.returncode, done.stdout) == (2, b"")
    assert words in done.stderr.decode()
    assert b"Traceback" not in done.stderr


def test_the_output_goes_to_a_file_where_one_is_named(bandwright: Run, write: Write, tmp_path: Path) -> None:
    write(hoist=BAD)
    done = bandwright("check", "--to", "findings.txt")
    assert (done.returncode, done.stdout, done.stderr) == (1, b"", b"")
    assert (tmp_path / "findings.txt").read_bytes() == bandwright("check").stdout


def test_the_json_has_its_keys_and_meets_its_schema(bandwright: Run, write: Write) -> None:
    write(hoist=BAD)
    done = bandwright("check", "--as", "json")
    assert done.returncode == 1
    output = json.loads(done.stdout)
    jsonschema.validate(output, json.loads((SCHEMAS / "check.schema.json").read_text(encoding="utf-8")))
    assert list(output) == ["version", "findings", "counts", "filters"]
    assert list(output["counts"]) == ["error", "warning", "information", "hint", "accepted"]
    assert output["version"] == 1
    assert output["filters"] == 1
    [found] = [finding for finding in output["findings"] if finding["id"] == "order/over-maximum"]
    assert list(found) == [
        *("id", "severity", "file", "line", "column", "end_line", "end_column", "filter", "message", "guide"),
        *("accepted", "remedies"),
    ]
    assert [found[key] for key in ("file", "line", "column", "end_line", "end_column")] == [
        "hoist.bands.yaml",
        8,
        13,
        8,
        13 + len("butterworth"),
    ]
    assert found["filter"] == "strain-slow"
    assert found["guide"] == "guide/findings/order/over-maximum.md"
    assert found["remedies"]
    for remedy in found["remedies"]:
        assert list(remedy) == ["title", "kind", "edits"]
        assert all(
            list(edit) == ["line", "column", "end_line", "end_column", "text"] for edit in remedy["edits"]
        )


def test_columns_count_code_points(bandwright: Run, write: Write) -> None:
    """The name takes one code point outside the first plane: two UTF-16 units, four bytes."""
    bands = "[{pass: {to: 20 Hz, ripple: 0.1 dB}}, {stop: {from: 25 Hz, attenuation: 70 dB}}]"
    line = f"  \U0001d53d: {{sample_rate: 4 kHz, bands: {bands}, family: butterworth}}"
    write(hoist=f"\ufeffformat: bandwright/1\r\nfilters:\r\n{line}\r\n")
    output = json.loads(bandwright("check", "--as", "json").stdout)
    [found] = [finding for finding in output["findings"] if finding["id"] == "order/over-maximum"]
    assert (found["line"], found["column"]) == (3, line.index("butterworth") + 1)
    assert found["filter"] == "\U0001d53d"


def test_the_output_is_the_same_in_every_run(bandwright: Run, write: Write) -> None:
    write(a=BAD, b=GOOD, c=BAD.replace("20 Hz", "20"))
    outputs = {
        bandwright("check", "--as", "json", "--today", "2026-01-01", env={"PYTHONHASHSEED": seed}).stdout
        for seed in ("1", "2", "3")
    }
    assert len(outputs) == 1


def test_many_files_are_shared_among_processes_and_reported_in_order(
    bandwright: Run, write: Write, tmp_path: Path
) -> None:
    write(**{f"number_{number:03}": BAD if number % 3 else GOOD for number in range(check.MANY)})
    (tmp_path / "number_001.bands.yaml").unlink()
    (tmp_path / "number_001.bands.yaml").symlink_to("nowhere")
    done = bandwright("check", ".")
    assert done.returncode == 2
    assert done.stderr.decode().startswith("number_001.bands.yaml: can't be read: ")
    few = [bandwright("check", f"number_{number:03}.bands.yaml") for number in (0, 2, 3)]
    assert lines(done)[:3] == [line for one in few for line in lines(one)[:-1]]
    assert lines(done)[-1].startswith(f"{check.MANY - 1} files, {check.MANY - 1} filters: ")
    names = [line.partition(":")[0] for line in lines(done)[:-1]]
    assert names == sorted(names)


def test_a_terminal_with_few_characters_gets_every_line(bandwright: Run, write: Write) -> None:
    write(hoist=GOOD.replace("strain-slow", "Ω-slow").replace("elliptic", "Ω"))
    done = bandwright("check", env={"PYTHONUTF8": "0", "PYTHONIOENCODING": "cp1252"})
    assert done.returncode == 1
    assert b"\\u03a9" in done.stdout
    assert done.stderr == b""


def test_colour_on_a_terminal_only(bandwright: Run, write: Write) -> None:
    write(hoist=BAD)
    assert b"\x1b" not in bandwright("check").stdout
    assert "\x1b[31merror\x1b[0m" in on_a_terminal(bandwright, {"TERM": "xterm"})
    assert "\x1b[31m" not in on_a_terminal(bandwright, {"TERM": "xterm", "NO_COLOR": "1"})


def on_a_terminal(bandwright: Run, env: dict[str, str]) -> str:
    """What a terminal is sent by `bandwright check`."""
    ours, theirs = pty.openpty()
    try:
        bandwright("check", env=env, capture_output=False, stdout=theirs, stderr=subprocess.DEVNULL)
        return os.read(ours, 100_000).decode()
    finally:
        os.close(ours)
        os.close(theirs)


def test_a_reader_that_has_seen_enough_is_no_defect(bandwright: Run, write: Write, tmp_path: Path) -> None:
    write(**{f"number_{number}": BAD for number in range(30)})
    ours, theirs = os.pipe()
    os.close(ours)
    try:
        done = bandwright("check", capture_output=False, stdout=theirs, stderr=subprocess.PIPE)
    finally:
        os.close(theirs)
    assert done.stderr == b""
