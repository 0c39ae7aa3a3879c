"""The files that a case comes to, kept by result, date and units."""

from __future__ import annotations

import datetime
from typing import Any

import streamlit as st

from rheo.case import CaseResult
from rheo.report import note_html, note_pdf, workbook
from rheo.report.design_note import design_note
from rheo.report.html import note_as_html
from ui import case_menu, results, state

PREVIEW_HEIGHT = 900


def show() -> None:
    """Draw the four downloads."""
    result = state.result()
    if result is None:
        return
    stem = case_menu.file_name().removesuffix(".toml")
    today, system = datetime.date.today(), state.system()
    # The files are made when they are asked for, outside of the session: all they need is here.
    key, case, files = result_key(result), state.case(), state.files()
    columns = st.columns(4)
    for column, (label, ending, mime, make, help_) in zip(
        columns,
        (
            (
                "Note, PDF", "pdf", "application/pdf",
                lambda: _pdf(key, result, today, system),
                "A4, to be signed.",
            ),
            (
                "Note, HTML", "html", "text/html",
                lambda: _html(key, result, today, system),
                "One file; its figures can be looked into without a network.",
            ),
            (
                "Workbook, XLSX",
                "xlsx",
                "application/vnd.openxmlformats-officedocument.spreadsheetml.sheet",
                lambda: _workbook(key, result, today),
                "The chain of the calculation with live formulas, in SI.",
            ),
            (
                "Case, TOML", "toml", "application/toml", lambda: case_menu.saved(case, files),
                "All inputs with the readings in it. Open it here or with rheo run.",
            ),
        ),
        strict=True,
    ):  # fmt: skip
        column.download_button(
            label,
            data=make,
            file_name=f"{stem}.{ending}",
            mime=mime,
            key=f"note.{ending}",
            icon=":material/download:",
            help=help_,
            on_click="ignore",
            width="stretch",
        )


def preview(result: CaseResult) -> str:
    """Return the note as HTML with still figures, for the preview."""
    found: str = _preview(result_key(result), result, datetime.date.today(), state.system())
    return found


def result_key(result: CaseResult) -> str:
    """Return what the files of a result are kept by."""
    return results.result_key(result.case, state.files())


@st.cache_data(max_entries=8, show_spinner=False)
def _pdf(key: str, _result: Any, date: datetime.date, system: str) -> bytes:  # noqa: ARG001
    return note_pdf(_result, date, system)


@st.cache_data(max_entries=4, show_spinner=False)
def _html(key: str, _result: Any, date: datetime.date, system: str) -> bytes:  # noqa: ARG001
    return note_html(_result, date, system).encode("utf-8")


@st.cache_data(max_entries=8, show_spinner=False)
def _workbook(key: str, _result: Any, date: datetime.date) -> bytes:  # noqa: ARG001
    return workbook(_result, date)


@st.cache_data(max_entries=8, show_spinner=False)
def _preview(key: str, _result: Any, date: datetime.date, system: str) -> str:  # noqa: ARG001
    return note_as_html(design_note(_result, date, system), interactive=False)
