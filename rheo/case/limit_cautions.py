"""Limits of a case that its line, as it is drawn, does not keep."""

from __future__ import annotations

from dataclasses import replace

from rheo.case.schema import Case
from rheo.errors import Caution
from rheo.line import LineResult
from rheo.line.size_values import limits_missed


def limit_cautions(case: Case, line: LineResult) -> tuple[Caution, ...]:
    """Return a Caution on the limits that the line does not keep.

    Parameters
    ----------
    case : Case
        With its limits.
    line : LineResult
        Duty of the line.

    Returns
    -------
    tuple of Caution
        Empty when it keeps them all. Rates outside the measured range, and an NPSH that is not
        known, have Cautions of their own.
    """
    limits = replace(case.limits.build(), keep_to_measured_rates=False)
    if line.product.vapour_pressure is None:
        limits = replace(limits, min_npsh=None)
    missed = limits_missed(
        line.line, line.product, float(line.flow), limits, case.line.friction_method
    )
    if not missed:
        return ()
    return (
        Caution(
            "limit-not-kept",
            f"The line as drawn does not keep the limits of the case: {'; '.join(missed)}.",
            "Compare sizes and take one that keeps every limit, or change the limit.",
            line.line.name,
        ),
    )
