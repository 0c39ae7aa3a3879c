"""The table of a batch, as CSV and as XLSX."""

import csv
import dataclasses
from concurrent.futures import ThreadPoolExecutor

import openpyxl
import pytest

import rheo


@pytest.fixture
def result(lots):
    with ThreadPoolExecutor(1) as executor:
        return rheo.batch(sorted(lots.iterdir()), reference=lots / "lot0.csv", executor=executor)


def test_csv_holds_a_line_a_file(result, tmp_path):
    rheo.write_table(result, tmp_path / "fits.csv")
    with (tmp_path / "fits.csv").open(encoding="utf-8", newline="") as file:
        lines = list(csv.DictReader(file))
    assert [line["file"] for line in lines] == [row.file for row in result.rows]
    for line, row in zip(lines, result.rows, strict=True):
        assert line["fitted"] == ("yes" if row.fitted else "no")
        assert line["reason"] == row.reason
        if row.fitted:
            assert float(line[f"AICc {row.best}"]) == row.aicc[row.best]
            for key, value in row.values.items():
                (column,) = [name for name in line if name.startswith(f"{key} [")]
                assert float(line[column]) == value
            first = result.rates[0]
            ratio = float(line[f"stress over reference at {first:.4g} 1/s"])
            assert ratio == row.drift[0].ratio
            assert line["drifted beyond doubt"] == ("yes" if row.drifted else "no")


def test_xlsx_holds_the_same(result, tmp_path):
    from rheo.batches.table import table_cells

    rheo.write_table(result, tmp_path / "fits.xlsx")
    sheet = openpyxl.load_workbook(tmp_path / "fits.xlsx").active
    head, lines = table_cells(result)
    assert [cell.value for cell in sheet[4]] == head
    for number, line in enumerate(lines, 5):
        for cell, wanted in zip(sheet[number], line, strict=True):
            if isinstance(wanted, float):
                # The file holds 16 significant digits.
                assert cell.value == pytest.approx(wanted, rel=1e-14)
            else:
                assert cell.value == (wanted if wanted != "" else None)


def test_names_that_look_like_formulas_stay_text(result, tmp_path):
    rows = (dataclasses.replace(result.rows[0], file="=1+1.csv"),)
    evil = dataclasses.replace(result, rows=rows)
    rheo.write_table(evil, tmp_path / "fits.csv")
    assert "\n'=1+1.csv," in (tmp_path / "fits.csv").read_text("utf-8")
    rheo.write_table(evil, tmp_path / "fits.xlsx")
    cell = openpyxl.load_workbook(tmp_path / "fits.xlsx").active["A5"]
    assert (cell.value, cell.data_type) == ("=1+1.csv", "s")


def test_other_kinds_and_places_are_refused(result, tmp_path):
    with pytest.raises(rheo.InputError, match=r"\.csv or \.xlsx"):
        rheo.write_table(result, tmp_path / "fits.pdf")
    with pytest.raises(rheo.InputError, match="no such folder for the table"):
        rheo.write_table(result, tmp_path / "no folder" / "fits.csv")
    assert list(tmp_path.glob("fits*")) == []
