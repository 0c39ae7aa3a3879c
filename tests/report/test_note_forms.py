"""Names of those who sign, and the still form of the note."""

from __future__ import annotations

import datetime
from collections.abc import Callable
from dataclasses import replace

from rheo.case import CaseResult, changed
from rheo.report import note_html, note_pdf
from rheo.report.design_note import design_note
from rheo.report.document import Figure
from rheo.report.html import note_as_html

DATE = datetime.date(2025, 6, 1)


def test_names_of_those_who_sign_stand_in_the_note(
    small_result: CaseResult, pdf_text: Callable[[bytes], str]
) -> None:
    names = {"prepared_by": "A. Weber <b>", "checked_by": "C. Okafor"}
    result = replace(small_result, case=changed(small_result.case, names))
    assert "A. Weber &lt;b&gt;" in note_html(result, DATE)
    text = pdf_text(note_pdf(result, DATE))
    assert "A. Weber <b>" in text
    assert "C. Okafor" in text


def test_a_still_note_has_drawings_and_no_script(small_result: CaseResult) -> None:
    note = design_note(small_result, DATE)
    page = note_as_html(note, interactive=False)
    assert "<script" not in page
    assert "script-src" not in page
    blocks = [block for section in note.sections for block in section.blocks]
    figures = [block for block in blocks if isinstance(block, Figure)]
    assert page.count("<svg") == len(figures)
    assert len(figures) > 5
    assert len(page) < len(note_html(small_result, DATE)) / 5
