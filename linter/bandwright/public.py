"""The public functions: what a program that imports bandwright calls."""

from __future__ import annotations

import time

from bandwright.analysis.analyse import Memo
from bandwright.analysis.present import present
from bandwright.analysis.settle import settle
from bandwright.analysis.settle_forecast import settle_forecast
from bandwright.analysis.types import Finding
from bandwright.bandfile.reader import read
from bandwright.exact.answer import answer
from bandwright.forecast.forecast import Forecast
from bandwright.forecast.rows import Row, rows


def check(text: str, *, today: str | None = None) -> tuple[Finding, ...]:
    """All findings of a band file, sorted by place; accepted ones are marked as such.

    Args:
        text: the band file.
        today: the date as YYYY-MM-DD that decides which accepted findings have expired; default: today, UTC.
    """
    document = read(text)
    analyses = settle(document, {}, answer, Memo())
    return present(document, analyses, today or time.strftime("%Y-%m-%d", time.gmtime()))


def forecast(text: str, name: str) -> tuple[Row, ...]:
    """The forecast of one filter of a band file: a row for each family, every figure settled.

    Raises:
        KeyError: the band file has no filter of this name.
    """
    filters = {filter.name: filter for _, filter in read(text).filters}
    return rows(settle_forecast(Forecast(filters[name], {}), {}, answer))
