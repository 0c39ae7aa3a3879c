"""The workbook of a result."""

from __future__ import annotations

import datetime

from rheo.case.result import CaseResult
from rheo.fitting.scaled_fits import ScaledFits
from rheo.line.cost import Costs
from rheo.report.case_pictures import sizing_of
from rheo.report.case_readings import CasePoints, case_points, temperature_law
from rheo.report.display import shown
from rheo.report.figures.flow_curve import solids_groups, temperature_groups
from rheo.report.sections.inputs import versions
from rheo.report.sheets.about_sheet import about_sheet
from rheo.report.sheets.book import Book
from rheo.report.sheets.design_sheets import doubt_sheet, sizes_sheet, system_sheet
from rheo.report.sheets.fit_sheets import (
    FittedCurve,
    fits_sheet,
    flow_curve_sheet,
    readings_sheet,
)
from rheo.report.sheets.line_sheet import line_sheets
from rheo.report.words import capital


def case_book(result: CaseResult, date: datetime.date | None = None) -> bytes:
    """Return the workbook of a result as the bytes of an XLSX file.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    date : datetime.date, optional
        For the file's properties and the first sheet; today when absent.

    Returns
    -------
    bytes
        Readings, flow curve, fits, line, system curve, sizes and doubt; key relations as live
        formulas with their results stored.
    """
    when = date or datetime.date.today()
    case = result.case
    title = case.title.strip() or f"{case.product.name} in {case.line.name}"
    book = Book(title, when)
    facts = [
        ("Product", case.product.name),
        ("Line", case.line.name),
        ("Model in use", f"{result.chosen.record.name}: {result.chosen.record.equation}"),
        ("Date", when.isoformat()),
        *versions(),
    ]
    about_sheet(book, title, facts, (*result.line.safety, result.line.start_up.safety))
    points = case_points(result)
    for number, readings in enumerate(result.readings):
        readings_sheet(book, number, readings, points.curves[number], points.cautions[number])
    for number, curve in enumerate(_fitted_curves(result, points)):
        flow_curve_sheet(book, number, curve)
    fits_sheet(book, result.fits, result.chosen)
    line_sheets(book, result.line)
    system_sheet(book, result.system_curve)
    sizing, why = sizing_of(result)
    if sizing is None:
        book.sheet("Sizes", "Sizes compared", f"Sizes are not compared: {why}.")
    else:
        sizes_sheet(book, sizing, result.flow, _costs(result))
    doubt_sheet(book, result.doubt)
    return book.bytes()


def _costs(result: CaseResult) -> Costs | None:
    case = result.case
    if case.cost is None or case.duty.hours_a_year is None or result.efficiency is None:
        return None
    return case.cost.build(float(case.duty.hours_a_year), result.efficiency)


def _fitted_curves(result: CaseResult, points: CasePoints) -> list[FittedCurve]:
    """Return the chosen flow curve, one for each temperature or solids fraction fitted."""
    name = capital(result.chosen.record.name)
    numbers, product = points.fitted, result.product
    rate, stress = points.rate[numbers], points.stress[numbers]
    if points.solids is not None and isinstance(result.fits, ScaledFits):
        share = points.solids[numbers]
        groups, words_ = solids_groups(share)
        return [
            FittedCurve(
                f"{name} at {word}",
                result.fits.at(float(share[groups == n].mean()), result.chosen.key),
                numbers[groups == n],
                rate[groups == n],
                stress[groups == n],
            )
            for n, word in enumerate(words_)
        ]
    if points.temperature is None or temperature_law(result) is None:
        return [FittedCurve(name, result.model, numbers, rate, stress)]
    kelvin = points.temperature[numbers]
    groups, _ = temperature_groups(kelvin, kelvin.size, "metric")
    found = []
    for group in range(int(groups.max()) + 1):
        these = groups == group
        mean = float(kelvin[these].mean())
        words = f"{name} at {float(shown(mean, 'temperature')):.4g} °C"
        model = product.model_at(mean)
        found.append(FittedCurve(words, model, numbers[these], rate[these], stress[these]))
    return found
