"""`bandwright forecast --plot`: the file that it writes, as a browser draws it."""

from __future__ import annotations

import html
import json
import shutil
import subprocess
import xml.etree.ElementTree as ET
from collections.abc import Callable
from itertools import combinations
from pathlib import Path
from typing import Any

import pytest

from bandwright.drawings.colours import DARK, LIGHT

Run = Callable[..., subprocess.CompletedProcess[bytes]]

DEMO = Path(__file__).resolve().parents[2] / "linter" / "bandwright" / "demo" / "hoist.bands.yaml"
FILTERS = ("strain-slow", "brake-rumble", "brake-squeal", "mains-hum", "gearbox-envelope", "slew-rate")
"""A low-pass, a high-pass, a band-pass and a band-stop filter; linear phase; no sample rate."""

MEASURE = """
const found = [...document.querySelectorAll('svg')].map(svg => {
  const frame = svg.getBoundingClientRect();
  const box = one => {
    const r = one.getBoundingClientRect();
    return [r.left - frame.left, r.top - frame.top, r.right - frame.left, r.bottom - frame.top];
  };
  const colour = (name, what) => getComputedStyle(svg.querySelector(name))[what];
  return {
    size: [frame.width, frame.height],
    texts: [...svg.querySelectorAll('text')].map(one => [one.textContent, ...box(one)]),
    ground: colour('.ground', 'fill'), ink: colour('.ink', 'fill'), limit: colour('.limit', 'stroke'),
    hatched: colour('.limit', 'fill'), frame: colour('rect.frame', 'fill'),
  };
});
document.body.textContent = JSON.stringify(found);
"""
SCHEMES = {"light": LIGHT, "dark": DARK}


@pytest.fixture(scope="module")
def plots(tmp_path_factory: pytest.TempPathFactory) -> dict[str, str]:
    from bandwright.faces.command.main import main

    folder = tmp_path_factory.mktemp("plots")
    for name in FILTERS:
        assert main(["forecast", str(DEMO), name, "--plot", str(folder / f"{name}.svg")]) == 0
    return {name: (folder / f"{name}.svg").read_text(encoding="utf-8") for name in FILTERS}


def measured(plots: dict[str, str], folder: Path, scheme: str) -> list[dict[str, Any]]:
    """What a browser makes of the plots, all in one page."""
    browser = shutil.which("chromium") or shutil.which("chromium-browser") or shutil.which("google-chrome")
    assert browser, "install Chromium: `python3 tests/editors/install.py` does"
    page = folder / "page.html"
    body = "".join(plots.values())
    page.write_text(f"<!doctype html><meta charset=utf-8><body>{body}<script>{MEASURE}</script>", "utf-8")
    done = subprocess.run(
        [
            browser,
            "--headless",
            "--no-sandbox",
            "--disable-gpu",
            "--disable-background-networking",
            f"--user-data-dir={folder / 'profile'}",
            f"--blink-settings=preferredColorScheme={1 if scheme == 'light' else 0}",
            "--dump-dom",
            page.as_uri(),
        ],
        capture_output=True,
        check=True,
        timeout=120,
    )
    dumped = done.stdout.decode("utf-8").partition("<body>")[2].partition("</body>")[0]
    found: list[dict[str, Any]] = json.loads(html.unescape(dumped))
    assert len(found) == len(plots)
    return found


def rgb(colour: str) -> str:
    """`#102030` as a browser tells it."""
    return f"rgb({', '.join(str(int(colour[at : at + 2], 16)) for at in (1, 3, 5))})"


@pytest.mark.parametrize("scheme", SCHEMES)
def test_texts_do_not_touch_and_colours_follow_the_scheme(
    plots: dict[str, str], tmp_path: Path, scheme: str
) -> None:
    for name, found in zip(plots, measured(plots, tmp_path, scheme), strict=True):
        width, height = found["size"]
        assert len(found["texts"]) > 20
        for text, left, top, right, bottom in found["texts"]:
            assert left >= 0.0 and right <= width and top >= 0.0 and bottom <= height, (name, text)
        for one, other in combinations(found["texts"], 2):
            apart = one[1] >= other[3] or other[1] >= one[3] or one[2] >= other[4] or other[2] >= one[4]
            assert apart, f"{name}: {one[0]} / {other[0]}"
        for role in ("ground", "ink", "limit"):
            assert found[role] == rgb(SCHEMES[scheme][role])
        assert "bandwright-hatch" in found["hatched"]
        assert found["frame"] == "none"


def test_the_linear_phase_filter_has_its_response(plots: dict[str, str]) -> None:
    labels = [text.text or "" for text in ET.fromstring(plots["gearbox-envelope"]).iter() if text.text]
    [label] = [text for text in labels if text.startswith("equiripple, ")]
    assert label.endswith(" taps")


def test_a_response_that_keeps_to_another_place_of_a_floating_mask_is_left_out(
    bandwright: Run, tmp_path: Path
) -> None:
    """Its stop band is counted from its highest gain, 2.7 dB, and the plot's from 0 dB."""
    (tmp_path / "open.bands.yaml").write_text(
        "format: bandwright/1\nfilters:\n  open:\n    family: equiripple\n    bands:\n"
        "      - pass: {to: 0.3 pi, gain: {min: -3 dB}}\n      - stop: {from: 0.4 pi, attenuation: 20 dB}\n",
        encoding="utf-8",
    )
    assert bandwright("forecast", "open.bands.yaml", "--plot", "open.svg").returncode == 0
    svg = (tmp_path / "open.svg").read_text(encoding="utf-8")
    assert "responses, equiripple." in svg
    assert " taps<" not in svg


def test_the_table_is_printed_too(bandwright: Run, tmp_path: Path) -> None:
    done = bandwright("forecast", str(DEMO), "slew-rate", "--plot", "slew.svg")
    assert (done.returncode, done.stderr) == (0, b"")
    assert b"elliptic" in done.stdout
    assert (tmp_path / "slew.svg").read_text(encoding="utf-8").startswith("<svg ")


@pytest.mark.parametrize(
    ("arguments", "words"),
    [
        ((str(DEMO), "--plot", "all.svg"), "a plot shows one filter; name one of strain-slow, strain-anti"),
        ((str(DEMO), "slew-rate", "--plot", "gone/a.svg"), "gone/a.svg: can't be written: No such file"),
        (("broken.bands.yaml", "--plot", "a.svg"), "torsion: no plot while its bands can't be read"),
    ],
)
def test_what_can_not_be_drawn_is_told_in_words(
    bandwright: Run, tmp_path: Path, arguments: tuple[str, ...], words: str
) -> None:
    (tmp_path / "broken.bands.yaml").write_text(
        "format: bandwright/1\nfilters:\n  torsion:\n    bands:\n      - pass: {to: soon, ripple: 1 dB}\n",
        encoding="utf-8",
    )
    done = bandwright("forecast", *arguments)
    assert (done.returncode, done.stdout) == (2, b"")
    assert words in done.stderr.decode()
    assert [file.name for file in tmp_path.iterdir()] == ["broken.bands.yaml"]
