"""Workbooks: sheets, blocks, unit rows, dates, and those that would do harm."""

from __future__ import annotations

import datetime
import io
import subprocess
import sys
import time
import zipfile
from collections.abc import Sequence
from pathlib import Path

import numpy as np
import openpyxl
import pytest
from xls_file import xls_bytes

from rheo import InputError, read_readings
from rheo.readings import workbook_child, workbook_grid
from rheo.readings.workbook_child import RefusedError, check_archive

TABLE: list[list[object]] = [
    ["Shear rate [1/s]", "Stress [Pa]"],
    [1.5, 12],
    [20, 55.5],
    [1300.25, 1210],
]


def xlsx(**sheets: Sequence[Sequence[object]]) -> bytes:
    book = openpyxl.Workbook()
    book.remove(book.active)
    for name, rows in sheets.items():
        sheet = book.create_sheet(name)
        for row in rows:
            sheet.append(list(row))
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def ods(rows: Sequence[Sequence[object]]) -> bytes:
    def cell(value: object) -> str:
        if isinstance(value, str):
            return (
                f'<table:table-cell office:value-type="string"><text:p>{value}</text:p>'
                "</table:table-cell>"
            )
        return f'<table:table-cell office:value-type="float" office:value="{value}"/>'

    body = "".join(f"<table:table-row>{''.join(map(cell, row))}</table:table-row>" for row in rows)
    # What office programs write below a sheet: a million empty rows, in few words.
    body += (
        '<table:table-row table:number-rows-repeated="1048000">'
        '<table:table-cell table:number-columns-repeated="16384"/></table:table-row>'
    )
    name = "urn:oasis:names:tc:opendocument:xmlns:"
    content = (
        f'<?xml version="1.0"?><office:document-content xmlns:office="{name}office:1.0" '
        f'xmlns:table="{name}table:1.0" xmlns:text="{name}text:1.0"><office:body>'
        f'<office:spreadsheet><table:table table:name="Run">{body}</table:table>'
        "</office:spreadsheet></office:body></office:document-content>"
    )
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w") as archive:
        archive.writestr("mimetype", "application/vnd.oasis.opendocument.spreadsheet")
        archive.writestr("content.xml", content)
        archive.writestr(
            "META-INF/manifest.xml",
            f'<manifest:manifest xmlns:manifest="{name}manifest:1.0"/>',
        )
    return stream.getvalue()


def archive_of(**parts: bytes) -> bytes:
    stream = io.BytesIO()
    with zipfile.ZipFile(stream, "w", zipfile.ZIP_DEFLATED) as archive:
        for name, content in parts.items():
            archive.writestr(name, content)
    return stream.getvalue()


@pytest.mark.parametrize(
    "data", [xlsx(Run=TABLE), xls_bytes(TABLE), ods(TABLE)], ids=["xlsx", "xls", "ods"]
)
def test_formats(data: bytes) -> None:
    # The content tells, not the name.
    readings = read_readings(data, name="made-up.csv")
    assert readings.rate.tolist() == [1.5, 20.0, 1300.25]
    assert readings.stress.tolist() == [12.0, 55.5, 1210.0]


def test_a_sheet_as_an_instrument_writes_it() -> None:
    rows = [
        ["Made-up run"],
        [],
        ["geometry", "concentric-cylinders", "inner_radius 12.5 mm", "outer_radius 13.56 mm",
         "length 37.5 mm"],
        ["full_scale_torque", 50, "mN.m"],
        ["", "Interval 1"],
        ["", "Point", "Time", "Speed", "Torque", "Temperature"],
        ["", "", "[h:mm:ss]", "[rpm]", "[%]", "[°C]"],
        ["", 1, datetime.time(0, 0, 10), 1, "10,5", 20],
        ["", 2, datetime.time(0, 0, 20), 2, 20, 20],
        [],
        ["", "Interval 2"],
        ["", "Point", "Time", "Speed", "Torque", "Temperature"],
        ["", "", "[h:mm:ss]", "[rpm]", "[%]", "[°C]"],
        ["", 1, datetime.timedelta(seconds=30.5), 3, 30, 20.5],
        ["", 2, datetime.time(0, 0, 40), 4, 40, 20],
    ]  # fmt: skip
    readings = read_readings(xlsx(Data=rows), name="made-up.xlsx")
    assert readings.block.tolist() == ["Interval 1"] * 2 + ["Interval 2"] * 2
    assert readings.time.tolist() == [10, 20, 30.5, 40]
    np.testing.assert_allclose(readings.reading, np.array([10.5, 20, 30, 40]) * 5e-4, rtol=1e-14)
    np.testing.assert_allclose(readings.angular_speed * 30 / np.pi, [1, 2, 3, 4], rtol=1e-14)
    assert readings.lines.tolist() == [8, 9, 14, 15]
    assert readings.geometry is not None
    assert readings.geometry.dimensions["outer_radius"] == pytest.approx(0.01356, rel=1e-15)
    assert readings.source == "made-up.xlsx, sheet 'Data'"


def test_sheets() -> None:
    data = xlsx(Notes=[["nothing"], ["here"]], Run=TABLE, Again=[TABLE[0], *TABLE[:0:-1]])
    readings = read_readings(data, name="made-up.xlsx")
    assert readings.rate.tolist() == [1.5, 20.0, 1300.25]
    assert [caution.code for caution in readings.cautions] == ["other-sheets"]
    assert "there are readings in 'Again' too" in readings.cautions[0].sentence
    assert readings.sheets == ("Run", "Again")
    for sheet in ("Again", 3):
        assert read_readings(data, sheet=sheet).rate.tolist() == [1300.25, 20.0, 1.5]
    with pytest.raises(
        InputError, match=r"^a.xlsx: there is no sheet 'Rum' \(did you mean 'Run'\?"
    ):
        read_readings(data, sheet="Rum", name="a.xlsx")
    with pytest.raises(InputError, match="there is no sheet '4'; there are 'Notes', 'Run', 'Agai"):
        read_readings(data, sheet=4, name="a.xlsx")
    with pytest.raises(InputError, match=r"^a.xlsx, sheet 'Notes': no table of numbers was found"):
        read_readings(data, sheet=1, name="a.xlsx")


def test_hidden_sheets_are_read_only_when_named() -> None:
    book = openpyxl.load_workbook(io.BytesIO(xlsx(Old=TABLE, New=[*TABLE[:3], [30, 60]])))
    book["Old"].sheet_state = "hidden"
    stream = io.BytesIO()
    book.save(stream)
    assert read_readings(stream.getvalue()).rate.tolist() == [1.5, 20, 30]
    assert read_readings(stream.getvalue(), sheet="Old").rate.tolist() == [1.5, 20, 1300.25]


def test_errors_name_sheet_row_and_column() -> None:
    rows = [["made up"], [], *TABLE[:2], [20, "abc"], TABLE[3]]
    with pytest.raises(
        InputError,
        match=r"^a.xlsx, sheet 'Run 1', row 5, column 'Stress \[Pa\]': 'abc' is not a number",
    ):
        read_readings(xlsx(**{"Run 1": rows}), name="a.xlsx")
    with pytest.raises(InputError, match=r"row 5, column 'Stress \[Pa\]': the cell is empty or"):
        read_readings(xlsx(Run=[*rows[:4], [20, "#DIV/0!"], TABLE[3]]), name="a.xlsx")


def sparse_sheet() -> bytes:
    book = openpyxl.Workbook()
    book.active["A1"] = "Shear rate [1/s]"
    book.active["XFD1048576"] = 1
    stream = io.BytesIO()
    book.save(stream)
    return stream.getvalue()


def lying_archive() -> bytes:
    """Return an archive whose sheet declares to be small and is not."""
    data = bytearray(archive_of(**{"xl/worksheets/sheet1.xml": b"0" * (61 * 2**20)}))
    size = (61 * 2**20).to_bytes(4, "little")
    at = data.find(size)
    while at >= 0:
        data[at : at + 4] = (1000).to_bytes(4, "little")
        at = data.find(size)
    return bytes(data)


HARMFUL = {
    "unpacks to much": (
        archive_of(**{f"xl/worksheets/sheet{n}.xml": b"0" * (21 * 2**20) for n in range(3)}),
        "the workbook unpacks to more than 60 MB; save only the sheet that holds the readings",
    ),
    "says less than it unpacks to": (lying_archive(), "the file cannot be read as a workbook"),
    "spans the whole sheet": (sparse_sheet(), "a sheet spans more than 2000000 cells; delete"),
    "declares a document type": (
        archive_of(**{"xl/worksheets/sheet1.xml": b'<!DOCTYPE a [<!ENTITY b "c">]><a>&b;</a>'}),
        "the file cannot be read as a workbook",
    ),
    "many parts": (
        archive_of(**{f"part{n}": b"" for n in range(2001)}),
        "the workbook unpacks to more than 60 MB",
    ),
    "no workbook": (archive_of(**{"hello.txt": b"hello"}), "the file cannot be read as a workbook"),
    "cut short": (xlsx(Run=TABLE)[:900], "the file cannot be read as a workbook"),
    "a head alone": (b"PK\x03\x04" + bytes(30), "the file cannot be read as a workbook"),
    "an old head alone": (
        bytes.fromhex("d0cf11e0a1b11ae1") + bytes(2000),
        "the file cannot be read as a workbook",
    ),
    "protected": (
        bytes.fromhex("d0cf11e0a1b11ae1") + bytes(600) + "EncryptedPackage".encode("utf-16-le"),
        "the workbook is protected by a password; save it without one",
    ),
    "protected the old way": (xls_bytes([["a"]], protected=True), "the workbook is protected by a"),
    "nothing in it": (xlsx(Run=[]), "the workbook has no cell with anything in it"),
    "a thousand columns": (xlsx(Run=[[1] * 1001]), "it has more than 1000 columns"),
}


@pytest.mark.parametrize("kind", HARMFUL)
def test_harmful_workbooks_are_refused_in_one_sentence_and_at_once(kind: str) -> None:
    data, sentence = HARMFUL[kind]
    start = time.perf_counter()
    with pytest.raises(InputError, match=f"^bad.xlsx[^:]*: {sentence}"):
        read_readings(data, name="bad.xlsx")
    assert time.perf_counter() - start < 10.0


def test_cells_that_blow_up_are_stopped_by_the_limits_on_the_child() -> None:
    """A million cells that all point to one long text need gigabytes once they are read."""
    with zipfile.ZipFile(io.BytesIO(xlsx(Run=TABLE))) as archive:
        parts = {part: archive.read(part) for part in archive.namelist()}
    rows = (b"<row>" + b'<c t="s"><v>0</v></c>' * 100 + b"</row>") * 15_000
    sheet = "xl/worksheets/sheet1.xml"
    head, _, tail = parts[sheet].partition(b"<row")
    parts[sheet] = head + rows + tail[tail.index(b"</sheetData>") :]
    spreadsheet = b"http://schemas.openxmlformats.org/spreadsheetml/2006/main"
    parts["xl/sharedStrings.xml"] = (
        b'<sst xmlns="' + spreadsheet + b'"><si><t>' + b"x" * 30_000 + b"</t></si></sst>"
    )
    with pytest.raises(
        InputError, match=r"^big.xlsx: (reading the workbook takes|the workbook un)"
    ):
        read_readings(archive_of(**parts), name="big.xlsx")


def test_the_child_bounds_its_own_time_and_memory() -> None:
    code = (
        "import runpy, sys\n"
        "child = runpy.run_path(sys.argv[1])\n"
        "child['limit_this_process'].__globals__.update(CPU_SECONDS=1, MEMORY_BYTES=2**28)\n"
        "child['limit_this_process']()\n"
    )
    for work, ends in (("while True: pass", -9), ("bytearray(2**29)", 1)):
        done = subprocess.run(
            [sys.executable, "-c", code + work, workbook_child.__file__],
            capture_output=True,
            timeout=60,
            check=False,
        )
        # Out of processor time the system ends the process; out of memory Python says so.
        assert done.returncode in {ends, -24} if ends < 0 else b"MemoryError" in done.stderr


@pytest.mark.parametrize(
    ("script", "sentence"),
    [
        ("import os; os.kill(os.getpid(), 24)", "reading the workbook takes too much memory or"),
        ("import os; os.abort()", "reading the workbook takes too much memory or time; save only"),
        ("import time; time.sleep(60)", "reading the workbook takes too much memory or time"),
        ("raise SystemExit(1)", "the file cannot be read as a workbook; open it in a spreadsheet"),
    ],
)
def test_however_the_child_ends_there_is_a_sentence(
    script: str, sentence: str, tmp_path: Path, monkeypatch: pytest.MonkeyPatch
) -> None:
    (tmp_path / "child.py").write_text("import sys; sys.stdin.buffer.read()\n" + script)
    monkeypatch.setattr(workbook_child, "__file__", str(tmp_path / "child.py"))
    monkeypatch.setattr(workbook_grid, "_WALL_SECONDS", 2.0)
    with pytest.raises(InputError, match=f"^a.xlsx: {sentence}"):
        read_readings(xlsx(Run=TABLE), name="a.xlsx")


def test_the_child_takes_nothing_from_the_program() -> None:
    source = Path(workbook_child.__file__).read_text("utf-8")
    assert "import rheo" not in source
    assert "from rheo" not in source
    assert "python_calamine" not in sys.modules


def test_archive_check_lets_ordinary_workbooks_through() -> None:
    for data in (xlsx(Run=TABLE), ods(TABLE)):
        check_archive(data)
    with pytest.raises(RefusedError, match="cannot be read as a workbook"):
        check_archive(b"PK")
