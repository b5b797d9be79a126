"""Every finding that there is, by id, in the order of the areas and of the source."""

from __future__ import annotations

from bandwright.findings import accepted, coefficient, cost, edge, key, level, order, syntax
from bandwright.findings.rules import Rule

RULES: dict[str, Rule] = {
    rule.id: rule
    for module in (syntax, key, edge, level, order, coefficient, cost, accepted)
    for rule in vars(module).values()
    if isinstance(rule, Rule)
}
