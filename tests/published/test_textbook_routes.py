"""Does the planner count steps as textbooks do, and claim no step that textbooks warn of?

Each row of the two tables is planned on a shelf that holds nothing but what the synthesis names.
"""

from __future__ import annotations

import csv
from pathlib import Path

import pytest

from tests.synthesis.benches import book, library, patterns, plan_for, workshop
from tuner.synthesis.routes import routes_to

HERE = Path(__file__).parent


def rows(name: str) -> list[dict[str, str]]:
    """The rows of a table, headings aside."""
    lines = (HERE / name).read_text(encoding="utf-8").splitlines()
    return list(csv.DictReader(line for line in lines if not line.startswith("#")))


KNOWN, FORBIDDEN = rows("textbook_routes.csv"), rows("no_direct_route.csv")


def least_steps(row: dict[str, str], within: int) -> int | None:
    """Steps of the shortest route, or None."""
    bench = workshop(row["bottles"].split(" "), row["roles"].split(";"))
    core = library().cores[row["core"]]
    seen = patterns(bench, core, row["smiles"])
    assert seen, f"{row['product']} is no analog of {row['core']}"
    found = []
    for pattern in seen:
        routes = routes_to(plan_for(bench, core, pattern, within), pattern)
        found += [len(route.steps) for route in routes]
    return min(found, default=None)


def test_the_tables_are_as_long_as_promised() -> None:
    assert len(KNOWN) >= 60
    assert len(FORBIDDEN) >= 30
    assert {role for row in (*KNOWN, *FORBIDDEN) for role in row["roles"].split(";")} <= set(book().roles)


@pytest.mark.parametrize("row", KNOWN, ids=[row["product"] for row in KNOWN])
def test_count_equals_the_textbook(row: dict[str, str]) -> None:
    assert least_steps(row, 5) == int(row["steps"])
    assert row["source"]
    assert (row["steps"] == row["printed"]) != bool(row["explained"])


@pytest.mark.parametrize("row", FORBIDDEN, ids=[row["product"] for row in FORBIDDEN])
def test_no_step_is_claimed_that_fails_in_the_flask(row: dict[str, str]) -> None:
    assert least_steps(row, int(row["within"])) is None
