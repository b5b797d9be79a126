"""Hover texts as Markdown and as plain text."""

from __future__ import annotations

from bandwright.faces.markdown import Link, Table, render

TABLE = Table(("edge", "order"), ("left", "right"), (("25 Hz", "9"), ("26 Hz", "10")), marked=0)


def test_a_table_is_aligned_as_markdown_whose_marks_are_concealed() -> None:
    assert render([TABLE], markdown=True) == "\n".join(
        [
            "| edge  | order |",
            "| ----- | ----: |",
            "| **25 Hz** |     9 |",
            "| 26 Hz |    10 |",
        ]
    )


def test_the_same_table_reads_as_plain_text() -> None:
    assert render([TABLE], markdown=False) == "\n".join(
        [
            "  edge   order",
            "  -----  -----",
            "> 25 Hz      9",
            "  26 Hz     10",
        ]
    )


def test_emphasis_code_and_links_have_a_plain_form() -> None:
    parts = ["**25 Hz** in `q31`", Link("About it", "file:///guide/it.md")]
    assert render(parts, markdown=True) == "**25 Hz** in `q31`\n\n[About it](file:///guide/it.md)"
    assert render(parts, markdown=False) == "25 Hz in q31\n\nAbout it: file:///guide/it.md"


def test_what_a_user_wrote_makes_no_link_and_no_tag() -> None:
    assert render(["a [b](c) <i> `[d]`"], markdown=True) == r"a \[b](c) \<i> `[d]`"
