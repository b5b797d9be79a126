"""Every remedy of a file that keeps the requirement, as edits of the text that is open."""

from __future__ import annotations

import asyncio
from difflib import SequenceMatcher

from bandwright.analysis.mend import mend
from bandwright.bandfile.values import Span, TextEdit
from bandwright.faces.server.positions import lines_of
from bandwright.faces.server.session import OpenFile, Session


async def safe_edits(session: Session, file: OpenFile) -> tuple[TextEdit, ...]:
    """The edits that the bulk fix makes; messages are looked at between its rounds.

    None are left where the file was edited meanwhile.
    """
    document = session.read(file)
    text = document.text
    for mended, _ in mend(document, session.answers.kept, session.answer, session.memo, session.today()):
        text = mended.text
        await asyncio.sleep(0)
        if file.document is not document:
            return ()
    return changed_lines(document.text, text)


def changed_lines(before: str, after: str) -> tuple[TextEdit, ...]:
    """Edits that turn one text into the other and touch only lines that differ."""
    old, new = lines_of(before), lines_of(after)
    end = len(old) - 1, len(old[-1])

    def place(line: int) -> tuple[int, int]:
        return (line, 0) if line < len(old) else end

    return tuple(
        TextEdit(Span(*place(first), *place(last)), "".join(new[new_first:new_last]))
        for kind, first, last, new_first, new_last in SequenceMatcher(None, old, new, False).get_opcodes()
        if kind != "equal"
    )
