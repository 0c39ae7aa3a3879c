"""Every method that stands behind the note, with its source and its range."""

from __future__ import annotations

from rheo.geometry import Geometry
from rheo.hydraulics import pipe_flow
from rheo.hydraulics.registry import criteria, turbulent_methods
from rheo.line import LineResult
from rheo.models import ModelRecord
from rheo.report.document import Paragraph, Section, Table

Row = tuple[str, str, str, str]

_INTEGRAL = "Readings predicted from the flow curve by the exact integral over the geometry"
_FITTING: tuple[Row, ...] = (
    (
        "Global fit",
        "Variable projection over the shape parameters, then least squares with lmfit",
        "G. H. Golub & V. Pereyra, SIAM J. Numer. Anal. 10 (1973) 413",
        "Readings at as many different settings as the model has parameters",
    ),
    (
        "Ranking",
        "AICc and Akaike weights on the same readings and weights; within 2 units the simpler "
        "model is used",
        "K. P. Burnham & D. R. Anderson, Model Selection and Multimodel Inference, Springer 2002",
        "At least 3 readings more than parameters",
    ),
    (
        "Trend of the residuals",
        "Runs test on their signs",
        "A. Wald & J. Wolfowitz, Ann. Math. Stat. 11 (1940) 147",
        "Readings in order of their setting",
    ),
    (
        "Interval of the pressure drop",
        "Draws of the flow curve, mixed by Akaike weight, each through the same pipe calculation",
        "B. Efron & R. J. Tibshirani, An Introduction to the Bootstrap, Chapman & Hall 1993",
        "The doubt in the readings and in the choice among the models fitted",
    ),
)
_LINE: tuple[Row, ...] = (
    (
        "Laminar flow in a pipe",
        "Exact integral over the flow curve, 8V/D = (4/τw³)∫τ²γ̇dτ",
        "B. Rabinowitsch, Z. phys. Chem. A145 (1929) 1; M. Mooney, J. Rheol. 2 (1931) 210",
        "Developed flow without slip of a fluid whose flow curve does not change with time",
    ),
    (
        "Reynolds number",
        "8ρV²/τw of laminar flow, with the local n′ and K′",
        "A. B. Metzner & J. C. Reed, AIChE J. 1 (1955) 434",
        "Any flow curve",
    ),
    (
        "Energy balance",
        "Friction, heights, vessel pressures, and kinetic energy with α of the velocity profile",
        "Common practice",
        "Steady flow of a liquid",
    ),
    (
        "Doubt budget",
        "Variance by cause, to first order; readings and model choice by the law of total variance",
        "JCGM 100:2008, Guide to the expression of uncertainty in measurement",
        "Independent causes",
    ),
)


def model_row(record: ModelRecord) -> Row:
    """Return the row of a flow-curve model."""
    return (f"Flow curve: {record.name}", record.equation, record.source, record.validity)


def methods_section(
    line: LineResult,
    model: ModelRecord,
    geometries: tuple[Geometry, ...] = (),
    start_up_method: str = "",
    extra: tuple[Row, ...] = (),
) -> Section:
    """Return the section on methods.

    Parameters
    ----------
    line : LineResult
        Its pipes say which criterion and which turbulent method apply.
    model : ModelRecord
        The flow curve in use.
    geometries : tuple of Geometry
        Of the readings.
    start_up_method : str
        In words.
    extra : tuple of (str, str, str, str)
        Further rows: what for, method, source, range.

    Returns
    -------
    Section
        One row a method.
    """
    rows: list[Row] = [model_row(model)]
    for record in {one.record.key: one.record for one in geometries}.values():
        rows.append((f"Instrument: {record.name}", _INTEGRAL, record.source, record.validity))
    rows += [*_FITTING, *_LINE, *_pipe_rows(line)]
    if start_up_method:
        rows.append(
            ("Start-up", start_up_method, "Common practice", "A line that is full and even")
        )
    rows += extra
    return Section(
        "Methods, sources and ranges",
        (
            Table(("What for", "Method", "Source", "Range"), tuple(rows)),
            Paragraph(
                "Symbols: γ̇ shear rate, τ shear stress, τ_y yield stress, w at the wall.", "small"
            ),
        ),
    )


def _pipe_rows(line: LineResult) -> list[Row]:
    """Return the transition criterion and the turbulent methods that the pipes call on."""
    found: list[Row] = []
    for part in line.parts:
        if part.kind != "pipe":
            continue
        at = pipe_flow(
            line.product.model_at(part.temperature),
            float(part.diameter),
            float(part.velocity),
            line.product.density,
        )
        criterion = criteria()[at.criterion]
        found.append(("End of laminar flow", criterion.name, criterion.source, criterion.validity))
        method = turbulent_methods()[at.method]
        used = "used" if part.regime != "laminar" else "not called on, the flow is laminar"
        found.append((f"Turbulent friction ({used})", method.name, method.source, method.validity))
    return list(dict.fromkeys(found))
