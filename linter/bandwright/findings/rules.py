"""What a finding is: its id, severity and sentences, the function that finds it, and what it finds."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping, Set
from dataclasses import dataclass
from typing import Literal

from bandwright.bandfile.values import Place
from bandwright.findings.case import Case
from bandwright.remedies.change import Remedy

Severity = Literal["error", "warning", "information", "hint"]
SEVERITIES: tuple[Severity, ...] = ("error", "warning", "information", "hint")
"""From worst to mildest."""

Tag = Literal["unnecessary", "deprecated"]

Says = str | Mapping[str, str | tuple[str, ...]]
"""A sentence, or by form: its sentence, or several; the first that has all its facts and fits is said."""

LONGEST_SENTENCE = 160
"""Characters. A sentence that comes out longer gives way to the next of its form."""

LONGEST_QUOTES = (48, 32, 20, 12, 8)
"""Characters of a fact: the user's own words are cut there, and shorter where the sentence needs it."""

LISTS = ("names", "units", "wanted", "example")
"""Facts that are not the user's own words, and not cut."""

PLACES = {"top": "the top level", "filter": "a filter", "device": "a device"}
"""How sentences call the mappings of the band file that have no key of their own."""


@dataclass(frozen=True, slots=True)
class Hit:
    """One finding at one place of a filter, as numbers and words; `Rule.message` makes its sentence."""

    id: str
    place: Place
    facts: tuple[tuple[str, object], ...] = ()
    form: str = ""
    """Which of the finding's sentences fits."""
    related: tuple[tuple[Place, str], ...] = ()
    """Other places that have a part in it, each with a few words."""
    figure: tuple[float, str] | None = None
    """The figure that an `up_to` of an accepted finding is held against, and its unit."""


Find = Callable[[Case], Iterator[Hit]]


@dataclass(frozen=True, slots=True)
class Rule:
    """A finding as declared. `find` is None where the reader or the list of accepted findings reports it."""

    id: str
    severity: Severity
    says: Mapping[str, tuple[str, ...]]
    """By form, its sentences."""
    find: Find | None
    remedies: tuple[Remedy, ...]
    needs: tuple[str, ...]
    tag: Tag | None

    def message(self, hit: Hit) -> str:
        """The sentence of a hit."""
        there = {name for name, value in hit.facts if value != ""}
        fitting = [one for one in self.says[hit.form] if _says_with(one, there)] or self.says[hit.form][-1:]
        sentence = ""
        for longest in LONGEST_QUOTES:
            facts = {name: _word(name, value, longest) for name, value in hit.facts}
            for template in fitting:
                sentence = template.format_map(facts)
                if len(sentence) <= LONGEST_SENTENCE:
                    return sentence
        return sentence


def _says_with(sentence: str, names: Set[str]) -> bool:
    """Whether a sentence quotes no other facts than these."""
    return all(part.partition("}")[0] in names for part in sentence.split("{")[1:])


def _word(name: str, value: object, longest: int) -> object:
    """A fact as its sentence quotes it."""
    if not isinstance(value, str) or name in LISTS:
        return value
    if name in ("where", "belongs"):
        value = PLACES.get(value, f"`{value}`")
    return value if len(value) <= longest else f"{value[: longest - 1]}…"


def finding(
    id: str,
    severity: Severity,
    says: Says,
    *,
    remedies: tuple[Remedy, ...] = (),
    needs: tuple[str, ...] = (),
    tag: Tag | None = None,
) -> Callable[[Find], Rule]:
    """Declare a finding by the function that finds it.

    `says` has the facts of the hit in braces. `needs` names the keys that it reads, `bands` for the whole
    mask: while one of them is written but unreadable, the function is not called. A finding that looks at
    each band item by itself, and passes over what it can't read there, does not name `bands`.
    """

    def declare(find: Find) -> Rule:
        return Rule(id, severity, _sentences(says), find, remedies, needs, tag)

    return declare


def reported(
    id: str,
    severity: Severity,
    says: Says,
    *,
    remedies: tuple[Remedy, ...] = (),
    tag: Tag | None = None,
) -> Rule:
    """Declare a finding that the reader of the band file, or the list of accepted findings, reports."""
    return Rule(id, severity, _sentences(says), None, remedies, (), tag)


def _sentences(says: Says) -> Mapping[str, tuple[str, ...]]:
    forms = {"": says} if isinstance(says, str) else says
    return {form: (said,) if isinstance(said, str) else said for form, said in forms.items()}
