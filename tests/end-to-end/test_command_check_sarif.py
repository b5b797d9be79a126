"""`bandwright check --as sarif`: a log that the standard allows, with the findings of every other form."""

from __future__ import annotations

import json
import subprocess
from collections.abc import Callable, Iterator
from importlib.metadata import version
from pathlib import Path
from typing import Any
from urllib.parse import unquote

import jsonschema
import pytest

from bandwright.findings.catalogue import RULES

Run = Callable[..., subprocess.CompletedProcess[bytes]]
Json = dict[str, Any]

CORPUS = [
    Path(__file__).resolve().parents[1] / "corpus" / f"{name}.bands.yaml"
    for name in ("accepted", "keys", "levels")
]
"""Band files with findings of every severity."""

GUIDE = Path(__file__).resolve().parents[2] / "linter" / "bandwright" / "guide" / "findings"

HOIST = """\
format: bandwright/1
filters:
  strain-slow:
    sample_rate: 4 kHz
    bands:
      - pass: {to: 20 Hz, ripple: 0.1 dB}
      - stop: {from: 25 Hz, attenuation: 70 dB}
    family: butterworth
"""
"""Order 45 (a figure of the reference design), where 12 is the maximum."""

ACCEPTING = """\
    accepted:
      - finding: order/over-maximum
        up_to: 45
        reason: Computed on recorded data, at night.
        until: 2027-06-30
"""

DAY = ("--today", "2026-01-01")


def objects(required: str = "", **properties: Json) -> Json:
    """An object with these keys and no others."""
    return {
        "type": "object",
        "properties": {**properties, "properties": {"type": "object"}},
        "required": required.split(),
        "additionalProperties": False,
    }


def lists(items: Json, **more: object) -> Json:
    return {"type": "array", "items": items, **more}


TEXT = {"type": "string", "minLength": 1}
NUMBER = {"type": "integer", "minimum": 1}
INDEX = {"type": "integer", "minimum": -1}
LEVEL = {"enum": ["none", "note", "warning", "error"]}
MESSAGE = objects("text", text=TEXT, markdown=TEXT)
FILE = objects(uri={"type": "string", "format": "uri-reference"}, uriBaseId=TEXT, description=MESSAGE)
REGION = objects(startLine=NUMBER, startColumn=NUMBER, endLine=NUMBER, endColumn=NUMBER)
LOCATION = objects(
    id=INDEX,
    physicalLocation=objects(artifactLocation=FILE, region=REGION),
    logicalLocations=lists(objects(name=TEXT, kind=TEXT)),
    message=MESSAGE,
)
REPLACEMENT = objects("deletedRegion", deletedRegion=REGION, insertedContent=objects(text={"type": "string"}))
FIX = objects(
    "artifactChanges",
    description=MESSAGE,
    artifactChanges=lists(
        objects(
            "artifactLocation replacements",
            artifactLocation=FILE,
            replacements=lists(REPLACEMENT, minItems=1),
        ),
        minItems=1,
        uniqueItems=True,
    ),
)
SUPPRESSION = objects(
    "kind",
    kind={"enum": ["inSource", "external"]},
    status={"enum": ["accepted", "underReview", "rejected"]},
    justification=TEXT,
)
RESULT = objects(
    "message",
    ruleId=TEXT,
    ruleIndex=INDEX,
    level=LEVEL,
    message=MESSAGE,
    locations=lists(LOCATION),
    relatedLocations=lists(LOCATION, uniqueItems=True),
    suppressions=lists(SUPPRESSION, uniqueItems=True),
    partialFingerprints={"type": "object", "additionalProperties": {"type": "string"}},
    fixes=lists(FIX, uniqueItems=True),
)
CONFIGURATION = objects(level=LEVEL)
RULE = objects("id", id=TEXT, shortDescription=MESSAGE, help=MESSAGE, defaultConfiguration=CONFIGURATION)
DRIVER = objects("name", name=TEXT, version=TEXT, rules=lists(RULE, uniqueItems=True))
RUN = objects(
    "tool",
    tool=objects("driver", driver=DRIVER),
    invocations=lists(
        objects(
            "executionSuccessful",
            executionSuccessful={"type": "boolean"},
            toolExecutionNotifications=lists(objects("message", message=MESSAGE, level=LEVEL)),
        )
    ),
    originalUriBaseIds={"type": "object", "additionalProperties": FILE},
    columnKind={"enum": ["utf16CodeUnits", "unicodeCodePoints"]},
    artifacts=lists(objects(location=FILE, roles=lists({"enum": ["analysisTarget"]})), uniqueItems=True),
    results=lists(RESULT),
)
LOG = objects("version runs", **{"$schema": TEXT}, version={"const": "2.1.0"}, runs=lists(RUN))
"""The keys of SARIF 2.1.0 (OASIS, 2020) that are used, as its schema has them; from memory."""


@pytest.fixture
def log(bandwright: Run) -> Callable[..., Json]:
    """Checks, and gives the one run of the log after holding the log against the schema."""

    def log(*arguments: str, **keywords: object) -> Json:
        done = bandwright("check", "--as", "sarif", *DAY, *arguments, **keywords)
        output = json.loads(done.stdout.decode("ascii"))
        jsonschema.validate(output, LOG)
        [run] = output["runs"]
        return run

    return log


Log = Callable[..., Json]


def place(location: Json) -> tuple[str, int, int, int, int]:
    where = location["physicalLocation"]
    region = where["region"]
    return (
        unquote(where["artifactLocation"]["uri"]),
        *(region[key] for key in ("startLine", "startColumn", "endLine", "endColumn")),
    )


def test_it_holds_what_the_json_holds(bandwright: Run, log: Log, tmp_path: Path) -> None:
    for file in CORPUS:
        (tmp_path / file.name).write_bytes(file.read_bytes())
    levels = {"error": "error", "warning": "warning", "information": "note", "hint": "note"}
    plain = json.loads(bandwright("check", "--as", "json", *DAY).stdout)["findings"]
    results = log()["results"]
    assert len(results) == len(plain) > 0
    for result, one in zip(results, plain, strict=True):
        [location] = result["locations"]
        keys = ("file", "line", "column", "end_line", "end_column")
        assert result["ruleId"] == one["id"]
        assert place(location) == tuple(one[key] for key in keys)
        assert result["message"]["text"] == one["message"].replace("{", "{{").replace("}", "}}")
        assert (result["level"], result["properties"]) == (
            levels[one["severity"]],
            {"severity": one["severity"]},
        )
        assert [each["name"] for each in location.get("logicalLocations", [])] == (
            [one["filter"]] if one["filter"] is not None else []
        )
        assert bool(result["suppressions"]) == one["accepted"]
        assert [(fix["properties"]["kind"], list(edits_of(fix))) for fix in result["fixes"]] == [
            (remedy["kind"], remedy["edits"]) for remedy in one["remedies"]
        ]
    assert {one["severity"] for one in plain} == set(levels), "the corpus has every severity"
    assert any("{{" in result["message"]["text"] for result in results)


def edits_of(fix: Json) -> Iterator[Json]:
    """The edits of a fix as the JSON has them."""
    [change] = fix["artifactChanges"]
    for one in change["replacements"]:
        region = one["deletedRegion"]
        yield {
            "line": region["startLine"],
            "column": region["startColumn"],
            "end_line": region["endLine"],
            "end_column": region["endColumn"],
            "text": one.get("insertedContent", {}).get("text", ""),
        }


def test_every_finding_that_there_is_is_a_rule_with_its_page(log: Log, tmp_path: Path) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST, encoding="utf-8")
    run = log()
    driver = run["tool"]["driver"]
    assert (driver["name"], driver["version"]) == ("bandwright", version("bandwright"))
    assert [rule["id"] for rule in driver["rules"]] == list(RULES)
    for rule in driver["rules"]:
        assert rule["help"]["text"] == (GUIDE / f"{rule['id']}.md").read_text(encoding="utf-8")
        assert "helpUri" not in rule
        short = rule["shortDescription"]["text"]
        assert short.endswith(".") and ". " not in short
        assert short in " ".join(rule["help"]["text"].split())
    for result in run["results"]:
        assert driver["rules"][result["ruleIndex"]]["id"] == result["ruleId"]


def test_an_accepted_finding_is_suppressed_with_its_reason_and_the_others_are_said_not_to_be(
    log: Log, tmp_path: Path
) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST + ACCEPTING + "    colour: green\n", encoding="utf-8")
    suppressions = {result["ruleId"]: result["suppressions"] for result in log()["results"]}
    assert suppressions.pop("order/over-maximum") == [
        {
            "kind": "inSource",
            "status": "accepted",
            "justification": "Computed on recorded data, at night.",
        }
    ]
    assert suppressions == {"key/unknown-key": []}
    late = log("--today", "2027-07-01")["results"]
    assert len(late) > 1 and all(result["suppressions"] == [] for result in late)


def test_related_places_are_numbered_and_have_words(log: Log, tmp_path: Path) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST, encoding="utf-8")
    [result] = [one for one in log()["results"] if one["ruleId"] == "order/over-maximum"]
    related = result["relatedLocations"]
    assert [one["id"] for one in related] == list(range(1, len(related) + 1))
    lines = HOIST.splitlines()
    for one in related:
        file, line, column, end_line, end_column = place(one)
        assert (file, end_line) == ("hoist.bands.yaml", line)
        assert lines[line - 1][column - 1 : end_column - 1].strip()
    assert [one["message"]["text"] for one in related][:2] == ["the transition starts here", "and ends here"]


@pytest.mark.parametrize(
    ("name", "uri"),
    [
        ("mast über Ω.bands.yaml", "mast%20%C3%BCber%20%CE%A9.bands.yaml"),
        ("50%#1:?.bands.yaml", "50%25%231%3A%3F.bands.yaml"),
        ("line\nend.bands.yaml", "line%0Aend.bands.yaml"),
        (b"caf\xe9.bands.yaml".decode("utf-8", "surrogateescape"), "caf%E9.bands.yaml"),
    ],
    ids=["spaces and letters", "signs of URIs", "control characters", "no UTF-8"],
)
def test_a_file_is_named_by_a_relative_uri(log: Log, tmp_path: Path, name: str, uri: str) -> None:
    (tmp_path / "in here").mkdir()
    file = tmp_path / "in here" / name
    file.write_text(HOIST, encoding="utf-8")
    for argument in (".", str(file)):
        run = log(argument)
        [artifact] = run["artifacts"]
        [base] = run["originalUriBaseIds"]
        assert artifact["location"] == {"uri": f"in%20here/{uri}", "uriBaseId": base}
        for result in run["results"]:
            for one in (*result["locations"], *result["relatedLocations"]):
                assert one["physicalLocation"]["artifactLocation"] == artifact["location"]


def test_columns_count_code_points_and_it_says_so(log: Log, tmp_path: Path) -> None:
    """The name takes one code point outside the first plane: two UTF-16 units, four bytes."""
    bands = "[{pass: {to: 20 Hz, ripple: 0.1 dB}}, {stop: {from: 25 Hz, attenuation: 70 dB}}]"
    line = f"  \U0001d53d: {{sample_rate: 4 kHz, bands: {bands}, family: butterworth}}"
    (tmp_path / "hoist.bands.yaml").write_text(
        f"\ufeffformat: bandwright/1\nfilters:\n{line}\n", encoding="utf-8"
    )
    run = log()
    assert run["columnKind"] == "unicodeCodePoints"
    [result] = [one for one in run["results"] if one["ruleId"] == "order/over-maximum"]
    start = line.index("butterworth") + 1
    assert place(result["locations"][0])[1:] == (3, start, 3, start + len("butterworth"))
    assert result["locations"][0]["logicalLocations"][0]["name"] == "\U0001d53d"


def fingerprints(run: Json) -> dict[str, str]:
    """By fingerprint, what was found; the run is of one file."""
    found = {
        fingerprint: result["ruleId"]
        for result in run["results"]
        for fingerprint in result["partialFingerprints"].values()
    }
    assert len(found) == len(run["results"]), "two findings have the same fingerprint"
    return found


def test_a_fingerprint_stays_when_its_finding_moves(log: Log) -> None:
    head, slow = HOIST[: HOIST.index("  strain-slow")], HOIST[HOIST.index("  strain-slow") :]
    fast = slow.replace("strain-slow", "strain-fast").replace("20 Hz", "20")
    rate = "    sample_rate: 4 kHz\n"
    moved = f"# A remark.\n\n{head}{fast.replace(rate, '')}{rate}\n{slow}"
    texts = (head + slow + fast, moved, HOIST)
    first, second, alone = (fingerprints(log("-", input=text.encode())) for text in texts)
    assert first == second
    assert alone and alone.items() < first.items()


def test_a_band_put_before_another_leaves_the_fingerprints_of_that_one(log: Log) -> None:
    slipped = HOIST.replace("attenuation: 70 dB", "attenuation: -70 dB")
    line = "      - pass: {to: 20 Hz, ripple: 0.1 dB}\n"
    shifted = slipped.replace(line, "").replace("    family", f"{line}    family")
    assert shifted != slipped
    first, second = (fingerprints(log("-", input=text.encode())) for text in (slipped, shifted))
    kept = {mark for mark, id in first.items() if id == "level/negative-attenuation"}
    assert kept and kept <= set(second)


def test_equal_findings_of_a_filter_are_told_apart(log: Log) -> None:
    entries = "      - {finding: order/over-maximum}\n      - {finding: cost/far-dearer}\n"
    found = fingerprints(log("-", input=f"{HOIST}    accepted:\n{entries}".encode()))
    assert list(found.values()).count("accepted/no-reason") == 2


def test_it_is_the_same_in_every_run_and_tells_no_place_or_time(bandwright: Run, tmp_path: Path) -> None:
    for file in CORPUS:
        (tmp_path / file.name).write_bytes(file.read_bytes())
    outputs = {
        bandwright("check", "--as", "sarif", *DAY, folder, env={"PYTHONHASHSEED": seed}).stdout
        for seed, folder in (("1", "."), ("2", str(tmp_path)))
    }
    [output] = outputs
    assert str(tmp_path) not in output.decode()
    assert "TimeUtc" not in output.decode()


def test_many_files_make_the_same_log(log: Log, tmp_path: Path) -> None:
    for number in range(64):
        (tmp_path / f"number_{number:02}.bands.yaml").write_text(HOIST, encoding="utf-8")
    run = log()
    files = [artifact["location"]["uri"] for artifact in run["artifacts"]]
    assert files == [f"number_{number:02}.bands.yaml" for number in range(64)]
    one = log("number_07.bands.yaml")["results"]
    assert [result for result in run["results"] if place(result["locations"][0])[0] == files[7]] == one


def test_what_can_not_be_read_is_told(log: Log, bandwright: Run, tmp_path: Path) -> None:
    (tmp_path / "hoist.bands.yaml").write_text(HOIST, encoding="utf-8")
    [invocation] = log()["invocations"]
    assert invocation == {"executionSuccessful": True, "toolExecutionNotifications": []}
    run = log(".", "missing.bands.yaml")
    [invocation] = run["invocations"]
    assert invocation["executionSuccessful"] is False
    assert [one["message"]["text"] for one in invocation["toolExecutionNotifications"]] == [
        "missing.bands.yaml: there is no such file or folder"
    ]
    assert run["results"]
    assert bandwright("check", "--as", "sarif", ".", "missing.bands.yaml").returncode == 2


def test_the_exit_status_is_that_of_the_other_forms(bandwright: Run, tmp_path: Path) -> None:
    for text, status in ((HOIST, 1), (HOIST + ACCEPTING, 0)):
        (tmp_path / "hoist.bands.yaml").write_text(text, encoding="utf-8")
        for form in ("text", "sarif"):
            assert bandwright("check", "--as", form, "--at-least", "error", *DAY).returncode == status
