"""Sheets of the workbook: numbers as numbers, text as text, formulas with their stored results."""

from __future__ import annotations

import datetime
import io
import math
from collections.abc import Sequence
from typing import TYPE_CHECKING, Any

from rheo.report.palette import LIGHT
from rheo.report.sheets.terms import Term
from rheo.report.text import clean

if TYPE_CHECKING:
    import xlsxwriter

# A cell holds no more characters than this (ECMA-376 viewers agree on it).
LONGEST_CELL = 32_767
_HEAD_HEIGHT = 46
# Significant digits that a cell shows; it holds all of them.
_SHOWN = 5
_FORMATS: dict[str, dict[str, Any]] = {
    "title": {"bold": True, "font_size": 15, "font_color": LIGHT.accent},
    "head": {
        "bold": True, "text_wrap": True, "valign": "vcenter", "bottom": 1, "indent": 1,
        "bg_color": LIGHT.strip,
    },
    "text": {"valign": "top", "indent": 1},
    "wrapped": {"text_wrap": True, "valign": "top", "indent": 1},
    "muted": {"font_color": LIGHT.muted, "valign": "top", "indent": 1},
    "input": {
        "bg_color": "#fff8dc", "border": 1, "border_color": LIGHT.rule,
    },
    "number": {"valign": "top"},
    "formula": {"valign": "top", "font_color": LIGHT.accent},
    "difference": {"num_format": "0.0E+00", "valign": "top", "font_color": LIGHT.accent},
    "percent": {"num_format": "0.00%", "valign": "top"},
    "result": {"bold": True, "font_color": LIGHT.accent, "top": 1},
}  # fmt: skip


class Book:
    """A workbook in memory.

    Parameters
    ----------
    title : str
        For the file's properties.
    date : datetime.date
        Likewise; nothing else in the file depends on when it is made.
    """

    def __init__(self, title: str, date: datetime.date) -> None:
        import xlsxwriter

        self._buffer = io.BytesIO()
        options = {
            "in_memory": True,
            "strings_to_formulas": False,
            "strings_to_urls": False,
            "strings_to_numbers": False,
            "nan_inf_to_errors": False,
        }
        self.file: xlsxwriter.Workbook = xlsxwriter.Workbook(self._buffer, options)
        made = datetime.datetime(date.year, date.month, date.day, tzinfo=datetime.UTC)
        self.file.set_properties(
            {"title": clean(title)[:200], "author": "", "comments": "", "created": made}
        )
        self.file.set_calc_mode("auto")
        self._formats: dict[tuple[str, str], Any] = {}

    def format(self, name: str, value: float | None = None) -> Any:
        """Return a cell format by name, with the digits that suit a value."""
        how = _FORMATS[name]
        digits = how.get("num_format") or ("General" if value is None else digits_of(value))
        if (name, digits) not in self._formats:
            made = self.file.add_format({**how, "num_format": digits})
            self._formats[name, digits] = made
        return self._formats[name, digits]

    def sheet(self, name: str, title: str, remark: str = "") -> Sheet:
        """Add a sheet with a title and a remark in its first two rows."""
        return Sheet(self, name, title, remark)

    def bytes(self) -> bytes:
        """Close the workbook and return the file."""
        self.file.close()
        return self._buffer.getvalue()


class Sheet:
    """One sheet; rows and columns are counted from 0.

    Parameters
    ----------
    book : Book
        It belongs to.
    name, title, remark : str
        On its tab, in its first row and in its second.
    """

    def __init__(self, book: Book, name: str, title: str, remark: str = "") -> None:
        self.book = book
        self.name = name
        self.sheet = book.file.add_worksheet(name)
        self.sheet.hide_gridlines(2)
        self.sheet.set_landscape()
        self.sheet.set_paper(9)
        self.sheet.fit_to_pages(1, 0)
        self.text(0, 0, title, "title")
        if remark:
            self.text(1, 0, remark, "muted")

    def widths(self, *widths: float) -> None:
        """Set the widths of the first columns, in characters."""
        for column, width in enumerate(widths):
            self.sheet.set_column(column, column, width)

    def text(self, row: int, column: int, value: object, how: str = "text") -> None:
        """Write text, whatever it begins with; what a cell cannot hold is counted."""
        words = clean(value)
        if len(words) > LONGEST_CELL:
            words = f"{words[: LONGEST_CELL - 60]}… ({len(words) - LONGEST_CELL + 60} more)"
        self.sheet.write_string(row, column, words, self.book.format(how))

    def heads(self, row: int, headings: Sequence[str], column: int = 0) -> None:
        """Write a row of column headings."""
        for number, heading in enumerate(headings):
            self.text(row, column + number, heading, "head")
        self.sheet.set_row(row, _HEAD_HEIGHT)

    def number(self, row: int, column: int, value: Any, how: str = "number") -> Term:
        """Write a number; one that is not known leaves the cell empty."""
        known = float(value) if value is not None else math.nan
        if math.isfinite(known):
            self.sheet.write_number(row, column, known, self.book.format(how, known))
        else:
            self.sheet.write_blank(row, column, None, self.book.format(how))
        return Term(address(row, column), known)

    def formula(self, row: int, column: int, term: Term, how: str = "formula") -> Term:
        """Write a live formula with its result stored, and return the cell."""
        stored = term.value if math.isfinite(term.value) else "#NUM!"
        shown = self.book.format(how, term.value)
        self.sheet.write_formula(row, column, f"={term.text}", shown, stored)
        return Term(address(row, column), term.value)

    def there(self, term: Term) -> Term:
        """Return a cell of this sheet as another sheet refers to it."""
        return Term(f"'{self.name}'!{term.text}", term.value)


def digits_of(value: float) -> str:
    """Return the number format that shows a value with five significant digits."""
    if not math.isfinite(value) or (value == round(value, 0) and abs(value) < 1e7):
        return "General"
    power = math.floor(math.log10(abs(value)))
    if not -4 <= power < 7:
        return f"0.{'0' * (_SHOWN - 1)}E+00"
    decimals = max(0, _SHOWN - 1 - power)
    return f"0.{'0' * decimals}" if decimals else "0"


def address(row: int, column: int) -> str:
    """Return ``$B$3`` for row 2 and column 1."""
    letters = ""
    number = column + 1
    while number:
        number, rest = divmod(number - 1, 26)
        letters = chr(ord("A") + rest) + letters
    return f"${letters}${row + 1}"
