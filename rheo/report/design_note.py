"""The design note of a result: which sections, in which order."""

from __future__ import annotations

import datetime

import numpy as np

from rheo.case.result import CaseResult
from rheo.case.solids_state import solids_basis
from rheo.readings.solids import in_words
from rheo.report.case_pictures import (
    currency,
    flow_curve_picture,
    residuals_picture,
    sizing_of,
)
from rheo.report.case_readings import case_points
from rheo.report.document import (
    Block,
    Cautions,
    Facts,
    Figure,
    Note,
    Paragraph,
    Section,
    SignOff,
)
from rheo.report.numbers import exact
from rheo.report.sections.fitted import fit_blocks
from rheo.report.sections.inputs import inputs_section, versions
from rheo.report.sections.methods import methods_section
from rheo.report.sections.methods_used import rows_of_case
from rheo.report.sections.pressure import pressure_section
from rheo.report.sections.readings import readings_blocks
from rheo.report.sections.route import route_section
from rheo.report.sections.sizes import sizes_section
from rheo.report.sections.starting import cleaning_section, holding_section, start_up_section
from rheo.report.sections.summary import purpose_section, summary_section
from rheo.report.sections.system import system_section
from rheo.report.text import one_line

# The inputs give a longer title in full.
LONGEST_TITLE = 200


def design_note(
    result: CaseResult, date: datetime.date | None = None, system: str = "metric"
) -> Note:
    """Return the design note of a result.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    date : datetime.date, optional
        Printed on it; today when absent. Nothing else in the note depends on it.
    system : str
        Unit system, a key of `rheo.report.display.SYSTEMS`.

    Returns
    -------
    Note
        Content as data, to be written as HTML or as PDF.
    """
    from rheo import __version__

    case = result.case
    sizing, why_no_sizes = sizing_of(result)
    line = result.line
    rating = line.start_up.rating
    points = case_points(result)
    sections = [
        summary_section(result, sizing, system),
        purpose_section(result),
        _readings(result, system),
        _model(result, system),
        pressure_section(line, result.doubt, result.next_readings, system),
        route_section(line, np.unique(points.rate[points.fitted]), rating, system),
        system_section(result.system_curve, line, result.operating, rating, system),
        start_up_section(line.start_up, system),
    ]
    if result.holding is not None:
        sections.append(holding_section(result.holding, system))
    if result.cleaning is not None:
        sections.append(cleaning_section(result.cleaning, system))
    if sizing is not None:
        limit = result.limits.pressure
        sections.append(sizes_section(sizing, limit, currency(result), system))
    else:
        words = f"Sizes are not compared: {why_no_sizes}."
        sections.append(Section("Sizes compared", (Paragraph(words),)))
    geometries = tuple(one.geometry for one in result.readings if one.geometry is not None)
    sections += [
        _cautions(result),
        methods_section(
            line,
            result.chosen.record,
            geometries,
            line.start_up.method,
            rows_of_case(result, sizing),
        ),
        inputs_section(case),
        Section("Versions", (Facts(versions()),)),
        Section("Prepared and checked", (SignOff(names=(case.prepared_by, case.checked_by)),)),
    ]
    product, route = case.product.name, case.line.name
    return Note(
        title=one_line(case.title, LONGEST_TITLE)
        or one_line(f"{product} in {route}", LONGEST_TITLE),
        subtitle=one_line(f"{product}, {route}", LONGEST_TITLE),
        sections=tuple(sections),
        date=date or datetime.date.today(),
        version=__version__,
    )


def _readings(result: CaseResult, system: str) -> Section:
    product = result.case.product
    facts = [
        ("Product", product.name),
        ("Density", f"{exact(float(product.density))} kg/m³"),
        ("Temperature at the head of the line", f"{result.product.temperature - 273.15:.4g} °C"),
    ]
    solids = result.product.solids_fraction
    if solids is not None:
        facts.append(("Solids", in_words(solids, solids_basis(result.case, result.fitted))))
    blocks: list[Block] = [Facts(tuple(facts))]
    points = case_points(result)
    start = 0
    sets = zip(result.readings, points.curves, points.cautions, strict=True)
    for number, (readings, curve, cautions) in enumerate(sets, 1):
        name = readings.source or f"set {number}"
        fitted = ~points.left_out[start : start + len(readings)]
        blocks += readings_blocks(readings, curve, cautions, name, fitted, system)
        start += len(readings)
    return Section("Product and readings", tuple(blocks))


def _model(result: CaseResult, system: str) -> Section:
    blocks: list[Block] = [
        Figure(flow_curve_picture(result, system=system)),
        Figure(flow_curve_picture(result, viscosity=True, system=system)),
        *fit_blocks(result.fits, result.chosen, residuals_picture(result, system=system)),
    ]
    return Section("Flow curve and choice of model", tuple(blocks))


def _cautions(result: CaseResult) -> Section:
    if not result.cautions:
        return Section("Cautions", (Paragraph("There is none."),))
    return Section("Cautions", (Cautions(result.cautions),))
