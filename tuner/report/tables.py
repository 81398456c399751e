"""How do the ranked candidates look as a CSV table and as a workbook?"""

from __future__ import annotations

import csv
import io
from datetime import datetime
from typing import Any

from tuner.report.columns import COLUMNS, TEXT_COLUMNS, Column, cell, written
from tuner.report.routes import told_steps
from tuner.report.wording import CAUTIONS, HOW_SURE, anchor_in_words, medium_in_words, target_in_words
from tuner.search.result import DesignResult

FIXED_DATE = datetime(2000, 1, 1)
"""Stands in the workbook in place of the hour of writing, so that the same brief gives the same bytes."""

HEADER_COLOUR = "#E4EBE6"
ROUTE_HEADINGS = (
    "rank",
    "analog",
    "step",
    "reaction",
    "reagents",
    "substrate",
    "product",
    "cautions",
    "note",
)
ROUTE_WIDTHS = (6, 22, 6, 34, 44, 44, 44, 50, 40)


def candidates_csv(result: DesignResult) -> bytes:
    """The ranked table as CSV, UTF-8, one row per candidate, columns as in `columns.COLUMNS`."""
    text = io.StringIO()
    table = csv.writer(text, lineterminator="\n")
    table.writerow(column.name for column in COLUMNS)
    for candidate in result.candidates:
        table.writerow(written(column, candidate) for column in COLUMNS)
    return text.getvalue().encode("utf-8")


def candidates_workbook(result: DesignResult) -> bytes:
    """The ranked table as a workbook: sheets candidates, routes, about; the same result gives the same
    bytes.
    """
    import xlsxwriter

    buffer = io.BytesIO()
    book = xlsxwriter.Workbook(
        buffer, {"in_memory": True, "strings_to_formulas": False, "strings_to_urls": False}
    )
    book.set_properties({"title": result.brief.title, "created": FIXED_DATE})
    head = book.add_format({"bold": True, "bg_color": HEADER_COLOUR, "bottom": 1, "text_wrap": True})
    _candidates_sheet(book, head, result)
    _routes_sheet(book, head, result)
    _about_sheet(book, head, result)
    book.close()
    return buffer.getvalue()


def _candidates_sheet(book: Any, head: Any, result: DesignResult) -> None:
    """One row per candidate, headings with units, first row and column frozen, filter on."""
    sheet = book.add_worksheet("candidates")
    for n, column in enumerate(COLUMNS):
        sheet.set_column(n, n, column.width, _number_format(book, column))
        sheet.write_string(0, n, column.heading, head)
        sheet.write_comment(0, n, column.meaning, {"visible": False})
    for row, candidate in enumerate(result.candidates, start=1):
        for n, column in enumerate(COLUMNS):
            value = cell(column, candidate)
            if value is None:
                continue
            if column.name in TEXT_COLUMNS:
                sheet.write_string(row, n, str(value))
            else:
                sheet.write_number(row, n, value)
    sheet.freeze_panes(1, 2)
    if result.candidates:
        sheet.autofilter(0, 0, len(result.candidates), len(COLUMNS) - 1)


def _number_format(book: Any, column: Column) -> Any:
    """A cell format with the column's decimals; none for text and whole numbers."""
    if column.decimals < 0:
        return None
    return book.add_format({"num_format": "0" + ("." + "0" * column.decimals if column.decimals else "")})


def _routes_sheet(book: Any, head: Any, result: DesignResult) -> None:
    """One row per step; a bought analog has one row that says so."""
    sheet = book.add_worksheet("routes")
    for n, (heading, width) in enumerate(zip(ROUTE_HEADINGS, ROUTE_WIDTHS, strict=True)):
        sheet.set_column(n, n, width)
        sheet.write_string(0, n, heading, head)
    row = 1
    for candidate in result.candidates:
        if candidate.route is None:
            continue
        steps = told_steps(candidate.route)
        if not steps:
            texts = ("bought", "", "", candidate.smiles, "", "; ".join(candidate.route.notes))
            row = _route_row(sheet, row, candidate.rank, candidate.analog, 0, texts)
        for step in steps:
            texts = (
                step.title,
                step.reagents,
                step.substrate,
                step.product,
                "; ".join(step.cautions),
                step.note,
            )
            row = _route_row(sheet, row, candidate.rank, candidate.analog, step.number, texts)
    sheet.freeze_panes(1, 2)


def _route_row(sheet: Any, row: int, rank: int, analog: str, number: int, texts: tuple[str, ...]) -> int:
    """Writes one row; gives the number of the next."""
    sheet.write_number(row, 0, rank)
    sheet.write_string(row, 1, analog)
    sheet.write_number(row, 2, number)
    for n, text in enumerate(texts, start=3):
        sheet.write_string(row, n, text)
    return row + 1


def about_lines(result: DesignResult) -> tuple[tuple[str, str], ...]:
    """What was asked, what was done, how sure it is: pairs of subject and text."""
    brief = result.brief
    lines = [
        ("title", brief.title),
        ("target", f"{target_in_words(brief.target)} in {medium_in_words(brief.target.medium)}"),
        *(
            (other.name or "further target", f"{target_in_words(other)} in {medium_in_words(other.medium)}")
            for other in brief.also
        ),
        ("anchor", anchor_in_words(brief)),
        ("search", f"{result.method}: {result.method_reason}"),
        ("certificate", result.certificate),
        ("library", f"data version {result.library_version}"),
        ("seed", str(result.seed)),
    ]
    lines += [(f"column {column.name}", column.meaning) for column in COLUMNS]
    lines += [("how sure", text) for text in HOW_SURE]
    lines += [("caution", text) for text in CAUTIONS]
    lines += [("note", text) for text in result.notes]
    return tuple((subject, text) for subject, text in lines if text)


def _about_sheet(book: Any, head: Any, result: DesignResult) -> None:
    """Subject and text."""
    sheet = book.add_worksheet("about")
    wrap = book.add_format({"text_wrap": True, "valign": "top"})
    sheet.set_column(0, 0, 26, wrap)
    sheet.set_column(1, 1, 110, wrap)
    sheet.write_string(0, 0, "about", head)
    sheet.write_string(0, 1, "", head)
    for row, (subject, text) in enumerate(about_lines(result), start=1):
        sheet.write_string(row, 0, subject)
        sheet.write_string(row, 1, text)
