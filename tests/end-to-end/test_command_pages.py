"""The commands that print pages: `guide`, `schema`, `--help`, `--version`."""

from __future__ import annotations

import json
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from bandwright.findings.catalogue import RULES

Run = Callable[..., subprocess.CompletedProcess[bytes]]
ROOT = Path(__file__).resolve().parents[2]
CAUTION = "no safety case"


def test_the_guide_lists_a_page_for_every_finding(bandwright: Run) -> None:
    done = bandwright("guide")
    assert done.returncode == 0
    listed = {line.split()[0] for line in done.stdout.decode().splitlines()}
    assert set(RULES) - listed == set()


def test_the_guide_prints_the_page_of_a_finding(bandwright: Run) -> None:
    page = ROOT / "linter" / "bandwright" / "guide" / "findings" / "order" / "over-maximum.md"
    done = bandwright("guide", "order/over-maximum")
    assert done.returncode == 0
    assert done.stdout.decode().strip() == page.read_text(encoding="utf-8").strip()


def test_the_guide_suggests_the_nearest_page(bandwright: Run) -> None:
    done = bandwright("guide", "order/over-maximun")
    assert (done.returncode, done.stdout) == (2, b"")
    assert b"there is no page `order/over-maximun`; did you mean `order/over-maximum`?" in done.stderr


@pytest.mark.parametrize(
    ("name", "file"), [("band-file", "bandfile"), ("check", "check"), ("forecast", "forecast")]
)
def test_the_schemas_in_the_checkout_are_fresh(bandwright: Run, name: str, file: str) -> None:
    """To renew one: `bandwright schema NAME > schemas/FILE.schema.json`."""
    kept = ROOT / "schemas" / f"{file}.schema.json"
    printed = bandwright("schema", name)
    assert printed.returncode == 0
    assert printed.stdout == kept.read_bytes()
    assert json.loads(printed.stdout)["$schema"] == "http://json-schema.org/draft-07/schema#"


@pytest.mark.parametrize("command", ["check", "forecast", "fix", "guide", "schema", "serve"])
def test_every_command_tells_what_it_takes_and_what_a_verdict_is_worth(bandwright: Run, command: str) -> None:
    done = bandwright(command, "--help")
    assert (done.returncode, done.stderr) == (0, b"")
    assert done.stdout.decode().startswith(f"usage: bandwright {command}")
    assert CAUTION in " ".join(done.stdout.decode().split())


def test_the_help_names_every_command(bandwright: Run) -> None:
    done = bandwright("--help")
    assert done.returncode == 0
    text = done.stdout.decode()
    assert all(f"\n  {name} " in text for name in ("check", "forecast", "fix", "guide", "schema", "serve"))
    assert CAUTION in " ".join(text.split())
    assert max(map(len, text.splitlines())) <= 80
    nothing_asked = bandwright()
    assert (nothing_asked.returncode, nothing_asked.stdout) == (2, done.stdout)


def test_the_server_takes_the_flags_that_editors_add(bandwright: Run) -> None:
    """Its client leaves at once without the protocol's `shutdown`, so the status is 1."""
    done = bandwright("serve", "--stdio", "--clientProcessId=1", input=b"")
    assert done.returncode == 1
    assert b"Traceback" not in done.stderr
