"""How many filters one core checks in a second, after start, in many files."""

from __future__ import annotations

import contextlib
import io
import tempfile
import time
from pathlib import Path

from bandwright.faces.command.main import main
from benchmarks.corpus import band_file
from benchmarks.rows import Row

FILES, FILTERS_EACH = 50, 20  # fewer files than are shared among cores


def measure() -> list[Row]:
    with tempfile.TemporaryDirectory() as folder:
        for number in range(FILES):
            text = band_file(filters=FILTERS_EACH, seed=number)
            Path(folder, f"{number:03}.bands.yaml").write_text(text, encoding="utf-8")
        with contextlib.redirect_stdout(io.StringIO()) as printed:
            main(["check", str(Path(folder, "000.bands.yaml"))])  # loads what it takes
            start = time.process_time()
            main(["check", folder])
            taken = time.process_time() - start
    counted = printed.getvalue().splitlines()[-1]
    assert f"{FILES} files, {FILES * FILTERS_EACH} filters" in counted
    rate = FILES * FILTERS_EACH / taken
    return [
        Row(
            "seconds for 1,000 filters, one core, none with a question",
            1e3 / rate,
            1.0,
            f"{rate:.0f} filters/s",
        )
    ]
