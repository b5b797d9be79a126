"""The server finds what the command finds, and finds it however the text came about."""

from __future__ import annotations

import json
import random
import re
import subprocess
import time
from collections.abc import Iterator
from pathlib import Path
from typing import Any

import pytest

import bandwright
from bandwright.analysis.types import Finding
from lsp_client import SERVE, Client

ROOT = Path(__file__).resolve().parents[2]
FILES = sorted(
    [*(ROOT / "linter/bandwright/demo").glob("*.bands.yaml"), *(ROOT / "tests/corpus").rglob("*.bands.yaml")]
)
URI = "file:///crane/hoist.bands.yaml"
SEVERITIES = {"error": 1, "warning": 2, "information": 3, "hint": 4}
EDITS = 500
"""In one session; every tenth state is compared."""


@pytest.fixture(scope="module")
def client() -> Iterator[Client]:
    client = Client()
    client.initialize({"general": {"positionEncodings": ["utf-32"]}})
    yield client
    assert client.shut_down() == 0
    assert client.errors() == ""
    assert not [message for message in client.received if message.get("method") == "window/logMessage"]
