"""The note stop: names, preview, and files that can be used elsewhere."""

from __future__ import annotations

import io
import zipfile
from typing import TYPE_CHECKING, Any

import pytest

from rheo.case import case_from_text, load_case, run_case
from ui import opening, results, words
from ui.note import files

if TYPE_CHECKING:
    from conftest import Page

    from rheo.case import CaseResult


@pytest.fixture(scope="module")
def sauce() -> CaseResult:
    return run_case(load_case(opening.SAMPLES / "sauce.toml"))


def note_page(page: Page) -> Page:
    """Go to the stop and wait for the comparison of sizes that the note holds."""
    page.go("note")
    for _ in range(40):
        if page.app.get("iframe"):
            return page
        page.run()
    raise AssertionError("the note has not been written")


def preview(page: Page) -> str:
    return str(page.app.get("iframe")[0].proto.srcdoc)


def test_the_preview_is_the_note(page: Page) -> None:
    note_page(page)
    shown = preview(page)
    for expected in ("Design note", "Brown sauce from the cooking vessel", "Prepared", "Checked"):
        assert expected in shown
    assert "<script" not in shown
    assert "<svg" in shown
    assert "psi" not in shown
    page.choose("Units", "us")
    assert "psi" in preview(note_page(page))


def test_title_and_names_go_into_case_and_note(page: Page) -> None:
    note_page(page)
    page.type("Title", "Sauce line, second try")
    page.type("Prepared by", "A. Weber <script>")
    page.type("Checked by", "C. Okafor")
    page.widget("text_area", "Purpose").set_value("To be built in autumn.")
    page.run()
    case = page.kept("case")
    assert case.title == "Sauce line, second try"
    assert (case.prepared_by, case.checked_by) == ("A. Weber <script>", "C. Okafor")
    assert case.notes == "To be built in autumn."
    shown = preview(note_page(page))
    assert "A. Weber &lt;script&gt;" in shown
    assert "<script" not in shown
    assert "To be built in autumn." in shown
    page.type("Checked by", "")
    assert page.kept("case").checked_by == ""


def test_every_file_is_there(page: Page) -> None:
    note_page(page)
    found = {one.proto.label for one in page.app.get("download_button")}
    assert {"Note, PDF", "Note, HTML", "Workbook, XLSX", "Case, TOML"} <= found


def test_files_are_what_they_say(sauce: CaseResult) -> None:
    import datetime

    day = datetime.date(2025, 6, 1)
    pdf = files._pdf.__wrapped__("key", sauce, day, "metric")
    page: bytes = files._html.__wrapped__("key", sauce, day, "metric")
    book = files._workbook.__wrapped__("key", sauce, day)
    assert pdf.startswith(b"%PDF-")
    assert page.decode("utf-8").startswith("<!DOCTYPE html>")
    assert "xl/workbook.xml" in zipfile.ZipFile(io.BytesIO(book)).namelist()


def test_the_case_file_travels_alone(page: Page, tmp_path: Any) -> None:
    note_page(page)
    text = results.saved_text(page.kept("case"), page.kept("files"))
    (tmp_path / "case.toml").write_text(text, encoding="utf-8")
    case = load_case(tmp_path / "case.toml")
    assert all(block.file is None and block.text for block in case.readings)
    again = run_case(case_from_text(text))
    assert words.pressure_in_doubt(again, "metric") == page.strip()[0][1]


def test_cautions_are_told_before_the_file_is_taken(page: Page, sauce: CaseResult) -> None:
    note_page(page)
    labels = [str(one.label) for one in page.app.expander]
    number = len(sauce.cautions)
    assert any(f"What the note warns of: {number} caution" in one for one in labels)
    assert "Safety." in page.html


@pytest.mark.parametrize("name", ["gum", "thickener"])
def test_the_other_samples_have_a_note(page: Page, name: str) -> None:
    page.press(name.capitalize())
    note_page(page)
    assert page.errors == []
    assert opening.sample(name).title in preview(page)
