"""What the tests of the reports share: a spreadsheet program that works formulas out anew."""

from __future__ import annotations

import json
import os
import re
import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

from rheo.case import CaseResult, case_from_text, run_case

Values = dict[str, dict[str, object]]

# LibreOffice keeps stored results by default; 0 tells it to work out every formula on loading.
_PROFILE = """<?xml version="1.0" encoding="UTF-8"?>
<oor:items xmlns:oor="http://openoffice.org/2001/registry">
<item oor:path="/org.openoffice.Office.Calc/Formula/Load"><prop oor:name="OOXMLRecalcMode">
<value>0</value></prop></item></oor:items>
"""


@pytest.fixture(scope="session")
def recalculate(tmp_path_factory: pytest.TempPathFactory) -> Callable[[bytes], Values]:
    """Return a function from a workbook to the values that LibreOffice works out for its cells."""
    program = shutil.which("soffice")
    if program is None:
        reason = "LibreOffice (soffice) is not installed; it would work out the formulas anew"
        if os.environ.get("RHEO_REQUIRE_OFFICE"):
            pytest.fail(reason)
        pytest.skip(reason)
    office = str(program)
    folder = tmp_path_factory.mktemp("office")
    user = folder / "profile" / "user"
    user.mkdir(parents=True)
    (user / "registrymodifications.xcu").write_text(_PROFILE, "utf-8")

    def work_out(workbook: bytes) -> Values:
        source = folder / "in.xlsx"
        source.write_bytes(workbook)
        out = folder / "out"
        subprocess.run(
            [
                office,
                f"-env:UserInstallation={(folder / 'profile').as_uri()}",
                "--headless",
                "--convert-to",
                "xlsx",
                "--outdir",
                str(out),
                str(source),
            ],
            check=True,
            capture_output=True,
            timeout=120,
        )
        return cell_values(out / "in.xlsx")

    return work_out


def cell_values(path: Path) -> Values:
    """Return the stored values of all cells by sheet and address."""
    import openpyxl

    book = openpyxl.load_workbook(path, data_only=True)
    return {
        sheet.title: {
            cell.coordinate: cell.value
            for row in sheet.iter_rows()
            for cell in row
            if cell.value is not None
        }
        for sheet in book.worksheets
    }


CASE = """
schema = 1
title = {title}
notes = {notes}

[product]
name = {product}
density = "1125 kg/m3"
temperature = "20 °C"
heat_capacity = "3.4 kJ/kg/K"
vapour_pressure = "2.3 kPa"
static_yield_stress = "20 Pa"

[readings]
text = '''
Shear rate [1/s],Shear stress [Pa],Branch
{readings}
'''
exclude = [2]

[fit]
models = ["power-law", "bingham", "herschel-bulkley", "casson"]

[duty]
flow = "4 m3/h"
flow_tolerance = "5 %"
hours_a_year = 3500

[line]
name = {line}

[[line.suction]]
part = "vessel"
name = {part}
level = "1.6 m"

[[line.suction]]
part = "entrance"

[[line.suction]]
part = "pipe"
name = "suction pipe"
size = "ISO 2037 63.5"
length = "2.5 m"
fixed_size = true

[[line.discharge]]
part = "pipe"
name = {part}
size = "ISO 2037 51"
length = "14 m"
rise = "3.2 m"

[[line.discharge]]
part = "fitting"
name = "bends"
kind = "bend"
count = 5
loss_coefficient = 0.9

[[line.discharge]]
part = "equipment"
name = "cooler"
loss = "95 kPa"
at_flow = "4 m3/h"
exponent = 0.46
volume = "28 L"

[[line.discharge]]
part = "vessel"
name = "bowl"
level = "0.5 m"

[pump]
kind = "positive-displacement"
name = "lobe pump"
displacement = "0.5 L"
speed = "150 rpm"
rated_pressure = "10 bar"
slip_flow = "0.3 m3/h"
efficiency = "55 %"

[limits]
pressure = "6 bar"

[sizes]
standard = "ISO 2037"
smallest = "30 mm"
largest = "80 mm"

[cost]
currency = {currency}
energy_price = 0.2

[holding_tube]
hold_time = "30 s"
size = "ISO 2037 51"

[cleaning]

[doubt]
draws = 100
"""

HOSTILE = (
    '<script>alert(1)</script><img src=x onerror=alert(2)> #strong[no] $x^2$ `code` "quoted" '
    "=HYPERLINK(1) C:\\windows ../../etc %{x} &lt; {{x}} שלום مرحبا 😀 日本 "
)


def _rows() -> str:
    """Return readings of an invented Herschel-Bulkley product with a few percent of scatter."""
    rates = (1.0, 2.0, 5.0, 10.0, 20.0, 50.0, 100.0, 200.0, 300.0)
    scatter = (1.02, 0.99, 0.98, 1.01, 1.0, 0.985, 1.015, 1.0, 0.99)
    up = [f"{g},{s * (12 + 4.2 * g**0.45):.4f},up" for g, s in zip(rates, scatter, strict=True)]
    down = [f"{g},{0.97 * (12 + 4.2 * g**0.45):.4f},down" for g in rates[::-1]]
    return "\n".join([*up, *down])


def small_case(**texts: str) -> CaseResult:
    """Return the result of a small case with these texts in its fields."""
    return run_case(case_from_text(small_case_text(**texts)))


def small_case_text(**texts: str) -> str:
    """Return the file of a small case with these texts in its fields."""
    words = {
        "title": "Brown sauce to the filler",
        "notes": "Holm Fen works, an invented plant.",
        "product": "brown sauce",
        "line": "sauce line",
        "part": "riser",
        "currency": "EUR",
        **texts,
    }
    quoted = {key: json.dumps(text, ensure_ascii=True) for key, text in words.items()}
    # TOML knows the escapes of JSON but not its pairs of surrogates.
    quoted = {
        key: re.sub(
            r"\\u(d[89ab]..)\\u(d[c-f]..)",
            lambda pair: json.loads(f'"{pair[0]}"'),
            text,
            flags=re.IGNORECASE,
        )
        for key, text in quoted.items()
    }
    return CASE.format(readings=_rows(), **quoted)


@pytest.fixture(scope="session")
def small_result() -> CaseResult:
    """A whole result that is quick to work out."""
    return small_case()


@pytest.fixture(scope="session")
def small_case_file(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The case of `small_result` as a file."""
    path = tmp_path_factory.mktemp("case") / "sauce.toml"
    path.write_text(small_case_text(), "utf-8")
    return path


@pytest.fixture(scope="session")
def hostile_result() -> CaseResult:
    """The same with hostile text in every field that takes one."""
    long = HOSTILE + "x" * 10_000
    return small_case(
        title=long, notes=long, product=long, line=HOSTILE, part=HOSTILE, currency=HOSTILE
    )


@pytest.fixture(scope="session")
def pdf_text(tmp_path_factory: pytest.TempPathFactory) -> Callable[[bytes], str]:
    """Return a function from a PDF file to its text, read by poppler."""
    program = shutil.which("pdftotext")
    if program is None:
        pytest.skip("pdftotext (poppler-utils) is not installed; it would read the PDF back")
    folder = tmp_path_factory.mktemp("pdf")

    def read(pdf: bytes) -> str:
        path = folder / "note.pdf"
        path.write_bytes(pdf)
        command = [str(program), "-layout", "-enc", "UTF-8", str(path), "-"]
        done = subprocess.run(command, check=True, capture_output=True, timeout=60)
        return done.stdout.decode("utf-8")

    return read
