"""The worker: a process of its own that answers one question after the other.

It reads pickled questions from its standard input and writes pickled answers to its standard output,
each behind its length. It says that it is ready once everything that answering takes is loaded, so that
a spare one answers at once. Run as `python -m bandwright.exact.worker`; it ends when its input does.
"""

from __future__ import annotations

import importlib
import os
import pickle
import struct
import sys
from typing import BinaryIO

from bandwright.exact.answer import answer

READY = b"ready\n"
LENGTH = struct.Struct(">I")


def main() -> None:
    """Answer until the standard input ends."""
    # What a library prints must not mix with the answers.
    answers = os.fdopen(os.dup(1), "wb")
    os.dup2(2, 1)
    for kind in ("coefficient_bits", "fir_length"):
        importlib.import_module(f"bandwright.exact.{kind}")
    _send(answers, READY)
    while (question := _received(sys.stdin.buffer)) is not None:
        _send(answers, packed(answer(pickle.loads(question))))


def packed(value: object) -> bytes:
    """A question or an answer as it crosses between the processes."""
    data = pickle.dumps(value)
    return LENGTH.pack(len(data)) + data


def _send(stream: BinaryIO, data: bytes) -> None:
    stream.write(data)
    stream.flush()


def _received(stream: BinaryIO) -> bytes | None:
    """The next question, or None at the end of the input."""
    head = stream.read(LENGTH.size)
    if len(head) < LENGTH.size:
        return None
    (size,) = LENGTH.unpack(head)
    data = stream.read(size)
    return data if len(data) == size else None


if __name__ == "__main__":
    main()
