"""Readings at several temperatures: a curve, a colour and a sheet for each."""

from __future__ import annotations

import datetime
import io
from pathlib import Path

import numpy as np
import openpyxl
import pytest

from rheo.case import CaseResult, load_case, run_case
from rheo.case.design_blocks import DoubtBlock
from rheo.case.schema import FitBlock
from rheo.report import note_html, workbook
from rheo.report.case_pictures import flow_curve_picture
from rheo.report.case_readings import case_points
from rheo.report.picture import Band, Line, Points

SAMPLE = Path(__file__).resolve().parents[2] / "sample_data" / "sauce.toml"
DATE = datetime.date(2025, 6, 1)


@pytest.fixture(scope="module")
def result() -> CaseResult:
    case = load_case(SAMPLE)
    quick = {
        "fit": FitBlock(models=("herschel-bulkley", "bingham")),
        "doubt": DoubtBlock(draws=100),
    }
    return run_case(case.model_copy(update=quick).in_folder(SAMPLE.parent))


def test_each_temperature_has_its_curve_and_its_points(result: CaseResult) -> None:
    marks = flow_curve_picture(result).panels[0].marks
    chosen = [m for m in marks if isinstance(m, Line) and not m.faint]
    assert len(chosen) == len([m for m in marks if isinstance(m, Band)]) == 3
    assert [line.style for line in chosen] == [0, 1, 2]
    for line in chosen:
        # The name ends in the temperature, and so do the names of its points.
        at = line.name.rsplit(", ", 1)[1]
        points = [m for m in marks if isinstance(m, Points) and m.name.startswith(at)]
        assert {m.style for m in points} == {line.style}
        fitted = np.concatenate([m.y for m in points if not m.hollow])
        rates = np.concatenate([m.x for m in points if not m.hollow])
        curve = np.exp(np.interp(np.log(rates), np.log(line.x), np.log(line.y)))
        # The readings are fitted to about 1 %; at another temperature they are 25 % off and more.
        assert fitted == pytest.approx(curve, rel=0.05)


def test_only_the_branch_in_use_was_fitted(result: CaseResult) -> None:
    points = case_points(result)
    assert set(points.branch[points.fitted]) == {"down"}
    assert points.left_out.sum() == (points.branch != "down").sum()


def test_workbook_has_a_flow_curve_for_each_temperature(result: CaseResult) -> None:
    book = openpyxl.load_workbook(io.BytesIO(workbook(result, DATE)), data_only=True)
    names = [name for name in book.sheetnames if name.startswith("Flow curve")]
    assert names == ["Flow curve", "Flow curve 2", "Flow curve 3"]
    numbers = [
        row[0]
        for name in names
        for row in book[name].iter_rows(min_row=11, max_col=1, values_only=True)
        if isinstance(row[0], int | float)
    ]
    assert sorted(numbers) == (case_points(result).fitted + 1).tolist()


def test_the_note_names_the_law(result: CaseResult) -> None:
    html = note_html(result, DATE)
    assert "Arrhenius" in html
    assert "T<sub>ref</sub>" in html
