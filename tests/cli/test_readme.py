"""Does the README tell the truth: commands that exist, a brief that is sound, files that are there?"""

from __future__ import annotations

import re
from pathlib import Path

import pytest

from tests.cli.conftest import Tuner
from tuner.brief import demo_briefs, read_brief
from tuner.brief.table import SECTIONS, TOP_KEYS

ROOT = Path(__file__).resolve().parents[2]
README = (ROOT / "README.md").read_text(encoding="utf-8")


def test_the_brief_in_the_readme_is_sound(tmp_path: Path) -> None:
    text = re.search(r"```toml\n(.*?)```", README, re.DOTALL)
    assert text is not None
    path = tmp_path / "readme.toml"
    path.write_text(text.group(1), encoding="utf-8")
    assert read_brief(path).target.ph == 6.4


@pytest.mark.parametrize("key", sorted({*TOP_KEYS, *(key for keys in SECTIONS.values() for key in keys)}))
def test_every_key_of_a_brief_is_told(key: str) -> None:
    assert f"`{key}`" in README or f"`[{key}]`" in README or f"`[[{key}]]`" in README


def test_every_command_is_told(tuner: Tuner) -> None:
    listed = tuner("--help").out.split("Commands:")[1].split("\n\n")[0]
    commands = re.findall(r"^  (\w+) ", listed, re.MULTILINE)
    assert len(commands) >= 8
    for command in commands:
        assert f"tuner {command}" in README


def test_the_demo_briefs_are_told() -> None:
    for name in demo_briefs():
        assert f"`{name}`" in README


def test_links_lead_to_files_that_are_there() -> None:
    links = re.findall(r"\]\(([^)#]+)\)", README)
    assert links
    assert [link for link in links if not (ROOT / link).exists()] == []


def test_there_is_one_command_for_the_job_and_one_for_the_tests() -> None:
    commands = re.findall(r"^    (python3\.11 .*)$", README, re.MULTILINE)
    assert len(commands) == 2
    assert commands[0].endswith("tuner design freshness-label")
    assert commands[1].endswith("-m pytest")
