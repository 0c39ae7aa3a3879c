"""A look at a file before anything is known of it: its sheets, its headings and first rows."""

from __future__ import annotations

from dataclasses import dataclass

import streamlit as st

from rheo.errors import InputError
from rheo.readings.blocks import find_tables
from rheo.readings.columns import UserChoice
from rheo.readings.file_bytes import file_bytes
from rheo.readings.grid import Grid, Row
from rheo.readings.text_grid import text_grid
from rheo.readings.workbook_grid import is_workbook, workbook_grids
from ui.results import StoredFile


@dataclass(frozen=True)
class Sheet:
    """One sheet, or the whole of a text file.

    Parameters
    ----------
    name : str
        Name of the sheet; empty for a text file.
    headings : tuple of str
        Headings of the likeliest table.
    first : tuple of str
        First cell under each heading.
    labels : tuple of str
        Titles of its tables, where there are several.
    """

    name: str
    headings: tuple[str, ...]
    first: tuple[str, ...]
    labels: tuple[str, ...] = ()


def look(file: StoredFile) -> tuple[Sheet, ...]:
    """Return the sheets of a file; none where it cannot be read at all."""
    return _look(file.digest, file)


@st.cache_resource(max_entries=16, show_spinner=False)
def _look(digest: str, _file: StoredFile) -> tuple[Sheet, ...]:  # noqa: ARG001
    try:
        data, place = file_bytes(_file.data, _file.label)
        grids = (
            workbook_grids(data, place, None) if is_workbook(data) else (text_grid(data, place),)
        )
        return tuple(_sheet(grid) for grid in grids)
    except InputError:
        return ()


def _sheet(grid: Grid) -> Sheet:
    tables = find_tables(grid, UserChoice({}, {}))
    if not tables:
        return _unread(grid)
    table = tables[0]
    headings = tuple(table.headings[i] if i < len(table.headings) else "" for i in table.columns)
    first = tuple(str(table.rows[0].cell(i)) for i in table.columns) if table.rows else ()
    labels = tuple(one.label for one in tables) if len(tables) > 1 else ()
    return Sheet(grid.sheet, headings, first, labels)


def _unread(grid: Grid) -> Sheet:
    """Return a sheet of which no heading was understood: the row above its first numbers."""
    above: Row | None = None
    for row in grid.rows:
        if row.comment or row.blank:
            continue
        if row.numbers and above is not None:
            width = max(len(above.cells), len(row.cells))
            headings = tuple(str(above.cell(i)).strip() for i in range(width))
            return Sheet(grid.sheet, headings, tuple(str(row.cell(i)) for i in range(width)))
        above = row
    return Sheet(grid.sheet, (), ())
