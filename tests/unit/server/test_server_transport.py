"""Messages cut from a stream of bytes."""

from __future__ import annotations

from itertools import pairwise

from hypothesis import given
from hypothesis import strategies as st

from bandwright.faces.server.transport import Frames


@given(bodies=st.lists(st.binary(max_size=20), max_size=6), cuts=st.lists(st.integers(0, 300), max_size=8))
def test_bodies_come_out_whole_however_the_stream_is_cut(bodies: list[bytes], cuts: list[int]) -> None:
    stream = b"".join(b"Content-Length: %d\r\n\r\n%b" % (len(body), body) for body in bodies)
    places = [0, *sorted(min(cut, len(stream)) for cut in cuts), len(stream)]
    frames = Frames()
    found = [body for start, end in pairwise(places) for body in frames.feed(stream[start:end])]
    assert found == bodies


def test_other_headers_and_their_case_do_not_matter() -> None:
    stream = b"content-type: application/json\r\nCONTENT-LENGTH:2\r\n\r\n{}"
    assert list(Frames().feed(stream)) == [b"{}"]


def test_a_header_without_a_length_is_passed_over() -> None:
    stream = b"Content-Length: two\r\n\r\nContent-Length: 2\r\n\r\n{}"
    assert list(Frames().feed(stream)) == [b"{}"]
