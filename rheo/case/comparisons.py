"""The pressure by each fitted model, and how far each pipe is from another regime."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from rheo.case.result import CaseResult
from rheo.case.solids_state import at_solids
from rheo.errors import InputError
from rheo.fitting import Fit
from rheo.hydraulics.registry import criteria
from rheo.line.operating import OperatingPoint, operating_point
from rheo.line.thickness import thicker
from rheo.line.walk import walk

# A model with a smaller Akaike weight is no rival worth a line of its own.
LEAST_WEIGHT = 1e-3


@dataclass(frozen=True, eq=False)
class ModelPressure:
    """What the line takes by one model.

    Parameters
    ----------
    fit : Fit
        The model.
    friction_pressure, differential_pressure : float
        [Pa].
    share : float
        Friction pressure over that by the model in use, less 1 [-].
    """

    fit: Fit
    friction_pressure: float
    differential_pressure: float
    share: float


def pressure_by_model(
    result: CaseResult, least_weight: float = LEAST_WEIGHT
) -> tuple[ModelPressure, ...]:
    """Return the pressure of the line by every model that may be the right one.

    Parameters
    ----------
    result : CaseResult
        With its ranked models.
    least_weight : float
        Models of smaller Akaike weight are left out; the model in use never is.

    Returns
    -------
    tuple of ModelPressure
        In the order of the ranking.
    """
    case, line = result.case, result.line
    now = float(line.friction_pressure)
    factor = float(case.product.stress_factor or 1.0)
    found = []
    for fit in result.fits:
        used = fit.key == result.chosen.key
        if not used and fit.weight < least_weight:
            continue
        source = result.fits.source(fit.key)
        model = at_solids(source, result.fits, result.product.solids_fraction)
        product = replace(result.product, model=model, draws=())
        try:
            at = walk(
                line.line,
                product if factor == 1.0 else thicker(product, factor),
                result.flow,
                method=case.line.friction_method,
            )
        except InputError:
            # A method that the user chose need not apply to every model.
            continue
        friction = float(at.friction_pressure)
        pressure = float(at.differential_pressure)
        found.append(ModelPressure(fit, friction, pressure, friction / now - 1.0 if now else 0.0))
    return tuple(found)


def central_operating_point(result: CaseResult) -> OperatingPoint | None:
    """Return where pump and line meet by the flow curve itself, without its draws.

    Some hundred times quicker than ``result.operating``, for comparisons; None where the pump's
    curve is not known.
    """
    if result.pump is None:
        return None
    product = replace(result.product, draws=())
    method = result.case.line.friction_method
    return operating_point(result.line.line, product, result.pump, method)


@dataclass(frozen=True)
class RegimeMargin:
    """How far one pipe is from another regime.

    Parameters
    ----------
    name, regime : str
        Of the pipe.
    velocity, reynolds : float
        Mean velocity [m/s] and Metzner-Reed number [-].
    critical_velocity, critical_reynolds : float
        Where laminar flow ends [m/s], [-].
    critical_flow : float
        Flow at which it ends in this pipe [m3/s].
    by_criterion : tuple of (str, float)
        The same by every criterion made for the flow curve, with its name [m3/s].
    """

    name: str
    regime: str
    velocity: float
    reynolds: float
    critical_velocity: float
    critical_reynolds: float
    critical_flow: float
    by_criterion: tuple[tuple[str, float], ...] = ()

    @property
    def share(self) -> float:
        """Flow over the flow at which laminar flow ends [-]."""
        return self.velocity / self.critical_velocity


def regime_margins(result: CaseResult) -> tuple[RegimeMargin, ...]:
    """Return for each pipe how far it is from the end of laminar flow."""
    parts = [part for part in result.line.parts if part.kind == "pipe"]
    found = []
    for part, pipe in zip(parts, result.pipes, strict=True):
        velocity = float(part.velocity)
        critical = float(np.asarray(pipe.critical_velocity))
        found.append(
            RegimeMargin(
                part.name,
                part.regime,
                velocity,
                float(part.reynolds),
                critical,
                float(np.asarray(pipe.critical_reynolds)),
                result.flow * critical / velocity,
                tuple(
                    (criteria()[key].name, result.flow * float(np.asarray(other)) / velocity)
                    for key, other in pipe.critical_velocities.items()
                ),
            )
        )
    return tuple(found)
