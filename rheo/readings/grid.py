"""A file as rows of cells, before anything is understood of it."""

from __future__ import annotations

import re
from dataclasses import dataclass
from functools import cached_property, lru_cache

from rheo.readings.numerals import Cell, looks_numeric

LONGEST_SHOWN = 60
COMMENT_MARKS = ("#", "//", "%", "!")
# What a spreadsheet writes where a formula went wrong is no comment.
_SHEET_ERROR = re.compile(r"#(n/a|na|num!|div/0!|value!|ref!|name\?|null!)", re.IGNORECASE)
_RULE = re.compile(r"[\s\-_=+|*.~;,]*")
# A heading of its own, not a comment.
_SHARE_HEADING = re.compile(r"%\s*(torque|of|fs|full|drehmoment|f\.s)\b", re.IGNORECASE)


@dataclass(frozen=True)
class Row:
    """One row of a file.

    Parameters
    ----------
    line : int
        Line of the file, or row of the sheet, counted from 1.
    cells : tuple of str or float
        Cells; empty text where there is nothing.
    text : str
        The row as one text.
    comment : bool
        Whether it starts with a mark of a comment.
    """

    line: int
    cells: tuple[Cell, ...]
    text: str
    comment: bool = False

    @cached_property
    def blank(self) -> bool:
        """Whether nothing, or only a ruled line, stands in it."""
        return not any(self.filled)

    @cached_property
    def filled(self) -> tuple[bool, ...]:
        """Whether each cell holds something."""
        return tuple(not isinstance(cell, str) or bool(cell.strip()) for cell in self.cells)

    def cell(self, index: int) -> Cell:
        """Return a cell, empty text beyond the end of the row."""
        return self.cells[index] if index < len(self.cells) else ""

    @cached_property
    def numbers(self) -> int:
        """How many cells are numbers, with either decimal mark."""
        return sum(looks_numeric(cell) for cell in self.cells)


@dataclass(frozen=True)
class Grid:
    """The rows of a text file or of one sheet.

    Parameters
    ----------
    rows : tuple of Row
        In order, blank ones and comments included.
    place : str
        File, and sheet if there is one: the beginning of every error sentence.
    row_word : str
        ``line`` in a text file, ``row`` in a sheet.
    sheet : str
        Name of the sheet; empty for a text file.
    by_blanks : bool
        Whether columns are parted by blanks only, so that an empty cell would shift the others.
    """

    rows: tuple[Row, ...]
    place: str
    row_word: str = "line"
    sheet: str = ""
    by_blanks: bool = False

    def at(self, line: int, column: str = "") -> str:
        """Return the place of a row, and of a column in it, for an error."""
        where = f"{self.place}, {self.row_word} {line}"
        return f"{where}, column '{shown(column)}'" if column else where


def is_comment(text: str) -> bool:
    """Return whether a line is a comment."""
    start = text.lstrip().lstrip('"').lstrip()
    if _SHEET_ERROR.match(start) or _SHARE_HEADING.match(start):
        return False
    return start.startswith(COMMENT_MARKS)


def is_rule(text: str) -> bool:
    """Return whether a line is empty or only drawn, such as ``-----``."""
    return _RULE.fullmatch(text) is not None


def shown(text: object) -> str:
    """Return a text from a file as a sentence can show it: one line, short, printable."""
    return _shown(str(text))


@lru_cache(maxsize=256)
def _shown(text: str) -> str:
    line = re.sub(r"\s+", " ", text).strip()
    line = "".join(sign if sign.isprintable() else "?" for sign in line)
    return line if len(line) <= LONGEST_SHOWN else line[: LONGEST_SHOWN - 3] + "..."
