"""What the tests of the reports share: a spreadsheet program that works formulas out anew."""

from __future__ import annotations

import os
import shutil
import subprocess
from collections.abc import Callable
from pathlib import Path

import pytest

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
