"""Measure every `bench_*.py` beside this file, print the table and keep it in `.tests/benchmarks.md`.

Arguments choose benchmarks by a part of their module's name. A row is red at more than twice its bar.
"""

from __future__ import annotations

import os
import sys
from collections.abc import Iterator
from importlib import import_module
from pathlib import Path

from benchmarks.rows import Row

HERE = Path(__file__).resolve().parent
TABLE = HERE.parents[1] / ".tests" / "benchmarks.md"
RED, PLAIN = "\x1b[31m", "\x1b[0m"
HEAD = ("what", "ratio", "bar", "measured")


def lines(rows: list[Row]) -> Iterator[str]:
    """The rows as a table in Markdown, aligned."""
    cells = [HEAD, *((row.what, f"{row.ratio:.3g}", f"{row.bar:.3g}", row.measured) for row in rows)]
    widths = [max(map(len, column)) for column in zip(*cells, strict=True)]
    rule = ["-" * widths[0], "-" * (widths[1] - 1) + ":", "-" * (widths[2] - 1) + ":", "-" * widths[3]]
    for what, ratio, bar, measured in (cells[0], rule, *cells[1:]):
        texts = (
            what.ljust(widths[0]),
            ratio.rjust(widths[1]),
            bar.rjust(widths[2]),
            measured.ljust(widths[3]),
        )
        yield f"| {' | '.join(texts)} |"


def main() -> int:
    names = [file.stem for file in sorted(HERE.glob("bench_*.py"))]
    chosen = [name for name in names if not sys.argv[1:] or any(part in name for part in sys.argv[1:])]
    rows: list[Row] = []
    for name in chosen:
        print(f"measuring {name} ...", file=sys.stderr, flush=True)
        rows += import_module(f"benchmarks.{name}").measure()
    table = list(lines(rows))
    TABLE.parent.mkdir(exist_ok=True)
    TABLE.write_text("\n".join(table) + "\n", encoding="utf-8")
    coloured = sys.stdout.isatty() and not os.environ.get("NO_COLOR")
    for line, row in zip(table, [None, None, *rows], strict=True):
        far_off = row is not None and row.ratio > 2.0 * row.bar
        print(f"{RED}{line}{PLAIN}" if far_off and coloured else f"{line} far off" if far_off else line)
    return 0


if __name__ == "__main__":
    sys.exit(main())
