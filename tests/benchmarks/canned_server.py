"""A plain pygls server that analyses nothing: whatever is typed, it publishes a given number of findings."""

from __future__ import annotations

import sys

from lsprotocol import types
from pygls.lsp.server import LanguageServer

MESSAGE = (
    "Butterworth needs order 45, maximum 16, because the transition is only 20 Hz to 25 Hz; an elliptic"
    " filter needs order 9."
)
RANGE = types.Range(types.Position(10, 12), types.Position(10, 23))

server = LanguageServer("canned", "1", text_document_sync_kind=types.TextDocumentSyncKind.Full)


@server.feature(types.TEXT_DOCUMENT_DID_OPEN)
def opened(params: types.DidOpenTextDocumentParams) -> None:
    publish(params.text_document.uri, params.text_document.version)


@server.feature(types.TEXT_DOCUMENT_DID_CHANGE)
def changed(params: types.DidChangeTextDocumentParams) -> None:
    publish(params.text_document.uri, params.text_document.version)


def publish(uri: str, version: int) -> None:
    related = [types.DiagnosticRelatedInformation(types.Location(uri, RANGE), "the maximum")]
    server.text_document_publish_diagnostics(
        types.PublishDiagnosticsParams(
            uri=uri,
            version=version,
            diagnostics=[
                types.Diagnostic(
                    range=RANGE,
                    message=MESSAGE,
                    severity=types.DiagnosticSeverity.Error,
                    code="order/over-maximum",
                    source="canned",
                    related_information=related,
                )
                for _ in range(int(sys.argv[1]))
            ],
        )
    )


if __name__ == "__main__":
    server.start_io()
