"""Every remedy of a file that keeps the requirement, as edits of the text that is open."""

from __future__ import annotations

from difflib import SequenceMatcher

from bandwright.analysis.analyse import Memo
from bandwright.analysis.mend import mend
from bandwright.bandfile.values import Span, TextEdit
from bandwright.faces.server.positions import lines_of
from bandwright.faces.server.session import OpenFile, Session, UnansweredError, unanswered


async def safe_edits(session: Session, file: OpenFile) -> tuple[TextEdit, ...]:
    """The edits that the bulk fix makes; none where the file was edited before they were found.

    A question that comes up is waited for, and the work is done again: what is known by then is kept.
    """
    document, memo, answers = session.read(file), Memo(), session.answers.kept
    while file.document is document:
        try:
            *_, (mended, _) = (document, ()), *mend(document, answers, unanswered, memo, session.today())
            return changed_lines(document.text, mended.text)
        except UnansweredError as missing:
            if not await session.answer(missing.question):
                break
    return ()


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
