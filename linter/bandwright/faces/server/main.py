"""`bandwright serve`: the language server as a process, from its first byte to its exit status."""

from __future__ import annotations

import asyncio
import logging
import sys
import time

from bandwright.faces.server import transport
from bandwright.faces.server.server import Server

BAD_ADDRESS = 2
"""Exit status where it can't listen."""

LOOPBACK = ("127.0.0.1", "localhost", "::1")


def serve(tcp: str | None = None, today: str | None = None) -> int:
    """Serve one client over standard input and output until it leaves, and return the exit status.

    Args:
        tcp: HOST:PORT to listen on instead; it must be a loopback address.
        today: the date as YYYY-MM-DD by which accepted findings are judged, if not by the day it is (UTC).

    Returns:
        0 after an orderly end; 1 where the client left without `shutdown`; 2 for an address that won't do.
    """
    address = None
    if tcp is not None:
        host, _, port = tcp.rpartition(":")
        host = host.strip("[]")
        if host not in LOOPBACK or not port.isdigit():
            sys.stderr.write("bandwright serve: --tcp takes a loopback address, such as 127.0.0.1:8765\n")
            return BAD_ADDRESS
        address = host, int(port)
    # What matters is told to the client; standard error would show it a second time.
    logging.getLogger("pygls").setLevel(logging.CRITICAL)
    try:
        return asyncio.run(_run(address, today))
    except KeyboardInterrupt:
        return 130


async def _run(address: tuple[str, int] | None, today: str | None) -> int:
    status: asyncio.Future[int] = asyncio.get_running_loop().create_future()

    def finish(code: int) -> None:
        if not status.done():
            status.set_result(code)

    server = Server(lambda: today or time.strftime("%Y-%m-%d", time.gmtime()), finish)
    asyncio.get_running_loop().set_exception_handler(lambda loop, context: server.loop_failed(context))
    if address is None:
        server.protocol.set_writer(transport.Writer(transport.claim_stdout()))
        transport.read_stdin(server.protocol.receive, server.client_left)
    else:

        def connected(writer: asyncio.StreamWriter) -> transport.Receive:
            server.protocol.set_writer(writer)
            return server.protocol.receive

        await transport.listen(*address, connected, server.client_left)
    return await status
