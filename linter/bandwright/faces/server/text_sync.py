"""Opening, editing and closing files. The client sends the whole text with each edit."""

from __future__ import annotations

from lsprotocol import types

from bandwright.faces.server.session import Session
from bandwright.project.walk import is_band_file


def did_open(session: Session, params: types.DidOpenTextDocumentParams) -> None:
    """Take up a file; one on disk must be named as a band file, for editors that send every YAML file."""
    opened = params.text_document
    if not opened.uri.startswith("file:") or is_band_file(opened.uri):
        session.open(opened.uri, opened.version, opened.text)


def did_change(session: Session, params: types.DidChangeTextDocumentParams) -> None:
    """Take the newest text."""
    if params.content_changes:
        newest = params.content_changes[-1]
        session.change(params.text_document.uri, params.text_document.version, newest.text)


def did_close(session: Session, params: types.DidCloseTextDocumentParams) -> None:
    """Let go of a file."""
    session.close(params.text_document.uri)
