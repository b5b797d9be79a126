"""What the records of all outputs have in common."""

from __future__ import annotations

DOCUMENTED = {"use_attribute_docstrings": True}
"""As `__pydantic_config__` of a record: the docstrings of its fields become descriptions in its schema."""
