"""Bytes in and out: messages with a `Content-Length`, over standard input and output or TCP."""

from __future__ import annotations

import asyncio
import os
import sys
import threading
import time
from collections.abc import Callable, Iterator

Receive = Callable[[bytes], None]
"""Takes the body of one message."""

LAST_WORDS_S = 10.0
"""How long a loop that hangs is left alone after the end of input; then the process is ended regardless."""

_READ_BYTES = 65_536


class Frames:
    """Cuts a stream of bytes into the bodies of messages."""

    def __init__(self) -> None:
        self._pending = bytearray()
        self._length: int | None = None

    def feed(self, data: bytes) -> Iterator[bytes]:
        """The bodies that are complete with this piece of the stream."""
        self._pending += data
        while True:
            if self._length is None:
                self._length = self._header()
                if self._length is None:
                    return
            if len(self._pending) < self._length:
                return
            body = bytes(self._pending[: self._length])
            del self._pending[: self._length]
            self._length = None
            yield body

    def _header(self) -> int | None:
        """The length that the next complete header gives; a header without one is passed over."""
        while (end := self._pending.find(b"\r\n\r\n")) >= 0:
            lines = bytes(self._pending[:end]).split(b"\r\n")
            del self._pending[: end + 4]
            for line in lines:
                name, _, value = line.partition(b":")
                if name.strip().lower() == b"content-length" and value.strip().isdigit():
                    return int(value)
        return None


class Writer:
    """Sends frames to a file descriptor; once the client is gone it drops them."""

    def __init__(self, descriptor: int) -> None:
        self._descriptor = descriptor
        self._gone = False

    def write(self, data: bytes) -> None:
        """Send everything, or nothing more once the client is gone."""
        rest = memoryview(data)
        while rest and not self._gone:
            try:
                rest = rest[os.write(self._descriptor, rest) :]
            except OSError:
                self._gone = True

    def close(self) -> None:
        """Nothing to do: the descriptor ends with the process."""


def claim_stdout() -> int:
    """Keep standard output for the protocol: whatever else is printed goes to standard error.

    Returns the descriptor that leads to the client.
    """
    sys.stdout.flush()
    client = os.dup(1)
    os.dup2(2, 1)
    return client


def read_stdin(receive: Receive, ended: Callable[[], None]) -> None:
    """Start to hand every message from standard input to `receive`, in the running loop.

    The thread does nothing but wait for bytes. It reads the descriptor itself, as a thread that ends with
    the process must not hold the lock of `sys.stdin`.
    """
    loop = asyncio.get_running_loop()

    def read() -> None:
        frames = Frames()
        try:
            while data := _next_bytes():
                for body in frames.feed(data):
                    loop.call_soon_threadsafe(receive, body)
            loop.call_soon_threadsafe(ended)
        except RuntimeError:  # the loop was closed meanwhile
            return
        time.sleep(LAST_WORDS_S)
        os._exit(1)

    threading.Thread(target=read, name="stdin", daemon=True).start()


def _next_bytes() -> bytes:
    try:
        return os.read(0, _READ_BYTES)
    except OSError:
        return b""


async def listen(
    host: str, port: int, connected: Callable[[asyncio.StreamWriter], Receive], ended: Callable[[], None]
) -> asyncio.Server:
    """Listen for one client and hand its messages on; a second one is turned away."""
    taken = False

    async def client(reader: asyncio.StreamReader, writer: asyncio.StreamWriter) -> None:
        nonlocal taken
        if taken:
            writer.close()
            return
        taken = True
        receive, frames = connected(writer), Frames()
        try:
            while data := await reader.read(_READ_BYTES):
                for body in frames.feed(data):
                    receive(body)
        except ConnectionError:
            pass
        ended()

    return await asyncio.start_server(client, host, port)
