"""Every fault that reading can report: by id and form, the facts that its sentence may quote, in order.

A fact whose name ends in `?` may be missing. `key` is the key as written, `where` the mapping that it stands
in (`top`, `device`, `filter`, or a key), `written` the value as written. The findings of the areas `syntax`,
`key` and `accepted` turn these into sentences.
"""

from __future__ import annotations

from typing import Final

_WANTED: Final = ("key", "wanted", "example")
_WRITTEN: Final = ("key", "written", "wanted", "example")

FAULTS: Final[dict[str, dict[str, tuple[str, ...]]]] = {
    "syntax/not-yaml": {
        "unclosed-quote": ("quote",),
        "unclosed-bracket": ("bracket", "closing"),
        "unopened-bracket": ("bracket",),
        "colon-in-value": ("key?", "written"),
        "missing-comma": ("key?", "written"),
        "no-colon": ("written", "nearest?"),
        "no-space": ("key", "written"),
        "no-dash": ("written",),
        "indent": ("written", "column", "expected"),
        "character": ("character", "key?"),
        "unknown-alias": ("name",),
        "several-documents": (),
        "not-a-mapping": ("found",),
        "other": ("key?",),
    },
    "syntax/tab": {"": ("lines",)},
    "syntax/duplicate-key": {"": ("key", "where")},
    "syntax/not-text": dict.fromkeys(("control", "surrogate", "replacement"), ("character", "count")),
    "syntax/not-utf-8": dict.fromkeys(("byte", "utf-16", "utf-32"), ("byte", "offset")),
    "syntax/too-large": {"": ("bytes", "maximum")},
    "syntax/too-deep": {"": ("maximum",)},
    "syntax/alias-bomb": {"": ("maximum",)},
    "key/unknown-key": {"": ("key", "where", "nearest?"), "misplaced": ("key", "where", "belongs")},
    "key/reserved-key": {"": ("key", "where")},
    "key/unknown-name": {"": ("key", "written", "nearest?", "names")},
    "key/unknown-device": {"": ("written", "nearest?", "names"), "no-devices": ("written",)},
    "key/missing-key": {
        "": ("key", "where"),
        "either": ("key", "or", "where"),
        "feedback": ("key", "where"),
    },
    "key/wrong-kind": {
        "mapping-wanted": _WRITTEN,
        "list-wanted": _WRITTEN,
        "text-wanted": _WANTED,
        "empty": _WANTED,
        "not-a-number": _WRITTEN,
        "not-a-whole-number": _WRITTEN,
        "too-small": ("key", "written", "least"),
        "out-of-range": ("key", "written", "least", "most"),
        "bad-date": _WRITTEN,
        "bad-finding": _WRITTEN,
        "bad-word": _WRITTEN,
        "band-keys": ("found",),
        "key-not-text": ("where",),
    },
    "key/number-without-unit": {"": ("key", "written", "dimension")},
    "key/wrong-unit": {
        "dimension": ("key", "written", "unit", "dimension", "found", "units"),
        "spelling": ("key", "written", "unit", "nearest", "dimension"),
        "unknown": ("key", "written", "unit", "dimension", "units"),
    },
    "key/decimal-comma": {
        "": ("key", "written", "meant"),
        "thousands": ("key", "written", "meant", "or"),
    },
    "key/format-missing": {"": ("known",)},
    "key/format-unknown": {"": ("written", "known")},
    "key/unused-device": {"": ("device",)},
    "key/duplicate-name": {"": ("name", "kind")},
    "key/cannot-apply": {"device": ("key", "where"), "beside": ("key", "beside", "where")},
    "key/not-judged-yet": {"": ("key",), "value": ("key", "written")},
    "accepted/no-reason": {"missing": ("finding?",), "empty": ("finding?",)},
}
