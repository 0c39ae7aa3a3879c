"""The table of a batch: CSV or XLSX, one line a file."""

from __future__ import annotations

import csv
import io
import os
from pathlib import Path

from rheo.batches.row import Row
from rheo.batches.run import BatchResult
from rheo.errors import InputError
from rheo.models import model_records

Cell = str | float | int | None
SUFFIXES = (".csv", ".xlsx")
# What a spreadsheet would take for a formula.
_FORMULA = ("=", "+", "-", "@", "\t", "\r")


def table_cells(result: BatchResult) -> tuple[list[str], list[list[Cell]]]:
    """Return headings and lines of the table, in SI.

    A column for each parameter and criterion that occurs, in the order of the models; what a
    file does not have stays empty.
    """
    parameters = _parameters(result)
    criteria = [key for key in model_records() if any(key in row.aicc for row in result.rows)]
    head = [
        *("file", "fitted", "reason", "points", "geometry", "temperature [K]"),
        *("lowest rate [1/s]", "highest rate [1/s]", "best model", "Akaike weight"),
        *("RMS relative error", "worst relative error"),
    ]
    for key, unit in parameters.items():
        head += [f"{key} [{unit}]", f"{key} standard error [{unit}]"]
    head += [f"AICc {key}" for key in criteria]
    if result.rates:
        head.append("drifted beyond doubt")
    for rate in result.rates:
        ratio = f"stress over reference at {rate:.4g} 1/s"
        head += [ratio, f"{ratio}, low (95 %)", f"{ratio}, high (95 %)"]
    head += ["cautions", "what they say"]
    return head, [_line(row, list(parameters), criteria, result.rates) for row in result.rows]


def _parameters(result: BatchResult) -> dict[str, str]:
    units = {one.key: one.unit for record in model_records().values() for one in record.parameters}
    used = dict.fromkeys(key for row in result.rows for key in row.values)
    ordered = [key for key in units if key in used] + [key for key in used if key not in units]
    return {key: units.get(key, "SI") for key in ordered}


def _line(
    row: Row, parameters: list[str], criteria: list[str], rates: tuple[float, ...]
) -> list[Cell]:
    cells: list[Cell] = [row.file, _yes(row.fitted), row.reason, row.points or None, row.geometry]
    cells += [row.temperature, row.lowest_rate, row.highest_rate, row.best, row.weight]
    cells += [row.rms_relative_error, row.worst_relative_error]
    for key in parameters:
        cells += [row.values.get(key), row.errors.get(key)]
    cells += [row.aicc.get(key) for key in criteria]
    if rates:
        cells.append(_yes(row.drifted))
    at = {one.rate: one for one in row.drift}
    for rate in rates:
        one = at.get(rate)
        cells += [None] * 3 if one is None else [one.ratio, one.low, one.high]
    codes = dict.fromkeys(caution.code for caution in row.cautions)
    cells += ["; ".join(codes), " ".join(str(caution) for caution in row.cautions)]
    return cells


def _yes(value: bool | None) -> str:
    return {True: "yes", False: "no", None: ""}[value]


def check_table(path: Path) -> None:
    """Refuse a table that cannot be written, before any work is done for it.

    Raises
    ------
    InputError
        If the name ends in something else than .csv or .xlsx, or its folder is not there.
    """
    if path.is_dir():
        raise InputError("it is a folder; give the name of a table in it", str(path))
    if not path.parent.is_dir():
        raise InputError("there is no such folder for the table; make it first", str(path.parent))
    if path.suffix.lower() not in SUFFIXES:
        raise InputError(f"the table must be named {' or '.join(SUFFIXES)}", str(path))


def write_table(result: BatchResult, path: str | os.PathLike[str]) -> None:
    """Write the table of a batch.

    Parameters
    ----------
    result : BatchResult
        What the batch came to.
    path : path
        Ending in ``.csv`` or ``.xlsx``; a file of that name is replaced, at once or not at all.

    Raises
    ------
    InputError
        If it ends in something else, or cannot be written there.
    """
    place = Path(path)
    check_table(place)
    head, lines = table_cells(result)
    content = _csv(head, lines) if place.suffix.lower() == ".csv" else _xlsx(head, lines)
    part = place.with_name(place.name + ".part")
    try:
        part.write_bytes(content)
        os.replace(part, place)
    except OSError as error:
        part.unlink(missing_ok=True)
        reason = error.strerror or "it is no file"
        raise InputError(f"the table cannot be written: {reason}", str(place)) from None


def _csv(head: list[str], lines: list[list[Cell]]) -> bytes:
    text = io.StringIO()
    writer = csv.writer(text, lineterminator="\n")
    writer.writerow(head)
    writer.writerows([_safe(cell) for cell in line] for line in lines)
    return text.getvalue().encode("utf-8", "replace")


def _safe(cell: Cell) -> Cell:
    """Return a cell that a spreadsheet takes for text where it is text."""
    if isinstance(cell, str) and cell.startswith(_FORMULA):
        return f"'{cell}"
    return "" if cell is None else cell


def _xlsx(head: list[str], lines: list[list[Cell]]) -> bytes:
    import datetime

    from rheo.report.sheets.book import Book

    book = Book("Fits of many files", datetime.date.today())
    sheet = book.sheet("fits", "Fits of many files", "In SI; one line a file.")
    first = 3
    sheet.heads(first, head)
    for row, line in enumerate(lines, first + 1):
        for column, cell in enumerate(line):
            if isinstance(cell, str) and cell:
                sheet.text(row, column, cell)
            elif cell is not None and not isinstance(cell, str):
                sheet.number(row, column, cell)
    sheet.widths(28, 8, 40, 8, 18, *([14] * (len(head) - 5)))
    sheet.sheet.freeze_panes(first + 1, 1)
    sheet.sheet.autofilter(first, 0, first + len(lines), len(head) - 1)
    return book.bytes()
