"""The first sheet: what the workbook holds, how to read it, and the safety wording."""

from __future__ import annotations

from collections.abc import Sequence

from rheo.report.sheets.book import Book, Sheet

_HOW_TO_READ = (
    "Every number is in SI, with its unit in the heading.",
    "Yellow cells are inputs. Change one and the formulas that depend on it follow.",
    "Blue numbers are formulas, written from the published closed forms; black ones were worked "
    "out by the program.",
    "Columns named Difference hold formula over program, less 1; they are 0 but for rounding until "
    "an input is changed.",
    "What the program works out by itself (turbulent friction, intervals, start-up) does not "
    "follow a changed input: run the case again.",
)


_WIDTH = 110.0
_LINE_HEIGHT = 15.0


def about_sheet(
    book: Book, title: str, facts: Sequence[tuple[str, str]], safety: Sequence[str]
) -> None:
    """Write the first sheet.

    Parameters
    ----------
    book : Book
        The workbook.
    title : str
        Of the case.
    facts : sequence of (str, str)
        Name and value of what is to be known of it.
    safety : sequence of str
        Sentences that belong to the pressures and times in it.
    """
    sheet = book.sheet("About", title)
    sheet.widths(26, _WIDTH)
    row = 2
    for name, value in facts:
        sheet.text(row, 0, name, "muted")
        _wrapped(sheet, row, value)
        row += 1
    for heading, sentences in (("How to read it", _HOW_TO_READ), ("Safety", safety)):
        row += 1
        sheet.text(row, 0, heading, "head")
        sheet.text(row, 1, "", "head")
        for sentence in sentences:
            row += 1
            _wrapped(sheet, row, sentence)
        row += 1


def _wrapped(sheet: Sheet, row: int, text: str) -> None:
    """Write a sentence in a row that is high enough for it; viewers do not make it so."""
    sheet.text(row, 1, text, "wrapped")
    lines = min(-(-len(text) // int(_WIDTH)), 12)
    sheet.sheet.set_row(row, _LINE_HEIGHT * max(lines, 1))
