"""The language server without its analysis: whatever is typed, it publishes a given number of findings."""

from __future__ import annotations

import sys

from bandwright.analysis.types import Finding
from bandwright.bandfile.values import Place, Span
from bandwright.faces.server.main import serve
from bandwright.faces.server.session import OpenFile, Session
from bandwright.findings.rules import Hit

MESSAGE = (
    "Butterworth needs order 45, maximum 16, because the transition is only 20 Hz to 25 Hz; an"
    " elliptic filter needs order 9."
)
FINDINGS = tuple(
    Finding(
        id="order/over-maximum",
        severity="error",
        message=MESSAGE,
        span=Span(10 * number, 12, 10 * number, 23),
        filter=f"channel-{number}",
        related=(),
        accepted=False,
        tag=None,
        block=number,
        hit=Hit("order/over-maximum", Place(("family",))),
    )
    for number in range(int(sys.argv[1]))
)


async def publish_at_once(session: Session, file: OpenFile) -> None:
    """In the place of everything that follows an edit."""
    session._publish(file, FINDINGS)


if __name__ == "__main__":
    Session._refresh = publish_at_once  # type: ignore[method-assign] # the rest of the server stays as it is
    sys.exit(serve())
