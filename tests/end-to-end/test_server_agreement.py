"""The server finds what the command finds, in every file of the demo and the corpus."""

from __future__ import annotations

import json
import subprocess
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

from lsp_client import PATIENCE_S, SERVE, Client

ROOT = Path(__file__).resolve().parents[2]
FILES = sorted(
    [*(ROOT / "linter/bandwright/demo").glob("*.bands.yaml"), *(ROOT / "tests/corpus").rglob("*.bands.yaml")]
)
NOT_UTF_8 = ("latin-1", "utf-16", "utf-32")
"""What an editor makes of these bytes is its own affair."""

SEVERITIES = {"error": 1, "warning": 2, "information": 3, "hint": 4}


@pytest.fixture(scope="module")
def client() -> Iterator[Client]:
    client = Client()
    client.initialize({"general": {"positionEncodings": ["utf-32"]}})
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]


@pytest.fixture(scope="module")
def expected() -> dict[Path, list[tuple[object, ...]]]:
    """By file: what `bandwright check` finds that is not accepted, as place, severity, id and message."""
    command = [*SERVE[:-1], "check", "--as", "json", *map(str, FILES)]
    done = subprocess.run(command, cwd=ROOT, capture_output=True, timeout=PATIENCE_S * 6, check=False)
    by_file: dict[Path, list[tuple[object, ...]]] = {file: [] for file in FILES}
    for found in json.loads(done.stdout)["findings"]:
        if not found["accepted"]:
            place = (found["line"] - 1, found["column"] - 1, found["end_line"] - 1, found["end_column"] - 1)
            by_file[ROOT / found["file"]].append(
                (place, SEVERITIES[found["severity"]], found["id"], found["message"])
            )
    return by_file


def of_server(published: list[dict[str, Any]]) -> list[tuple[object, ...]]:
    return [
        (
            (
                found["range"]["start"]["line"],
                found["range"]["start"]["character"],
                found["range"]["end"]["line"],
                found["range"]["end"]["character"],
            ),
            found["severity"],
            found["code"],
            found["message"],
        )
        for found in published
    ]


def test_there_are_files_to_agree_on() -> None:
    assert len(FILES) > 10


@pytest.mark.parametrize(
    "file", [file for file in FILES if not file.name.startswith(NOT_UTF_8)], ids=lambda file: file.name
)
def test_server_and_command_find_the_same(
    client: Client, expected: dict[Path, list[tuple[object, ...]]], file: Path
) -> None:
    uri = file.as_uri()
    client.open(uri, file.read_bytes().decode("utf-8"))
    found = of_server(client.diagnostics(uri, 1))
    deadline = time.monotonic() + PATIENCE_S * 3
    while found != expected[file] and time.monotonic() < deadline:  # exact figures come one by one
        found = of_server(client.diagnostics(uri, 1))
    assert found == expected[file]
    client.notify("textDocument/didClose", {"textDocument": {"uri": uri}})
    assert client.diagnostics(uri, None) == []
