"""Workbooks as grids: XLSX, XLS and ODS, read in a process of its own."""

from __future__ import annotations

import difflib
import json
import re
import subprocess
import sys
from pathlib import Path
from typing import Any

from rheo.errors import ReadingsError
from rheo.readings import workbook_child
from rheo.readings.grid import Grid, Row, is_comment, is_rule, shown
from rheo.readings.numerals import Cell
from rheo.readings.text_grid import MOST_COLUMNS, MOST_LINES

OLE_MAGIC = b"\xd0\xcf\x11\xe0\xa1\xb1\x1a\xe1"
ZIP_MAGIC = b"PK\x03\x04"
# The stream that an encrypted XLSX holds, and the record that makes an XLS a protected one.
_PROTECTED = re.compile(
    re.escape("EncryptedPackage".encode("utf-16-le"))
    + rb"|\x09\x08\x10\x00.{16}(?:\x86\x00\x00\x00)?\x2f\x00",
    re.DOTALL,
)
_WALL_SECONDS = 20.0
_TOO_MUCH = "reading the workbook takes too much memory or time; save only the sheet that "
_TOO_MUCH += "holds the readings, as CSV"


def is_workbook(data: bytes) -> bool:
    """Return whether a file begins as a workbook does."""
    return data.startswith((OLE_MAGIC, ZIP_MAGIC))


def workbook_grids(data: bytes, place: str, sheet: str | int | None) -> tuple[Grid, ...]:
    """Return the sheets of a workbook as grids.

    Parameters
    ----------
    data : bytes
        The content of the file.
    place : str
        Name of the file, for errors.
    sheet : str, int or None
        Name of a sheet, or its number counted from 1; every visible sheet when None.

    Raises
    ------
    ReadingsError
        If the workbook is broken, protected or too large, or has no such sheet.
    """
    if data.startswith(OLE_MAGIC) and _PROTECTED.search(data):
        raise ReadingsError(workbook_child.PASSWORD, place)
    sheets = _read_in_child(data, place)
    if sheet is None:
        wanted = [one for one in sheets if not one["hidden"]] or sheets
    else:
        wanted = [_chosen(sheets, sheet, place)]
    grids = tuple(_grid(one, place) for one in wanted if one["rows"])
    if not grids:
        raise ReadingsError("the workbook has no cell with anything in it", place)
    return grids


def _chosen(sheets: list[dict[str, Any]], sheet: str | int, place: str) -> dict[str, Any]:
    if isinstance(sheet, int) and 1 <= sheet <= len(sheets):
        return sheets[sheet - 1]
    names = [one["name"] for one in sheets]
    if sheet in names:
        return sheets[names.index(sheet)]
    listed = ", ".join(f"'{shown(name)}'" for name in names[:12])
    near = difflib.get_close_matches(str(sheet), names, n=1)
    hint = f" (did you mean '{shown(near[0])}'?)" if near else ""
    raise ReadingsError(f"there is no sheet '{shown(sheet)}'{hint}; there are {listed}", place)


def _read_in_child(data: bytes, place: str) -> list[dict[str, Any]]:
    command = [sys.executable, "-P", str(Path(workbook_child.__file__).resolve())]
    try:
        done = subprocess.run(
            command, input=data, capture_output=True, timeout=_WALL_SECONDS, check=False
        )
    except subprocess.TimeoutExpired:
        raise ReadingsError(_TOO_MUCH, place) from None
    if done.returncode < 0:
        raise ReadingsError(_TOO_MUCH, place)
    if done.returncode != 0:
        raise ReadingsError(workbook_child.BROKEN, place)
    answer: dict[str, Any] = json.loads(done.stdout)
    if "refused" in answer:
        raise ReadingsError(answer["refused"], place)
    sheets: list[dict[str, Any]] = answer["sheets"]
    return sheets


def _grid(sheet: dict[str, Any], place: str) -> Grid:
    first_row, first_column = sheet["start"]
    where = f"{place}, sheet '{shown(sheet['name'])}'"
    if len(sheet["rows"]) > MOST_LINES:
        raise ReadingsError(
            f"it has {len(sheet['rows'])} rows; at most {MOST_LINES} are allowed", where
        )
    if first_column + max((len(row) for row in sheet["rows"]), default=0) > MOST_COLUMNS:
        raise ReadingsError(f"it has more than {MOST_COLUMNS} columns", where)
    rows = tuple(
        _row(first_row + index + 1, [""] * first_column + row)
        for index, row in enumerate(sheet["rows"])
    )
    return Grid(rows, where, "row", sheet["name"])


def _row(line: int, cells: list[Cell]) -> Row:
    while cells and cells[-1] == "":
        cells.pop()
    text = " ".join(str(cell) for cell in cells if cell != "")
    comment = is_comment(text)
    if is_rule(text):
        return Row(line, (), text)
    if comment:
        first = next(index for index, cell in enumerate(cells) if cell != "")
        cells[first] = str(cells[first]).lstrip().lstrip("#/%!")
    return Row(line, tuple(cells), text, comment)
