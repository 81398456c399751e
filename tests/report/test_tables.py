"""Do the table and the workbook hold the same numbers, in the promised columns?"""

from __future__ import annotations

import csv
import io
from dataclasses import replace
from math import nan
from typing import Any

import pytest

from tests.report.sample import HOSTILE, sample_result
from tuner.report.columns import BY_NAME, COLUMNS, TEXT_COLUMNS, written
from tuner.report.tables import about_lines, candidates_csv, candidates_workbook
from tuner.report.wording import CAUTIONS, HOW_SURE

PROMISED = [
    "rank",
    "analog",
    "smiles",
    "core",
    "substitution",
    "pka",
    "pka_sd",
    "offset",
    "hit_probability",
    "steps",
    "molar_mass_g_mol",
    "working_range_low",
    "working_range_high",
    "dpka_dt",
    "front",
    "cautions",
    "route",
]


def rows() -> list[dict[str, str]]:
    """The CSV read back."""
    return list(csv.DictReader(io.StringIO(candidates_csv(sample_result()).decode("utf-8"))))


def workbook() -> Any:
    """The workbook read back."""
    import openpyxl

    return openpyxl.load_workbook(io.BytesIO(candidates_workbook(sample_result())))


def test_the_promised_columns_come_first_and_in_order() -> None:
    assert [column.name for column in COLUMNS][: len(PROMISED)] == PROMISED
    assert list(rows()[0]) == [column.name for column in COLUMNS]


def test_no_column_has_two_names() -> None:
    assert len(BY_NAME) == len(COLUMNS)
    assert set(BY_NAME) >= TEXT_COLUMNS


def test_numbers_have_the_digits_that_they_deserve() -> None:
    first = rows()[0]
    shown = {name: first[name] for name in ("pka", "pka_sd", "offset", "hit_probability", "molar_mass_g_mol")}
    assert shown == {
        "pka": "6.43",
        "pka_sd": "0.18",
        "offset": "0.03",
        "hit_probability": "0.71",
        "molar_mass_g_mol": "232.67",
    }
    assert (first["dpka_dt"], first["stability"], first["clogp"]) == ("-0.0117", "0.93", "3.9")


def test_a_missing_number_is_an_empty_cell() -> None:
    second = rows()[1]
    assert (second["measured_pka"], second["route"], second["macroscopic_pkas"]) == ("", "", "")


def test_no_negative_zero_is_written() -> None:
    candidate = replace(sample_result().candidates[0], offset=-0.001)
    assert written(BY_NAME["offset"], candidate) == "0.00"


def test_a_route_is_told_on_one_line() -> None:
    first, _, third, _ = rows()
    assert first["route"] == "2-chlorophenol > azo coupling (aniline, sodium nitrite, hydrochloric acid)"
    assert third["route"] == "phenol: bought as it is"


def test_further_targets_and_constants_share_cells() -> None:
    first = rows()[0]
    assert first["other_targets"] == "warm: 1.00"
    assert first["macroscopic_pkas"] == "6.43;11.20"


def test_the_workbook_agrees_with_the_table() -> None:
    sheet = workbook()["candidates"]
    assert [cell.value for cell in sheet[1]] == [column.heading for column in COLUMNS]
    for n, row in enumerate(rows(), start=2):
        for k, column in enumerate(COLUMNS, start=1):
            value = sheet.cell(row=n, column=k).value
            shown = (
                ""
                if value is None
                else f"{value:.{column.decimals}f}"
                if column.decimals >= 0
                else str(value)
            )
            assert shown == row[column.name], (n, column.name)


def test_the_workbook_takes_text_as_text() -> None:
    sheet = workbook()["candidates"]
    column = [c.name for c in COLUMNS].index("note") + 1
    assert sheet.cell(row=5, column=column).value == "=1+1"
    assert sheet.cell(row=5, column=column).data_type == "s"


def test_the_workbook_has_frozen_headings_routes_and_cautions() -> None:
    book = workbook()
    assert book.sheetnames == ["candidates", "routes", "about"]
    assert book["candidates"].freeze_panes == "C2"
    routes = [[cell.value for cell in row] for row in book["routes"].iter_rows(min_row=2)]
    assert [(row[0], row[2], row[3]) for row in routes] == [(1, 1, "azo coupling"), (3, 0, "bought")]
    about = {(row[0].value, row[1].value) for row in book["about"].iter_rows(min_row=2)}
    assert {("caution", text) for text in CAUTIONS} <= about
    assert {("how sure", text) for text in HOW_SURE} <= about


@pytest.mark.parametrize("write", [candidates_csv, candidates_workbook])
def test_the_same_result_gives_the_same_bytes(write: Any) -> None:
    assert write(sample_result()) == write(sample_result())


def test_a_result_without_candidates_still_has_headings() -> None:
    empty = replace(sample_result(), candidates=(), front=(), cloud=(), campaign=None)
    assert candidates_csv(empty).decode().strip() == ",".join(column.name for column in COLUMNS)
    assert candidates_workbook(empty)


def test_about_says_what_pka_is_meant_and_leaves_out_what_is_empty() -> None:
    lines = dict(about_lines(sample_result()))
    assert "conditional" in lines["column pka"]
    assert "anchor" not in lines


def test_a_candidate_of_not_a_number_is_no_number() -> None:
    candidate = replace(sample_result().candidates[0], pka=nan, substitution=HOSTILE)
    assert written(BY_NAME["pka"], candidate) == ""
    assert written(BY_NAME["substitution"], candidate) == HOSTILE
