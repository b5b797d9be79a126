"""The worker: a process of its own that answers one question after the other.

It reads pickled questions from its standard input and writes pickled answers to its standard output,
each behind its length. It says that it is ready once what answering takes is loaded, so that a spare one
answers at once. Run as `python -m bandwright.exact.worker`; it ends when its standard input does.
"""

from __future__ import annotations

import os
import pickle
import struct
import sys
from typing import BinaryIO

from bandwright.exact import coefficient_bits, fir_length  # noqa: F401 # loaded before the first question
from bandwright.exact.answer import answer

READY = b"ready\n"
LENGTH = struct.Struct(">I")


def main() -> None:
    """Answer until the standard input ends."""
    questions, answers = sys.stdin.buffer, os.fdopen(os.dup(1), "wb")
    # What a library prints must not mix with the answers.
    os.dup2(2, 1)
    answers.write(READY)
    answers.flush()
    while (question := _read(questions)) is not None:
        answers.write(packed(answer(pickle.loads(question))))
        answers.flush()


def packed(value: object) -> bytes:
    """A value as it crosses between the processes."""
    data = pickle.dumps(value)
    return LENGTH.pack(len(data)) + data


def _read(stream: BinaryIO) -> bytes | None:
    head = stream.read(LENGTH.size)
    return stream.read(LENGTH.unpack(head)[0]) if len(head) == LENGTH.size else None


if __name__ == "__main__":
    main()
