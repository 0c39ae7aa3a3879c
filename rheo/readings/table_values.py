"""The numbers of one table, each checked where it stands."""

from __future__ import annotations

from collections.abc import Iterator, Sequence
from dataclasses import dataclass, field

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, InputError, ReadingsError, UnitError
from rheo.readings.blocks import Table
from rheo.readings.branches import branch_of_word
from rheo.readings.columns import Column
from rheo.readings.grid import Grid, Row, shown
from rheo.readings.headings import convert
from rheo.readings.numerals import Cell, looks_numeric, parse_clock, parse_number

FloatArray = NDArray[np.float64]

# Beyond these a number is a slip of the pen in whatever unit; sums of such would overflow.
SMALLEST, LARGEST = 1e-25, 1e25


@dataclass(frozen=True)
class TableValues:
    """What one table holds.

    Parameters
    ----------
    numbers : dict of str to array
        Columns in SI by quantity, shape (n,).
    branch : list of str or None
        Branch of each reading where the table has such a column.
    lines : tuple of int
        Line of each reading.
    used : tuple of Column
        Columns that were used.
    cautions : tuple of Caution
        What was left out, and why.
    """

    numbers: dict[str, FloatArray]
    branch: list[str] | None
    lines: tuple[int, ...]
    used: tuple[Column, ...]
    cautions: tuple[Caution, ...] = field(default=())


def number_cells(table: Table, columns: Sequence[Column], grid: Grid) -> Iterator[tuple[Cell, str]]:
    """Yield the cells of columns that hold numbers, each with its place."""
    for row in table.rows:
        for column in columns:
            yield _bare(row.cell(column.index), column), grid.at(row.line, column.heading)


def table_values(
    table: Table, columns: Sequence[Column], needed: Sequence[str], grid: Grid, decimal: str
) -> TableValues:
    """Return the numbers of a table in SI.

    Parameters
    ----------
    table : Table
        Where they stand.
    columns : sequence of Column
        Which quantity stands where.
    needed : sequence of str
        Quantities that make the readings: an error in one of these is an error of the file. Any
        other column that holds one is not used, and a Caution says so.
    grid : Grid
        The file, for places.
    decimal : str
        Decimal mark.

    Raises
    ------
    InputError
        For a cell that holds no finite number, or one that is not allowed.
    """
    needed_columns = [column for column in columns if column.quantity.key in needed]
    for column in columns:
        if column.problem and (column.quantity.key in needed or column.mapped):
            raise UnitError(column.problem, f"{grid.place}, column '{shown(column.heading)}'")
    rows, cautions = _readings_rows(table, columns, needed_columns, grid)
    resting = [row for row in rows if any(_is_zero(row, c, decimal) for c in needed_columns)]
    if resting:
        at_rest = {row.line for row in resting}
        rows = [row for row in rows if row.line not in at_rest]
        names = " or ".join(column.quantity.name for column in needed_columns)
        cautions.append(
            Caution(
                code="at-rest",
                sentence=f"{_lines(resting, grid)} {'is' if len(resting) == 1 else 'are'} left "
                f"out: {names} is 0 there, which is no point of a flow curve.",
                advice="Nothing to do if the instrument was at rest or read below its resolution.",
                place=grid.place,
            )
        )
    numbers: dict[str, FloatArray] = {}
    branch: list[str] | None = None
    used: list[Column] = []
    for column in columns:
        key = column.quantity.key
        try:
            if column.problem:
                raise UnitError(column.problem, f"{grid.place}, column '{shown(column.heading)}'")
            if column.quantity.text:
                branch = _branches(rows, column, grid)
            else:
                numbers[key] = _numbers(rows, column, grid, decimal)
        except InputError as error:
            if key in needed or column.mapped:
                raise
            cautions.append(
                Caution(
                    code="column-not-used",
                    sentence=f"The {column.quantity.name} is not used: {error.sentence}.",
                    advice="Put the column right if it matters.",
                    place=error.place,
                )
            )
            continue
        used.append(column)
    lines = tuple(row.line for row in rows)
    return TableValues(numbers, branch, lines, tuple(used), tuple(cautions))


def _readings_rows(
    table: Table, columns: Sequence[Column], needed: Sequence[Column], grid: Grid
) -> tuple[list[Row], list[Caution]]:
    """Return the rows that hold readings, without what stands below the table."""
    used = [column.index for column in columns if not column.quantity.text]
    rows = [
        row
        for row in table.rows
        if any(index < len(row.cells) and row.filled[index] for index in used)
        and not _repeats(row, table)
    ]
    _check_widths(rows, table, grid)
    full = [all(looks_numeric(_bare(row.cell(c.index), c)) for c in needed) for row in rows]
    last = max((index for index, is_full in enumerate(full) if is_full), default=None)
    if last is None:
        return rows, []
    for index in range(last + 1, len(rows)):
        row = rows[index]
        numbers = any(looks_numeric(row.cell(i)) for i in used if row.cell(i) != "")
        if row.line in table.blank_before or not numbers:
            below = [one for one in rows[index:] if sum(one.filled) > 1]
            if not below:
                return rows[:index], []
            caution = Caution(
                code="below-the-table",
                sentence=f"{_lines(below, grid)} below the table "
                f"{'holds' if len(below) == 1 else 'hold'} no full reading and "
                f"{'is' if len(below) == 1 else 'are'} not read.",
                advice="Look whether a reading is missing.",
                place=grid.place,
            )
            return rows[:index], [caution]
    return rows, []


def _check_widths(rows: Sequence[Row], table: Table, grid: Grid) -> None:
    """Refuse numbers that stand under no heading: commas that are no separators make such."""
    width = len(table.headings)
    if not width:
        return
    for row in rows:
        count = len(row.cells)
        beyond = any(looks_numeric(cell) for cell in row.cells[width:] if cell != "")
        if beyond or (grid.by_blanks and count != width and row.numbers):
            raise ReadingsError(
                f"there are {count} values for {width} headings; there must be as many, parted by "
                "semicolons or tabs if commas are decimal marks",
                grid.at(row.line),
            )


def _repeats(row: Row, table: Table) -> bool:
    texts = tuple(cell for cell in row.cells if isinstance(cell, str) and cell.strip())
    if row.numbers or not texts:
        return False
    return texts in (tuple(filter(None, table.headings)), tuple(filter(None, table.units)))


def _lines(rows: Sequence[Row], grid: Grid) -> str:
    shown_lines = ", ".join(str(row.line) for row in rows[:8])
    more = f" and {len(rows) - 8} more" if len(rows) > 8 else ""
    word = grid.row_word.capitalize() + ("s" if len(rows) > 1 else "")
    return f"{word} {shown_lines}{more}"


def _bare(cell: Cell, column: Column) -> Cell:
    if column.quantity.percent and isinstance(cell, str):
        return cell.strip().removesuffix("%").strip()
    return cell


def _is_zero(row: Row, column: Column, decimal: str) -> bool:
    return parse_number(_bare(row.cell(column.index), column), decimal) == 0.0


def _numbers(rows: Sequence[Row], column: Column, grid: Grid, decimal: str) -> FloatArray:
    is_time = column.quantity.key == "time"
    values = np.empty(len(rows))
    for index, row in enumerate(rows):
        cell = _bare(row.cell(column.index), column)
        number = parse_number(cell, decimal)
        if number is None and is_time:
            number = parse_clock(cell)
        if number is None or not np.isfinite(number):
            raise _no_number(cell, number, column, row, grid, decimal)
        values[index] = number
    with np.errstate(over="ignore"):
        converted = convert(values, column.quantity, column.unit, grid.place)
    if is_time:
        return converted - (converted[0] if converted.size and abs(converted[0]) > 1e9 else 0.0)
    below = column.quantity.below
    bad = ~((converted >= SMALLEST) & (converted <= LARGEST) & (converted < below))
    if bad.any():
        index = int(np.argmax(bad))
        sign = "above 0" if converted[index] <= 0 else f"between {SMALLEST:g} and {LARGEST:g} in SI"
        if np.isfinite(below):
            sign = f"above 0 and below {below:g}, or {100.0 * below:g} %"
        if column.quantity.key == "temperature":
            sign = "above absolute zero"
        raise ReadingsError(
            f"the {column.quantity.name} is {values[index]:g} {column.unit}; it must be {sign}",
            grid.at(rows[index].line, column.heading),
        )
    return converted


def _no_number(
    cell: Cell, number: float | None, column: Column, row: Row, grid: Grid, decimal: str
) -> ReadingsError:
    text, place = shown(cell), grid.at(row.line, column.heading)
    example = "12,5" if decimal == "," else "12.5"
    if isinstance(cell, str) and not cell.strip():
        # A formula that went wrong comes out of a workbook as an empty cell.
        found = "empty or shows an error" if grid.sheet else "empty"
        return ReadingsError(f"the cell is {found}; write a number such as {example}", place)
    if number is None and isinstance(cell, str):
        other = "." if decimal == "," else ","
        if parse_number(cell, other) is not None:
            return ReadingsError(
                f"'{text}' is not a number with the decimal mark '{decimal}' of this file; "
                f"write a number such as {example}",
                place,
            )
        return ReadingsError(f"'{text}' is not a number; write a number such as {example}", place)
    return ReadingsError(f"'{text}' is not a finite number; write one such as {example}", place)


def _branches(rows: Sequence[Row], column: Column, grid: Grid) -> list[str]:
    found = []
    for row in rows:
        word = str(row.cell(column.index))
        branch = branch_of_word(word)
        if branch is None:
            raise ReadingsError(
                f"'{shown(word)}' is no branch of a sweep; write up, down or hold",
                grid.at(row.line, column.heading),
            )
        found.append(branch)
    return found
