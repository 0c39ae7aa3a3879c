"""Pressure gradient against velocity for one product and pipe, with its doubt: data for a plot."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution, InputError
from rheo.hydraulics.conditions import FloatArray, lay_out, positive
from rheo.hydraulics.laminar import laminar_velocity
from rheo.hydraulics.pipe import PipeFlow, pipe_flow
from rheo.hydraulics.regimes import Law, progress, velocity_at_wall
from rheo.hydraulics.registry import DEFAULT_CRITERION, criterion, turbulent_method
from rheo.hydraulics.roots import IndexArray, solve_rising
from rheo.hydraulics.short import critical_velocity
from rheo.models import Model

_POINTS = 121


@dataclass(frozen=True, eq=False)
class RegimeMap:
    """What a regime map shows.

    Parameters
    ----------
    velocity, gradient : array, shape (points,)
        Mean velocity [m/s] and pressure gradient [Pa/m] of the best model.
    regime : array of str, shape (points,)
        ``laminar``, ``transition`` or ``turbulent``.
    low, high : array or None, shape (points,)
        Band of the draws [Pa/m].
    level : float
        Share of the draws within the band.
    critical_velocity : float
        End of laminar flow [m/s].
    critical_band : tuple of float or None
        The same over the draws [m/s].
    turbulent_velocity : float
        End of the transition's span [m/s].
    measured_velocity : tuple of float or None
        Velocities [m/s] at which the wall works at the lowest and the highest measured shear rate.
    gradient_by_method : mapping of str to array
        The best model by every turbulent method [Pa/m].
    cautions : tuple of Caution
        What to know of it.
    """

    velocity: FloatArray
    gradient: FloatArray
    regime: NDArray[np.str_]
    low: FloatArray | None
    high: FloatArray | None
    level: float
    critical_velocity: float
    critical_band: tuple[float, float] | None
    turbulent_velocity: float
    measured_velocity: tuple[float, float] | None
    gradient_by_method: Mapping[str, FloatArray]
    cautions: tuple[Caution, ...]


def regime_map(
    model: Model,
    diameter: float,
    density: float,
    roughness: float = 0.0,
    velocity: ArrayLike | None = None,
    draws: Iterable[Model] = (),
    measured_rate: tuple[float, float] | None = None,
    level: float = 0.95,
    method: str | None = None,
    transition: str = DEFAULT_CRITERION,
) -> RegimeMap:
    """Return pressure gradient against velocity for one product in one pipe.

    Parameters
    ----------
    model : Model
        Best flow curve, parameters scalars.
    diameter, density, roughness : float
        Inside diameter [m], density [kg/m3], wall roughness [m].
    velocity : array_like, 1-D, optional
        Mean velocities [m/s], rising; by default 1 cm/s to 10 m/s, or to twice the end of the
        transition where that lies below 30 m/s.
    draws : iterable of Model
        Flow curves whose parameters are 1-D arrays of draws, such as `Fits.draws` returns; all
        draws weigh alike.
    measured_rate : tuple of float, optional
        Lowest and highest measured shear rate [1/s].
    level : float
        Share of the draws within the band.
    method, transition : str
        Turbulent method (the default of each flow curve when absent) and transition criterion.

    Returns
    -------
    RegimeMap
        Arrays for a plot.

    Raises
    ------
    InputError
        For an impossible value, a best model with arrays of parameters, or a level not between
        0 and 1.
    """
    if model.shape != ():
        raise InputError("its parameters must be single numbers; give arrays as draws", "model")
    if not 0 < level < 1:
        raise InputError(f"it is {level:g}; it must lie between 0 and 1", "level")
    critical = float(critical_velocity(model, diameter, density, transition))
    full = _end_of_transition(model, diameter, density, transition)
    if velocity is None:
        highest = 2.0 * full if 5.0 < full < 15.0 else 10.0
        speed = np.geomspace(0.01, highest, _POINTS)
    else:
        speed = np.atleast_1d(positive(velocity, "velocity", "m/s"))
    best = pipe_flow(
        model, diameter, speed, density, roughness, method=method, transition=transition
    )
    low, high, band = _band(draws, best, level)
    return RegimeMap(
        velocity=speed,
        gradient=best.pressure_gradient,
        regime=best.regime,
        low=low,
        high=high,
        level=level,
        critical_velocity=critical,
        critical_band=band,
        turbulent_velocity=full,
        measured_velocity=_measured(model, diameter, density, roughness, measured_rate, best),
        gradient_by_method=best.gradient_by_method,
        cautions=best.cautions,
    )


def _end_of_transition(model: Model, diameter: float, density: float, transition: str) -> float:
    _, pipe, _ = lay_out(model, diameter, density)
    rule = criterion(transition, model)

    def gap(log_rate: FloatArray, index: IndexArray) -> FloatArray:
        return progress(pipe.take(index), np.exp(log_rate), rule) - 1.0

    rate = np.exp(solve_rising(gap, np.zeros(1), step=2.0, low=-50.0, high=50.0))
    if not (np.isfinite(rate[0]) and rate[0] > 0):
        return float(rate[0])
    return float(laminar_velocity(pipe, rate)[0])


def _band(
    draws: Iterable[Model], best: PipeFlow, level: float
) -> tuple[FloatArray | None, FloatArray | None, tuple[float, float] | None]:
    """Return the band of the gradients, and of the critical velocity."""
    gradients, criticals = [], []
    for family in draws:
        key = best.method if family.key == best.model.key else None
        flow = pipe_flow(
            family.with_new_axis(),
            best.diameter,
            best.velocity,
            best.density,
            best.roughness,
            method=key,
            transition=best.criterion,
        )
        gradients.append(flow.pressure_gradient.reshape(-1, np.size(best.velocity)))
        bore, mass = np.ravel(best.diameter)[0], np.ravel(best.density)[0]
        criticals.append(np.ravel(critical_velocity(family, bore, mass, best.criterion)))
    if not gradients:
        return None, None, None
    tails = [0.5 * (1.0 - level), 0.5 * (1.0 + level)]
    low, high = np.quantile(np.concatenate(gradients), tails, axis=0)
    least, most = np.quantile(np.concatenate(criticals), tails)
    return low, high, (float(least), float(most))


def _measured(
    model: Model,
    diameter: float,
    density: float,
    roughness: float,
    measured_rate: tuple[float, float] | None,
    best: PipeFlow,
) -> tuple[float, float] | None:
    if measured_rate is None:
        return None
    ends = positive(measured_rate, "measured_rate", "1/s")
    _, pipe, (rate,) = lay_out(model, diameter, density, roughness, ends)
    law = Law(criterion(best.criterion, model), turbulent_method(best.method, model))
    found, _ = velocity_at_wall(pipe, pipe.model.record.stress(rate, *pipe.model), law)
    return float(found[0]), float(found[-1])
