"""Reads a workbook in a process of its own, with limits, and prints its cells as JSON.

The reader of workbooks is quick but can be made to use any amount of memory, or to end the
process, by a small file. It runs here, so that nothing else is hurt. This file is run as a script
and takes nothing from the rest of the program.
"""

from __future__ import annotations

import contextlib
import datetime
import io
import json
import re
import sys
import zipfile
import zlib
from typing import Any

MEMORY_BYTES = 700 * 2**20
CPU_SECONDS = 8
UNPACKED_BYTES = 60 * 2**20
MOST_CELLS = 2_000_000
MOST_TEXT = 30 * 2**20
MOST_PARTS = 2_000
_CHUNK = 2**20
_REFERENCE = re.compile(rb'<(?:\w+:)?c [^>]*?\br="([A-Z]{1,3})([0-9]{1,7})"')
_TOO_BIG = (
    f"the workbook unpacks to more than {UNPACKED_BYTES // 2**20} MB; save only the sheet that "
    "holds the readings"
)
_TOO_WIDE = f"a sheet spans more than {MOST_CELLS} cells; delete what stands far from the readings"
PASSWORD = "the workbook is protected by a password; save it without one"
BROKEN = "the file cannot be read as a workbook; open it in a spreadsheet program and save it anew"


class RefusedError(ValueError):
    """A workbook that is not read, with the sentence that says why."""


def limit_this_process() -> None:
    """Bound memory, processor time and written files of this process, where that can be done."""
    try:
        import resource
    except ImportError:
        return
    for limit, value in (
        (resource.RLIMIT_AS, MEMORY_BYTES),
        (resource.RLIMIT_CPU, CPU_SECONDS),
        (resource.RLIMIT_CORE, 0),
        (resource.RLIMIT_FSIZE, 0),
    ):
        _, hard = resource.getrlimit(limit)
        within = value if hard == resource.RLIM_INFINITY else min(value, hard)
        # Some systems do not bound memory; the limits on processor time and size remain.
        with contextlib.suppress(ValueError, OSError):
            resource.setrlimit(limit, (within, hard))


def check_archive(data: bytes) -> None:
    """Refuse an archive that unpacks to too much, before anything unpacks it in full.

    Parameters
    ----------
    data : bytes
        The content of an XLSX, XLSB or ODS file.

    Raises
    ------
    RefusedError
        If it is no archive, too large, declares a document type, or spans too many cells.
    """
    try:
        with zipfile.ZipFile(io.BytesIO(data)) as archive:
            parts = archive.infolist()
            if len(parts) > MOST_PARTS or sum(part.file_size for part in parts) > UNPACKED_BYTES:
                raise RefusedError(_TOO_BIG)
            if any(part.flag_bits & 1 for part in parts):
                raise RefusedError(PASSWORD)
            left = UNPACKED_BYTES
            for part in parts:
                left -= _check_part(archive, part, left)
    except RefusedError:
        raise
    except (
        zipfile.BadZipFile,
        zlib.error,
        EOFError,
        LookupError,
        NotImplementedError,
        OSError,
        OverflowError,
        RuntimeError,
        ValueError,
    ):
        raise RefusedError(BROKEN) from None


def _check_part(archive: zipfile.ZipFile, part: zipfile.ZipInfo, left: int) -> int:
    """Unpack one part a piece at a time, and return its true size."""
    size = 0
    is_xml = part.filename.lower().endswith((".xml", ".rels", ".vml"))
    is_sheet = "worksheets/" in part.filename.lower() and is_xml
    columns: list[int] = []
    rows: list[int] = []
    rest = b""
    with archive.open(part) as stream:
        while piece := stream.read(_CHUNK):
            size += len(piece)
            if size > left:
                raise RefusedError(_TOO_BIG)
            text = rest + piece
            if is_xml and (b"<!DOCTYPE" in text or b"<!ENTITY" in text):
                raise RefusedError(BROKEN)
            if is_sheet:
                found = _REFERENCE.findall(text)
                columns += {_column(letters) for letters, _ in found}
                rows += {int(number) for _, number in found}
                columns, rows = _ends(columns), _ends(rows)
            rest = piece[-200:]
    if columns:
        span = (columns[-1] - columns[0] + 1) * (rows[-1] - rows[0] + 1)
        if span > MOST_CELLS:
            raise RefusedError(_TOO_WIDE)
    return size


def _ends(values: list[int]) -> list[int]:
    return [min(values), max(values)] if values else []


def _column(letters: bytes) -> int:
    number = 0
    for letter in letters:
        number = 26 * number + letter - 64
    return number


def read_workbook(data: bytes) -> list[dict[str, Any]]:
    """Return the sheets of a workbook: name, whether hidden, first cell, rows of cells.

    Parameters
    ----------
    data : bytes
        The content of the file.

    Raises
    ------
    RefusedError
        If it is broken, protected or too large.
    """
    import python_calamine

    sheets: list[dict[str, Any]] = []
    cells = text = 0
    try:
        book = python_calamine.CalamineWorkbook.from_filelike(io.BytesIO(data))
        for about in book.sheets_metadata:
            if about.typ != python_calamine.SheetTypeEnum.WorkSheet:
                continue
            sheet = book.get_sheet_by_name(about.name)
            start, end = sheet.start or (0, 0), sheet.end or (0, 0)
            cells += (end[0] - start[0] + 1) * (end[1] - start[1] + 1)
            if cells > MOST_CELLS:
                raise RefusedError(_TOO_WIDE)
            rows = [[_plain(cell) for cell in row] for row in sheet.to_python()]
            text += sum(len(cell) for row in rows for cell in row if isinstance(cell, str))
            if text > MOST_TEXT:
                raise RefusedError(_TOO_BIG)
            hidden = about.visible != python_calamine.SheetVisibleEnum.Visible
            sheets.append({"name": about.name, "hidden": hidden, "start": start, "rows": rows})
    except RefusedError:
        raise
    except python_calamine.PasswordError:
        raise RefusedError(PASSWORD) from None
    except (python_calamine.CalamineError, ValueError, OverflowError):
        raise RefusedError(BROKEN) from None
    return sheets


def _plain(cell: Any) -> str | float:
    """Return a cell as text or number; dates and times as ISO text."""
    if isinstance(cell, bool):
        return str(cell).upper()
    if isinstance(cell, int | float):
        return float(cell)
    if isinstance(cell, datetime.datetime | datetime.date | datetime.time):
        return cell.isoformat()
    if isinstance(cell, datetime.timedelta):
        minutes, seconds = divmod(cell.total_seconds(), 60.0)
        hours, minutes = divmod(minutes, 60.0)
        return f"{hours:.0f}:{minutes:02.0f}:{seconds:09.6f}"
    return str(cell)


def main() -> None:
    """Read a workbook from the standard input and print its sheets."""
    limit_this_process()
    data = sys.stdin.buffer.read()
    answer: dict[str, Any]
    try:
        if data.startswith(b"PK"):
            check_archive(data)
        answer = {"sheets": read_workbook(data)}
    except RefusedError as refused:
        answer = {"refused": str(refused)}
    except MemoryError:
        answer = {"refused": _TOO_BIG}
    sys.stdout.buffer.write(json.dumps(answer).encode("ascii"))


if __name__ == "__main__":
    main()
