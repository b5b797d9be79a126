"""What the client can take, as it said when it connected."""

from __future__ import annotations

from dataclasses import dataclass

from lsprotocol import types
from pygls.capabilities import get_capability

from bandwright.faces.server.positions import Encoding, encoding_of


@dataclass(frozen=True, slots=True)
class Client:
    """The client's abilities that make a difference to what is sent."""

    encoding: Encoding = "utf-16"
    """What columns count."""
    markdown: bool = False
    """In hovers; otherwise plain text."""
    related_places: bool = False
    tags: frozenset[int] = frozenset()
    versioned_edits: bool = False
    annotated_edits: bool = False
    """Edits may ask for a confirmation."""
    resolves_edits: bool = False
    """The edit of a code action may come when the user has chosen it."""
    literal_actions: bool = False
    """Code actions may carry edits; without this only commands could be offered."""
    markdown_completion: bool = False
    """In the documentation of completions; otherwise plain text."""
    snippets: bool = False
    """Completions may hold places to fill in."""
    nested_outline: bool = False
    """The outline may have bands inside their filters."""
    refreshes: tuple[str, ...] = ()
    """The requests by which it can be made to ask again for what it shows."""


def client_of(capabilities: types.ClientCapabilities, encoding: object) -> Client:
    """The abilities that a client announces, with the encoding that was agreed on."""

    def says(name: str) -> bool:
        return bool(get_capability(capabilities, name, False))

    formats = get_capability(capabilities, "text_document.hover.content_format", None) or []
    tags = get_capability(capabilities, "text_document.publish_diagnostics.tag_support.value_set", None) or []
    document = "text_document.completion.completion_item.documentation_format"
    documents = get_capability(capabilities, document, None) or []
    lazy = get_capability(capabilities, "text_document.code_action.resolve_support.properties", None) or []
    versioned = says("workspace.workspace_edit.document_changes")
    refreshes = {
        types.WORKSPACE_INLAY_HINT_REFRESH: "workspace.inlay_hint.refresh_support",
        types.WORKSPACE_CODE_LENS_REFRESH: "workspace.code_lens.refresh_support",
    }
    return Client(
        encoding=encoding_of(encoding),
        markdown=bool(formats) and formats[0] == types.MarkupKind.Markdown,
        related_places=says("text_document.publish_diagnostics.related_information"),
        tags=frozenset(int(tag) for tag in tags),
        versioned_edits=versioned,
        annotated_edits=versioned and says("workspace.workspace_edit.change_annotation_support"),
        resolves_edits="edit" in lazy and says("text_document.code_action.data_support"),
        literal_actions=says("text_document.code_action.code_action_literal_support"),
        markdown_completion=bool(documents) and documents[0] == types.MarkupKind.Markdown,
        snippets=says("text_document.completion.completion_item.snippet_support"),
        nested_outline=says("text_document.document_symbol.hierarchical_document_symbol_support"),
        refreshes=tuple(method for method, support in refreshes.items() if says(support)),
    )
