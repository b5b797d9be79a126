"""Findings in text that can't be taken as a band file; the reader reports them all."""

from __future__ import annotations

from bandwright.bandfile.grammar import FORMAT
from bandwright.findings.rules import reported

not_yaml = reported(
    "syntax/not-yaml",
    "error",
    {
        "unclosed-quote": "The quote {quote} is opened here and never closed, so the text after it belongs to"
        " it; close it with another {quote}.",
        "unclosed-bracket": "The bracket `{bracket}` is opened here and never closed; close it with"
        " `{closing}`.",
        "unopened-bracket": "No bracket is open that `{bracket}` could close; remove it, or write the one"
        " that opens.",
        "colon-in-value": (
            "The value of `{key}` holds a colon, which YAML takes for another key; put the value in quotes.",
            "`{written}` holds a colon, which YAML takes for another key; put it in quotes.",
        ),
        "missing-comma": "`{written}` runs on into another entry; write a comma between the two.",
        "no-colon": (
            "`{written}` is neither a key nor a list item; if the key `{nearest}` is meant, write"
            " `{nearest}:` before its value.",
            "`{written}` is neither a key nor a list item; a key ends with a colon, and a remark starts"
            " with `#`.",
        ),
        "no-space": (
            "There is no space after the colon of `{key}`, so YAML takes the whole for text; write `{mend}`.",
            "There is no space after the colon of `{key}`, so YAML takes the whole for text; put one there.",
        ),
        "no-dash": "`{written}` stands in a list, but does not start with a dash as its neighbours do; write"
        " `- ` before it.",
        "indent": "`{written}` is indented by {column}, but the entries beside it by {expected}; indent it"
        " alike.",
        "character": (
            "A value of YAML can't start with the character {character}; put the value of `{key}` in quotes.",
            "A value of YAML can't start with the character {character}; put it in quotes.",
        ),
        "unknown-alias": "No anchor `&{name}` comes before this alias, so it stands for nothing; write the"
        " value itself.",
        "several-documents": "A second YAML document starts here, but a band file holds one; move it to a"
        " file of its own.",
        "not-a-mapping": "This file holds a {found} where a band file has keys; start it with"
        f" `format: {FORMAT}`.",
        "other": (
            "The text can't be read as YAML from here on, near the key `{key}`; compare it with a line that"
            " can.",
            "The text can't be read as YAML from here on; compare it with a line that can.",
        ),
    },
)

tab = reported(
    "syntax/tab",
    "error",
    "YAML forbids tabs in an indent, because their width is open (lines of this entry with one: {lines}); use"
    " spaces.",
)

duplicate_key = reported(
    "syntax/duplicate-key",
    "error",
    "`{key}` stands twice in {where}, so one of the two would be lost; keep the one that is meant.",
)

not_text = reported(
    "syntax/not-text",
    "error",
    {
        "control": "{character} is a control character, which no text holds (found in this entry: {count});"
        " remove it.",
        "surrogate": "{character} is half of a character, which no text holds (found in this entry: {count});"
        " remove it.",
        "replacement": "{character} stands for text that an earlier conversion lost (found in this entry:"
        " {count}); write what was there.",
    },
)

not_utf_8 = reported(
    "syntax/not-utf-8",
    "error",
    {
        "byte": "The byte {byte} at offset {offset} is not UTF-8, so the file was saved in another"
        " encoding; save it as UTF-8.",
        "utf-16": "The file is saved as UTF-16, but a band file is UTF-8; save it as UTF-8.",
        "utf-32": "The file is saved as UTF-32, but a band file is UTF-8; save it as UTF-8.",
    },
)

too_large = reported(
    "syntax/too-large",
    "error",
    "The file has {bytes} bytes, maximum {maximum}, so it was not read; split it into several band files.",
)

too_deep = reported(
    "syntax/too-deep",
    "error",
    "Brackets and entries lie more than {maximum} levels deep here, and no key of a band file lies that"
    " deep.",
)

alias_bomb = reported(
    "syntax/alias-bomb",
    "error",
    "With its aliases written out the text has more than {maximum} entries, so it was not read; write the"
    " values themselves.",
)
