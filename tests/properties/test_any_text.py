"""Whatever the bytes of a file are, `check` and `forecast` have something to say, at a place that exists."""

from __future__ import annotations

import random
import re
from collections.abc import Callable

import pytest

from properties.whole_path import CASES, DEMO, examine, times
from unit.bandfile.test_bandfile_fuzz import mutated

NAMES = sorted(CASES)
VALUE = re.compile(r"(?<=: )[^{}\[\],#\n]+")
VALUES = sorted({value.strip() for data in CASES.values() for value in VALUE.findall(data.decode("latin-1"))})
"""Every value of every file, to stand where another one stood."""


def with_other_bytes(data: bytes, dice: random.Random) -> bytes:
    """A few bytes overwritten, put in, or left out."""
    changed = bytearray(data)
    for _ in range(dice.choice([1, 2, 8])):
        at = dice.randrange(len(changed) + 1)
        changed[at : at + dice.choice([0, 1, 1, 3])] = dice.randbytes(dice.choice([0, 1, 1, 2]))
    return bytes(changed)


def with_other_values(data: bytes, dice: random.Random) -> bytes:
    """Some values replaced by values that are sound somewhere else."""
    text = data.decode("utf-8", errors="replace")
    share = dice.choice([0.02, 0.1, 0.3])
    return VALUE.sub(lambda m: dice.choice(VALUES) if dice.random() < share else m[0], text).encode()


def with_other_lines(data: bytes, dice: random.Random) -> bytes:
    """Runs of lines moved, doubled or dropped, as when pieces of files are put together."""
    rows = data.split(b"\n")
    for _ in range(dice.choice([1, 2, 3])):
        at, to = (dice.randrange(len(rows) + 1) for _ in range(2))
        run = rows[at : at + dice.choice([1, 1, 2, 5])]
        if dice.random() < 0.6:
            del rows[at : at + len(run)]
        rows[to:to] = run * dice.choice([0, 1, 2])
    return b"\n".join(rows)


def with_other_characters(data: bytes, dice: random.Random) -> str:
    return mutated(data.decode("utf-8", errors="replace"), dice)


@pytest.mark.parametrize(
    "change", [with_other_bytes, with_other_values, with_other_lines, with_other_characters]
)
def test_a_mutated_file_is_answered(change: Callable[[bytes, random.Random], str | bytes]) -> None:
    for seed in times(90):
        dice = random.Random(f"{change.__name__} {seed}")
        text = change(CASES[dice.choice(NAMES)], dice)
        try:
            examine(text)
        except Exception as error:
            error.add_note(f"seed {seed}: {text!r}")
            raise


@pytest.mark.parametrize("seed", times(12))
def test_a_mutated_file_is_answered_to_the_end(seed: int) -> None:
    """With every question answered, over files that ask little."""
    dice = random.Random(seed)
    small = [name for name in NAMES if len(CASES[name]) < 600]
    data = CASES[dice.choice(small)]
    examine(with_other_lines(data, dice), settled=True)
    examine(with_other_bytes(data, dice), settled=True)


def test_each_file_of_the_repository_is_answered() -> None:
    found = {name: len(examine(data)) for name, data in CASES.items()}
    assert found["hoist-troubled.bands.yaml"] >= 10
    assert found["hoist.bands.yaml"] == 0


def test_no_value_of_the_demo_may_be_missing_or_odd() -> None:
    """Each value in turn is emptied, and written as something else."""
    text = (DEMO / "hoist.bands.yaml").read_text(encoding="utf-8")
    places = list(VALUE.finditer(text))
    dice = random.Random(1)
    for place in dice.sample(places, len(places) if len(times(10)) > 10 else 25):
        for other in ("", "~", "[]", "{a: b}", "-1", "0 dB", "1e999 Hz", "é"):
            examine(text[: place.start()] + other + text[place.end() :])
