"""`bandwright check --as junit`: a test report with a case for each filter."""

from __future__ import annotations

import json
import subprocess
from collections import Counter
from collections.abc import Callable
from pathlib import Path
from xml.etree import ElementTree as ET

import pytest

Run = Callable[..., subprocess.CompletedProcess[bytes]]

CORPUS = [
    Path(__file__).resolve().parents[1] / "corpus" / f"{name}.bands.yaml"
    for name in ("accepted", "keys", "levels")
]
"""Band files with findings of every severity."""

DAY = ("--today", "2026-01-01")

HOIST = """\
format: bandwright/1
devices:
  unused: {sample_rate: 4 kHz}
filters:
  strain-slow:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
  strain-fast:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: elliptic
"""
"""Order 45 (a figure of the reference design), where 12 is the maximum; order 8.22 before rounding up; and a
hint about the device."""

ACCEPTING = """\
    family: butterworth
    accepted:
      - {finding: order/over-maximum, up_to: 45, reason: At night., until: 2027-06-30}
"""


@pytest.fixture
def report(bandwright: Run) -> Callable[..., ET.Element]:
    """Checks, and gives the report after comparing its counts with its elements."""

    def report(*arguments: str, **keywords: object) -> ET.Element:
        done = bandwright("check", "--as", "junit", *DAY, *arguments, **keywords)
        done.stdout.decode("ascii")
        root = ET.fromstring(done.stdout)
        assert root.tag == "testsuites"
        assert {suite.tag for suite in root} <= {"testsuite"}
        for element in (root, *root):
            for count, tag in (("tests", "testcase"), ("failures", "failure"), ("errors", "error")):
                assert int(element.attrib[count]) == len(list(element.iter(tag)))
        assert all(len(case.findall("failure")) < 2 for case in root.iter("testcase"))
        assert not any({"time", "timestamp", "hostname"} & set(element.attrib) for element in root.iter())
        return root

    return report


Report = Callable[..., ET.Element]


def cases(root: ET.Element) -> dict[str, list[str]]:
    """By name of the case, the tags inside it."""
    return {case.attrib["name"]: [inner.tag for inner in case] for case in root.iter("testcase")}


def test_a_file_is_a_suite_and_a_filter_a_case(report: Report, tmp_path: Path) -> None:
    for name in ("b", "a"):
        (tmp_path / f"{name}.bands.yaml").write_text(HOIST, encoding="utf-8")
    root = report()
    assert [suite.attrib["name"] for suite in root] == ["a.bands.yaml", "b.bands.yaml"]
    for suite in root:
        assert [case.attrib["name"] for case in suite] == ["the file itself", "strain-slow", "strain-fast"]
        assert {case.attrib["classname"] for case in suite} == {suite.attrib["name"]}
    [failure] = root[0].iter("failure")
    assert failure.attrib["type"] == "order/over-maximum"
    assert failure.attrib["message"].startswith("Butterworth needs order 45, maximum 12, ")
    assert (failure.text or "").startswith("a.bands.yaml:10:13: error: Butterworth needs order 45, ")


@pytest.mark.parametrize(
    ("least", "failing"),
    [
        ("error", {"strain-slow"}),
        ("warning", {"strain-slow"}),
        ("information", {"strain-slow", "strain-fast"}),
    ],
)
def test_at_least_decides_what_fails(
    bandwright: Run, report: Report, tmp_path: Path, least: str, failing: set[str]
) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST, encoding="utf-8")
    found = cases(report("--at-least", least))
    assert {name for name, tags in found.items() if "failure" in tags} == failing
    assert found["the file itself"] == ["system-out"]
    assert bandwright("check", "--as", "junit", "--at-least", least).returncode == 1


def test_it_tells_every_finding_that_is_not_accepted_once(
    bandwright: Run, report: Report, tmp_path: Path
) -> None:
    for file in CORPUS:
        (tmp_path / file.name).write_bytes(file.read_bytes())
    plain = json.loads(bandwright("check", "--as", "json", *DAY).stdout)["findings"]
    severe = Counter(one["severity"] in ("error", "warning") for one in plain if not one["accepted"])
    lines = bandwright("check", *DAY).stdout.decode().splitlines()[:-1]
    root = report()
    told = {
        tag: [line for e in root.iter(tag) for line in (e.text or "").split("\n")]
        for tag in ("failure", "system-out")
    }
    assert len(told["failure"]) == severe[True]
    assert len(told["system-out"]) == severe[False]
    assert sorted(told["failure"] + told["system-out"]) == sorted(lines)


def test_an_accepted_finding_fails_nothing(report: Report, tmp_path: Path) -> None:
    accepted = HOIST.replace("    family: butterworth\n", ACCEPTING)
    (tmp_path / "hoist.bands.yaml").write_text(accepted, encoding="utf-8")
    assert cases(report("--at-least", "error"))["strain-slow"] != ["failure"]
    assert "failure" in cases(report("--at-least", "error", "--today", "2027-07-01"))["strain-slow"]


def test_any_text_makes_valid_xml(report: Report, tmp_path: Path) -> None:
    """Names of files and filters with signs that XML escapes, and with some that it has no way to write."""
    text = HOIST.replace("elliptic", '"]]>\\b"')
    text = text.replace("strain-slow", "\"<&\\u0001\\e\\uffff> 'Ω' \U0001d53d\"")
    name = b"<&'\"\x01\xe9> \xce\xa9.bands.yaml".decode("utf-8", "surrogateescape")
    (tmp_path / name).write_text(text, encoding="utf-8")
    root = report()
    [suite] = root
    assert suite.attrib["name"] == "<&'\"> Ω.bands.yaml"
    assert [case.attrib["name"] for case in suite][1:] == ["<&> 'Ω' \U0001d53d", "strain-fast"]
    assert any("]]>" in failure.attrib["message"] for failure in root.iter("failure"))


def test_what_can_not_be_read_is_an_error(bandwright: Run, report: Report, tmp_path: Path) -> None:
    (tmp_path / "gone.bands.yaml").symlink_to("nowhere")
    root = report(".", "missing.bands.yaml")
    assert [error.attrib["message"] for error in root.iter("error")] == [
        "missing.bands.yaml: there is no such file or folder",
        "gone.bands.yaml: can't be read: No such file or directory",
    ]
    assert bandwright("check", "--as", "junit", ".").returncode == 2


def test_it_is_the_same_in_every_run_and_with_many_files(bandwright: Run, tmp_path: Path) -> None:
    for number in range(64):
        (tmp_path / f"number_{number:02}.bands.yaml").write_text(HOIST, encoding="utf-8")
    outputs = {
        bandwright("check", "--as", "junit", *DAY, env={"PYTHONHASHSEED": seed}).stdout for seed in ("1", "2")
    }
    [output] = outputs
    assert [suite.attrib["tests"] for suite in ET.fromstring(output)] == ["3"] * 64
