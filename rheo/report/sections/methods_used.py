"""Rows of the table of methods that a case adds: what it asks for beyond pipe and fit."""

from __future__ import annotations

from rheo.case.result import CaseResult
from rheo.fitting.scaled_fits import ScaledFits
from rheo.hydraulics.fittings import DEFAULT_TABLE, fitting_tables
from rheo.line import STANDARDS, CentrifugalPump
from rheo.line.parts import Fitting, Reducer
from rheo.line.sizing import Sizing
from rheo.models.state_curve import ScalingLaw
from rheo.report.numbers import exact
from rheo.report.sections.methods import Row


def rows_of_case(result: CaseResult, sizing: Sizing | None) -> tuple[Row, ...]:
    """Return what for, method, source and range of what a case asks for.

    Parameters
    ----------
    result : CaseResult
        Of `run_case`.
    sizing : Sizing or None
        The comparison of sizes, where there is one.

    Returns
    -------
    tuple of (str, str, str, str)
        Rows for `methods_section`.
    """
    rows: list[Row] = []
    law = getattr(result.fits, "law", None)
    if isinstance(law, ScalingLaw) and isinstance(result.fits, ScaledFits):
        low, high = (exact(round(end, 4 if law.unit == "-" else 2)) for end in result.fits.range)
        words = f"{law.equation}; indices are shared"
        unit = "" if law.unit == "-" else f" {law.unit}"
        span = f"Between the {low} and {high}{unit} of the readings"
        rows.append((f"Flow curve over {law.state}", words, law.source, span))
    rows += _fittings(result)
    if result.next_readings is not None:
        rows.append(
            (
                "What to measure next",
                "Speeds ranked by how far a further reading narrows the pressure drop (c-optimal "
                "design), the models mixed by their weights",
                "A. C. Atkinson, A. N. Donev & R. D. Tobias, Optimum Experimental Designs, Oxford "
                "2007",
                "To first order around the fits",
            )
        )
    if isinstance(result.pump, CentrifugalPump) and result.pump.for_water:
        rows.append(
            (
                "Pump curve for a thick product",
                "Correction of a water curve by the parameter B",
                "ANSI/HI 9.6.7-2010 (limits from memory)",
                "Centrifugal pumps, Newtonian products; a Caution stands where it is left",
            )
        )
    if result.case.product.solids is not None:
        rows += _SOLIDS
    if result.holding is not None:
        rows.append(
            (
                "Holding tube",
                "Length by the fastest particle, V(u_max/V) of the product's own profile",
                "Laminar: the velocity profile; else 1.25 V (common practice)",
                "Straight, evenly heated tube without slip or swirl",
            )
        )
    if result.cleaning is not None:
        rows.append(
            (
                "Cleaning in place",
                "A mean velocity in the widest pipe, friction with water",
                "Common practice",
                "Whether it cleans is shown by trial, not by this figure",
            )
        )
    if sizing is not None:
        rows += _sizes(sizing)
    return tuple(rows)


_SOLIDS: tuple[Row, ...] = (
    (
        "Particles at rest",
        "A sphere is held while τ_y is 0.048 gΔρd or more",
        "A. N. Beris, J. A. Tsamopoulos, R. C. Armstrong & R. A. Brown, J. Fluid Mech. 158 (1985) "
        "219",
        "Single spheres in a fluid with a yield stress",
    ),
    (
        "Particles in flow",
        "Velocity below which particles settle out",
        "A. R. Oroskar & R. M. Turian, AIChE J. 26 (1980) 550",
        "Turbulent flow of a carrier without a yield stress",
    ),
)


def _fittings(result: CaseResult) -> list[Row]:
    line = result.line.line
    parts = (*line.suction, *line.discharge)
    rows: list[Row] = []
    given = [p for p in parts if getattr(p, "loss_coefficient", None) is not None]
    if given:
        rows.append(
            (
                "Fittings and ends",
                "K given, times ρV²/2",
                "The user, or common practice",
                "Any flow",
            )
        )
    if any(isinstance(p, Fitting) and p.loss_coefficient is None for p in parts):
        table = fitting_tables()[DEFAULT_TABLE]
        rows.append(("Fittings", table.name, table.source, table.validity))
    if any(isinstance(p, Reducer) and p.loss_coefficient is None for p in parts):
        rows.append(
            (
                "Changes of diameter",
                "Hooper's equations with the Metzner-Reed Reynolds number",
                "W. B. Hooper, Chem. Eng. 95(16) (1988) 89",
                "Newtonian data; for other fluids the Metzner-Reed number stands in (common "
                "practice)",
            )
        )
    return rows


def _sizes(sizing: Sizing) -> list[Row]:
    standards = dict.fromkeys(one.size.standard for one in sizing.candidates)
    rows: list[Row] = [
        (f"Pipe sizes: {name}", "Nominal dimensions", name, STANDARDS[name])
        for name in standards
        if name in STANDARDS
    ]
    if any(one.annual_cost is not None for one in sizing.candidates):
        rows.append(
            (
                "Yearly cost",
                "A share of the capital, by a power of the diameter where no price is given, and "
                "the energy by hours and price",
                "M. S. Peters & K. D. Timmerhaus, Plant Design and Economics for Chemical "
                "Engineers (from memory)",
                "Comparison of sizes, not an estimate of the investment",
            )
        )
    return rows
