"""The design note: what stands in it, that it is the same twice, that text stays text."""

from __future__ import annotations

import datetime
import json
import re
import shutil
import subprocess
from collections.abc import Callable
from html.parser import HTMLParser
from pathlib import Path

import pytest

from rheo.case import CaseResult
from rheo.cli import main
from rheo.errors import InputError
from rheo.line.safety import FOOD_SAFETY, GENERAL, PRESSURE, START_UP
from rheo.report import note_html, note_pdf, workbook, write_note
from rheo.report.design_note import design_note
from rheo.report.document import Note, Paragraph, Section, Table
from rheo.report.html import note_as_html
from rheo.report.pdf import LONGEST_TEXT, note_as_pdf
from rheo.report.scripts import pieces

DATE = datetime.date(2025, 6, 1)
SECTIONS = [
    "",
    "Purpose",
    "Product and readings",
    "Flow curve and choice of model",
    "Pressure drop",
    "The line, part by part",
    "System curve and pump",
    "Start-up",
    "Holding tube",
    "Cleaning in place",
    "Sizes compared",
    "Cautions",
    "Methods, sources and ranges",
    "Inputs",
    "Versions",
    "Prepared and checked",
]


class Reader(HTMLParser):
    """Collects tags, attributes and shown text of an HTML file."""

    def __init__(self) -> None:
        super().__init__()
        self.tags: list[tuple[str, dict[str, str | None]]] = []
        self.text: list[str] = []
        self.scripts: list[str] = []
        self._inside = ""

    def handle_starttag(self, tag: str, attrs: list[tuple[str, str | None]]) -> None:
        self.tags.append((tag, dict(attrs)))
        self._inside = tag if tag in ("script", "style") else self._inside

    def handle_endtag(self, tag: str) -> None:
        if tag == self._inside:
            self._inside = ""

    def handle_data(self, data: str) -> None:
        if self._inside == "script":
            self.scripts.append(data)
        elif not self._inside:
            self.text.append(data)


def read(html: str) -> Reader:
    reader = Reader()
    reader.feed(html)
    reader.close()
    return reader


def words(text: str) -> str:
    """Return text without the breaks that the paper made in it."""
    return re.sub(r"[\s\u200b]+", "", text)


@pytest.fixture(scope="module")
def html(small_result: CaseResult) -> str:
    return note_html(small_result, DATE)


@pytest.fixture(scope="module")
def pdf(small_result: CaseResult) -> bytes:
    return note_pdf(small_result, DATE)


def test_sections_stand_in_the_order_in_which_a_checker_reads(small_result: CaseResult) -> None:
    note = design_note(small_result, DATE)
    assert [section.title for section in note.sections] == SECTIONS


def test_every_caution_and_safety_sentence_is_in_all_formats(
    small_result: CaseResult, html: str, pdf: bytes, pdf_text: Callable[[bytes], str]
) -> None:
    shown = words("".join(read(html).text))
    printed = words(pdf_text(pdf))
    sentences = [PRESSURE, GENERAL, START_UP, FOOD_SAFETY]
    assert small_result.cautions
    for caution in small_result.cautions:
        sentences += [caution.sentence, caution.advice]
    for sentence in sentences:
        assert words(sentence.replace("τ_y", "τy")) in shown.replace("τ_y", "τy")
        # The last line of a page may stand between two lines of a sentence.
        assert words(sentence)[:40] in printed


def test_sources_and_ranges_are_named(html: str) -> None:
    shown = words("".join(read(html).text))
    for source in ("Holdingtube", "ISO2037", "Atkinson", "Yearlycost", "Cleaninginplace"):
        assert source in shown
    for source in ("Herschel&R.Bulkley", "Metzner", "Ryan&M.M.Johnson", "Burnham", "Wilson"):
        assert source in shown


def test_inputs_stand_as_given(html: str) -> None:
    shown = "".join(read(html).text)
    for text in ("1125 kg/m3", "4 m3/h", "ISO 2037 51", "product.density", "18 readings"[:2]):
        assert text in shown
    assert re.search(r"\d+ lines of readings in the case file", shown)


def test_pressure_carries_the_digits_that_its_interval_allows(html: str) -> None:
    assert re.search(r"[\d.]+( ± [\d.]+ bar| bar \([\d.]+ to [\d.]+ bar\))", html)


def test_same_case_same_bytes(small_result: CaseResult, html: str, pdf: bytes) -> None:
    assert note_html(small_result, DATE) == html
    assert note_pdf(small_result, DATE) == pdf
    assert workbook(small_result, DATE) == workbook(small_result, DATE)


def test_only_the_date_depends_on_the_date(small_result: CaseResult, html: str) -> None:
    other = datetime.date(2031, 12, 24)
    assert note_html(small_result, other).replace("2031-12-24", "2025-06-01") == html
    first, second = design_note(small_result, DATE), design_note(small_result, other)
    assert first.content_hash == second.content_hash


def test_the_content_hash_sees_every_change(small_result: CaseResult) -> None:
    metric, us = design_note(small_result, DATE), design_note(small_result, DATE, "us")
    assert metric.content_hash != us.content_hash
    assert metric.content_hash in note_as_html(metric)


def test_html_is_one_file_that_fetches_nothing(html: str) -> None:
    assert len(html.encode("utf-8")) < 6_000_000
    reader = read(html)
    for tag, attributes in reader.tags:
        assert tag not in ("link", "iframe", "object", "embed", "form", "base")
        assert "src" not in attributes
        assert "href" not in attributes
        assert not any(name.startswith("on") for name in attributes)
    policy = next(a["content"] for t, a in reader.tags if t == "meta" and "http-equiv" in a)
    assert policy is not None
    assert policy.startswith("default-src 'none';")
    assert "'unsafe-inline'" not in policy.split("script-src")[1]


def test_figures_in_html_are_interactive_and_described(html: str) -> None:
    reader = read(html)
    figures = [a for t, a in reader.tags if t == "figure"]
    assert len(figures) >= 9
    data = [json.loads(script) for script in reader.scripts if script.startswith('{"data"')]
    assert len(data) == len(figures)
    labels = [a["aria-label"] for _, a in reader.tags if "aria-label" in a]
    assert all(labels)
    assert len(labels) == len(figures)


def test_pdf_is_a4_with_page_numbers_and_embedded_fonts(
    pdf: bytes, pdf_text: Callable[[bytes], str], tmp_path: Path
) -> None:
    assert pdf.startswith(b"%PDF-")
    text = pdf_text(pdf)
    assert "Page 1 of " in text
    assert "2025-06-01" in text
    path = tmp_path / "note.pdf"
    path.write_bytes(pdf)
    fonts = subprocess.run(["pdffonts", str(path)], check=True, capture_output=True, text=True)
    rows = fonts.stdout.splitlines()[2:]
    assert rows
    assert all(re.search(r"\byes (yes|no)\s+(yes|no)\s+\d+ +\d+$", row) for row in rows)
    pages = subprocess.run(["pdfinfo", str(path)], check=True, capture_output=True, text=True)
    assert "A4" in pages.stdout


def test_greek_and_superscripts_are_real(
    html: str, pdf: bytes, pdf_text: Callable[[bytes], str]
) -> None:
    text = pdf_text(pdf)
    for sign in ("γ̇", "τ", "η", "m³", "±", "α"):
        assert sign in text
    assert "τ_y" not in text
    assert "τ<sub>y</sub>" in html


def test_hostile_text_comes_out_as_text_in_html(hostile_result: CaseResult) -> None:
    html = note_html(hostile_result, DATE)
    reader = read(html)
    assert not [t for t, a in reader.tags if t == "img" or "onerror" in a or t == "strong"]
    assert len([t for t, _ in reader.tags if t == "script"]) == 2 + len(
        [t for t, _ in reader.tags if t == "figure"]
    )
    shown = "".join(reader.text)
    assert "<script>alert(1)</script><img src=x onerror=alert(2)>" in shown
    assert "x" * 10_000 in shown
    assert "😀 日本" in shown
    assert len(html.encode("utf-8")) < 6_000_000


def test_hostile_text_comes_out_as_text_in_pdf(
    hostile_result: CaseResult, pdf_text: Callable[[bytes], str]
) -> None:
    text = words(pdf_text(note_pdf(hostile_result, DATE)))
    assert "<script>alert(1)</script>" in text
    assert words("#strong[no] $x^2$ `code`") in text
    assert "C:\\windows../../etc" in text
    assert "[U+1F600][U+65E5][U+672C]" in text
    assert text.count("x") > 20_000


def test_a_text_without_end_is_cut_and_counted_on_paper(
    pdf_text: Callable[[bytes], str],
) -> None:
    long = Paragraph("y" * (LONGEST_TEXT + 77))
    note = Note("t", "", (Section("s", (long,)),), DATE, "0")
    assert words("(77 characters more in the case file)") in words(pdf_text(note_as_pdf(note)))


def test_the_longest_words_stay_on_the_paper(tmp_path: Path) -> None:
    """Every word of a page must end before the margin of 20 mm."""
    if shutil.which("pdftotext") is None:
        pytest.skip("pdftotext (poppler-utils) is not installed; it would measure the words")
    rows = tuple(("w" * 400, "1", "v" * 90) for _ in range(3))
    table = Table(("Name", "Number", "Remark"), rows, numeric=(1,))
    note = Note("z" * 300, "u" * 300, (Section("q" * 200, (table,)),), DATE, "0")
    path = tmp_path / "note.pdf"
    path.write_bytes(note_as_pdf(note))
    boxes = subprocess.run(
        ["pdftotext", "-bbox", str(path), "-"], check=True, capture_output=True, text=True
    ).stdout
    right = [float(x) for x in re.findall(r'xMax="([\d.]+)"', boxes)]
    assert right
    # 210 mm less 20 mm, in points, and two points for what hangs over.
    assert max(right) <= (210 - 20) / 25.4 * 72 + 2


def test_write_note_writes_what_the_functions_return(
    small_result: CaseResult, html: str, pdf: bytes, tmp_path: Path
) -> None:
    folder = tmp_path / "new" / "folder"
    written = write_note(small_result, folder, DATE)
    assert [path.name for path in written] == [
        "design-note.html",
        "design-note.pdf",
        "workbook.xlsx",
    ]
    assert written[0].read_text("utf-8") == html
    assert written[1].read_bytes() == pdf
    assert written[2].read_bytes() == workbook(small_result, DATE)


def test_a_folder_that_is_a_file_is_refused(small_result: CaseResult, tmp_path: Path) -> None:
    place = tmp_path / "taken"
    place.write_text("", "utf-8")
    with pytest.raises(InputError, match="the note cannot be written there"):
        write_note(small_result, place, DATE)


@pytest.mark.parametrize(
    ("text", "expected"),
    [
        ("τ_y", [("τ", ""), ("y", "sub")]),
        ("τ = τ_y + K γ̇^n", [("τ = τ", ""), ("y", "sub"), (" + K γ̇", ""), ("n", "super")]),
        ("γ̇_0", [("γ̇", ""), ("0", "sub")]),
        (
            "[1 + (λγ̇)²]^((n-1)/2)",
            [("[1 + (λγ̇)²]", ""), ("(n-1)/2", "super")],
        ),
        ("Pa.s^n", [("Pa.s", ""), ("n", "super")]),
        ("E_η", [("E", ""), ("η", "sub")]),
        ("E_y", [("E", ""), ("y", "sub")]),
        ("K(T_ref) exp", [("K(T", ""), ("ref", "sub"), (") exp", "")]),
        ("file_name and x^2", [("file_name and x^2", "")]),
    ],
)
def test_scripts_of_symbols(text: str, expected: list[tuple[str, str]]) -> None:
    assert pieces(text) == expected


def test_the_command_writes_the_same_files(
    small_case_file: Path,
    small_result: CaseResult,
    tmp_path: Path,
    monkeypatch: pytest.MonkeyPatch,
    capsys: pytest.CaptureFixture[str],
) -> None:
    folder = tmp_path / "out"
    command = ["rheo", "run", str(small_case_file), "--json", "--out", str(folder)]
    monkeypatch.setattr("sys.argv", command)
    with pytest.raises(SystemExit) as ended:
        main()
    assert not ended.value.code
    json.loads(capsys.readouterr().out)
    today = datetime.date.today().isoformat()
    written = (folder / "design-note.html").read_text("utf-8")
    assert design_note(small_result, DATE).content_hash in written
    assert today in written
    assert (folder / "design-note.pdf").read_bytes().startswith(b"%PDF-")
    assert (folder / "workbook.xlsx").read_bytes().startswith(b"PK")
