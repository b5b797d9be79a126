"""Findings about the entries of `accepted`: by the reader, or by the list of accepted findings."""

from __future__ import annotations

from bandwright.findings.rules import reported
from bandwright.remedies import accepting

no_reason = reported(
    "accepted/no-reason",
    "error",
    {
        "missing": (
            "The entry for `{finding}` has no reason, so it accepts nothing; add `reason` and say why.",
            "This entry has no reason, so it accepts nothing; add `reason` and say why.",
        ),
        "empty": (
            "The reason for accepting `{finding}` is empty, so it accepts nothing; say why.",
            "The reason of this entry is empty, so it accepts nothing; say why.",
        ),
    },
)

unknown_finding = reported(
    "accepted/unknown-finding",
    "warning",
    {
        "": (
            "No finding is named `{finding}`, so there is nothing to accept; the nearest one is `{nearest}`.",
            "No finding is named `{finding}`, so there is nothing to accept; remove this entry.",
        )
    },
    remedies=(accepting.drop_entry,),
)

not_acceptable = reported(
    "accepted/not-acceptable",
    "warning",
    "`{finding}` can't be accepted, because the filter can't be judged until it is put right; remove this"
    " entry.",
    remedies=(accepting.remove_entry,),
)

expired = reported(
    "accepted/expired",
    "warning",
    "The entry for `{finding}` ended with {until}, so it accepts nothing any more; look at it again or"
    " remove it.",
    remedies=(accepting.drop_entry,),
)

nothing_to_accept = reported(
    "accepted/nothing-to-accept",
    "warning",
    "This filter has no finding `{finding}` any more, so there is nothing to accept here; remove this entry.",
    tag="unnecessary",
    remedies=(accepting.remove_entry,),
)

no_limit = reported(
    "accepted/no-limit",
    "warning",
    "`{finding}` carries a figure, now {value}, and is accepted only up to one; add `up_to`.",
)

over_its_limit = reported(
    "accepted/over-its-limit",
    "warning",
    "`{finding}` has come to {value}, over the `up_to` of this entry, so it is accepted no more; decide"
    " again.",
)
