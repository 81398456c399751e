"""On which line of a TOML file does a key stand?

The parser of the standard library gives values without lines. This scan finds only where keys are set; it
never decides what they hold, so a case that it misses costs a line number in an error, nothing else.
"""

from __future__ import annotations

import re
from collections.abc import Mapping

HEADING = re.compile(r"^\s*(\[\[?)\s*([^\[\]]+?)\s*\]\]?\s*(?:#.*)?$")
KEY = re.compile(r"""^\s*((?:[\w-]+|"[^"]*"|'[^']*')(?:\s*\.\s*(?:[\w-]+|"[^"]*"|'[^']*'))*)\s*=""")
QUOTED = re.compile(r'"(?:[^"\\]|\\.)*"|' + r"'[^']*'")


def key_lines(text: str) -> dict[str, int]:
    """Line (from 1) of every key and table; tables of a list are called `name[1]`, `name[2]` ...

    >>> key_lines('title = "a"\\n[target]\\nph = 7\\n[[also]]\\nph = 5')
    {'title': 1, 'target': 2, 'target.ph': 3, 'also[1]': 4, 'also[1].ph': 5}
    """
    found: dict[str, int] = {}
    prefix = ""
    repeats: dict[str, int] = {}
    depth = 0  # open brackets of a value that runs over several lines
    for n, line in enumerate(text.splitlines(), start=1):
        bare = QUOTED.sub('""', line).split("#", 1)[0]
        if depth == 0:
            prefix = _heading(line, prefix, repeats)
            key = KEY.match(line)
            if HEADING.match(line):
                found.setdefault(prefix, n)
            elif key:
                found.setdefault(_joined(prefix, _plain(key.group(1))), n)
                depth += _opened(bare)
        else:
            depth += _opened(bare)
        depth = max(depth, 0)
    return found


def line_of(path: str, lines: Mapping[str, int]) -> int:
    """Line of a key such as `target.ph`; of the nearest table above it where the key has none; else 0."""
    while path:
        if path in lines:
            return lines[path]
        path = path.rpartition(".")[0]
    return 0


def _heading(line: str, prefix: str, repeats: dict[str, int]) -> str:
    """The table that begins on this line, or the one that goes on."""
    match = HEADING.match(line)
    if not match:
        return prefix
    name = _plain(match.group(2))
    if match.group(1) == "[[":
        repeats[name] = repeats.get(name, 0) + 1
        return f"{name}[{repeats[name]}]"
    owner, _, rest = name.partition(".")
    return f"{owner}[{repeats[owner]}].{rest}" if rest and owner in repeats else name


def _plain(key: str) -> str:
    """A dotted key without quotes and blanks."""
    return ".".join(part.strip().strip("\"'") for part in key.split("."))


def _joined(prefix: str, key: str) -> str:
    """A key under its table."""
    return f"{prefix}.{key}" if prefix else key


def _opened(bare: str) -> int:
    """Brackets opened less brackets closed on a line without texts and comments."""
    return sum(bare.count(sign) for sign in "[{") - sum(bare.count(sign) for sign in "]}")
