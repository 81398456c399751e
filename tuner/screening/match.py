"""Which of the pattern rules apply to a structure?"""

from __future__ import annotations

from functools import lru_cache

from tuner.screening.rules import Rule
from tuner.structure.scan import pattern_counts


@lru_cache(maxsize=16)
def _layout(rules: tuple[Rule, ...]) -> tuple[tuple[str, ...], tuple[tuple[int, int, int], ...]]:
    """All patterns in one row; for each rule where its own begin, where `unless` begins, and the end."""
    patterns: list[str] = []
    spans: list[tuple[int, int, int]] = []
    for rule in rules:
        start = len(patterns)
        patterns += (*rule.smarts, *rule.unless)
        spans.append((start, start + len(rule.smarts), len(patterns)))
    return tuple(patterns), tuple(spans)


def match_count(smiles: str, rule: Rule, rules: tuple[Rule, ...]) -> int:
    """How often the patterns of one of these rules match a structure as written, `unless` left aside.

    Asking for one rule out of the whole set costs nothing once `applying` has looked at the structure.
    """
    patterns, spans = _layout(rules)
    start, middle, _ = spans[rules.index(rule)]
    return sum(pattern_counts(smiles, patterns)[start:middle])


def applying(smiles: str, rules: tuple[Rule, ...]) -> tuple[Rule, ...]:
    """The rules that apply to a structure as written, in the order given; the structure is read once.

    Raises StructureError where the structure cannot be read.
    """
    patterns, spans = _layout(rules)
    counts = pattern_counts(smiles, patterns)
    return tuple(
        rule
        for rule, (start, middle, end) in zip(rules, spans, strict=True)
        if sum(counts[start:middle]) >= rule.at_least and not any(counts[middle:end])
    )
