"""Is each key found on its line, also in unusual TOML?"""

from __future__ import annotations

import pytest

from tuner.brief.lines import key_lines, line_of

TEXT = """\
# heading
title = "with = sign and # hash [x]"

[target]   # a comment
ph = 7

[groups]
allow = [
    "a",  # = no key
    "b",
]
forbid = ["c"]
[limits.flags]
"restricted azo amine" = "show"
[[also]]
ph = 1
[also.medium]
temperature_c = 3
[[also]]
ph = 2
"""


@pytest.mark.parametrize(
    ("key", "line"),
    [
        ("title", 2),
        ("target", 4),
        ("target.ph", 5),
        ("groups.allow", 8),
        ("groups.forbid", 12),
        ("limits.flags.restricted azo amine", 14),
        ("also[1].ph", 16),
        ("also[1].medium.temperature_c", 18),
        ("also[2].ph", 20),
    ],
)
def test_a_key_is_found_on_its_line(key: str, line: int) -> None:
    assert line_of(key, key_lines(TEXT)) == line


def test_a_key_inside_a_list_is_no_key() -> None:
    assert "groups.= no key" not in key_lines(TEXT)
    assert sorted(key_lines(TEXT).values()) == sorted(set(key_lines(TEXT).values()))


def test_a_missing_key_takes_the_line_of_its_table() -> None:
    assert line_of("target.tolerance", key_lines(TEXT)) == 4


def test_a_key_of_nowhere_has_no_line() -> None:
    assert line_of("nowhere.at.all", key_lines(TEXT)) == 0
