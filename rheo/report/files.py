"""The three files that a case comes to: HTML note, PDF note, workbook."""

from __future__ import annotations

import datetime
import os
from pathlib import Path

from rheo.case.result import CaseResult
from rheo.errors import InputError
from rheo.report.design_note import design_note
from rheo.report.html import note_as_html
from rheo.report.pdf import note_as_pdf
from rheo.report.sheets.case_book import case_book

HTML_NAME = "design-note.html"
PDF_NAME = "design-note.pdf"
WORKBOOK_NAME = "workbook.xlsx"


def note_html(result: CaseResult, date: datetime.date | None = None, system: str = "metric") -> str:
    """Return the design note as one self-contained HTML file with interactive figures.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    date : datetime.date, optional
        Printed on the note; today when absent.
    system : str
        Unit system: ``si``, ``metric`` or ``us``.

    Returns
    -------
    str
        The same for the same result, date and units.
    """
    return note_as_html(design_note(result, date, system))


def note_pdf(
    result: CaseResult, date: datetime.date | None = None, system: str = "metric"
) -> bytes:
    """Return the design note as a PDF file on A4.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    date : datetime.date, optional
        Printed on the note; today when absent.
    system : str
        Unit system: ``si``, ``metric`` or ``us``.

    Returns
    -------
    bytes
        The same for the same result, date and units.
    """
    return note_as_pdf(design_note(result, date, system))


def workbook(result: CaseResult, date: datetime.date | None = None) -> bytes:
    """Return the workbook as an XLSX file, in SI, with live formulas.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    date : datetime.date, optional
        In it; today when absent.

    Returns
    -------
    bytes
        The same for the same result and date.
    """
    return case_book(result, date)


def write_note(
    result: CaseResult,
    folder: str | Path,
    date: datetime.date | None = None,
    system: str = "metric",
) -> tuple[Path, ...]:
    """Write the design note as HTML and as PDF, and the workbook, into a folder.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    folder : str or path
        Made when it is not there; files of these names in it are replaced, all or none.
    date : datetime.date, optional
        Printed on the note; today when absent.
    system : str
        Unit system of the note.

    Returns
    -------
    tuple of path
        The files written.

    Raises
    ------
    InputError
        If the folder cannot be written to.
    """
    when = date or datetime.date.today()
    note = design_note(result, when, system)
    contents = {
        HTML_NAME: note_as_html(note).encode("utf-8"),
        PDF_NAME: note_as_pdf(note),
        WORKBOOK_NAME: case_book(result, when),
    }
    place = Path(folder)
    try:
        place.mkdir(parents=True, exist_ok=True)
        _write_all(place, contents)
    except OSError as error:
        reason = error.strerror or "it cannot be written"
        raise InputError(f"the note cannot be written there: {reason}", str(folder)) from None
    return tuple(place / name for name in contents)


def _write_all(folder: Path, contents: dict[str, bytes]) -> None:
    """Write files; none of them takes its name before all are there in full."""
    parts = {name: folder / f".{name}.{os.getpid()}.part" for name in contents}
    try:
        for name, content in contents.items():
            parts[name].write_bytes(content)
        for name, part in parts.items():
            part.replace(folder / name)
    finally:
        for part in parts.values():
            part.unlink(missing_ok=True)
