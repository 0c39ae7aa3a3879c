"""Models that may be the right one, linear around their fits: pressure drop and new readings.

A model's doubt in its parameters is taken from the singular values of its weighted sensitivities,
so that a parameter that moves neither the readings nor the pressure drop (a plateau never reached)
does no harm, while one that moves the pressure drop and not the readings is found out.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np

from rheo.errors import InputError
from rheo.line.parts import FloatArray, Line
from rheo.line.product import Product
from rheo.line.walk import walk

if TYPE_CHECKING:
    from rheo.fitting import Fit
    from rheo.geometry import Geometry

# Below this share of the largest singular value the readings do not see a direction at all, and
# below the other one the pressure drop does not (both far above the rounding of the slopes).
_UNSEEN = 1e-7
_NO_MATTER = 1e-5
_STEP = 1e-5


@dataclass(frozen=True, eq=False)
class Candidates:
    """Readings that could be taken.

    Parameters
    ----------
    kind : str
        ``angular_speed``, ``flow`` or ``rate``.
    setting : array, shape (candidates,)
        Angular speed [rad/s], flow [m3/s], or shear rate [1/s].
    geometry : Geometry or None
        With dimensions of shape () or (candidates,); None for stresses at shear rates.
    place : tuple of str
        Which of several tubes or cups, in words; empty texts where there is one.
    """

    kind: str
    setting: FloatArray
    geometry: Geometry | None
    place: tuple[str, ...]


@dataclass(frozen=True, eq=False)
class Rival:
    """One model, linear around its fit.

    Parameters
    ----------
    weight : float
        Akaike weight [-].
    log_pressure, variance : float
        ln of the pressure drop, and its variance [-].
    reading : array, shape (candidates,)
        Predicted reading.
    effect, spread : array, shape (candidates,)
        Covariance of the predicted reading with the ln of the pressure drop, and its variance.
    noise : array, shape (candidates,)
        Standard deviation of a reading about its prediction.
    """

    weight: float
    log_pressure: float
    variance: float
    reading: FloatArray
    effect: FloatArray
    spread: FloatArray
    noise: FloatArray


def rival(
    fit: Fit,
    line: Line,
    product: Product,
    flow: float,
    candidates: Candidates,
    method: str | None,
) -> Rival | None:
    """Return a fitted model as a rival.

    Parameters
    ----------
    fit : Fit
        The fitted model.
    line, product, flow : Line, Product, float
        Where the pressure drop is wanted, and the flow [m3/s].
    candidates : Candidates
        Readings that could be taken.
    method : str or None
        Turbulent friction method.

    Returns
    -------
    Rival or None
        None where the readings leave the pressure drop by this model open.
    """
    problem = fit.problem
    values = np.concatenate(
        [
            [float(value) for value in fit.model],
            [fit.parameters[one.key].value for one in problem.extra],
        ]
    )
    free = np.array([key in fit.parameter_keys for key in fit.parameters])
    if not free.any() or fit.freedom < 1:
        return None
    _, slopes = problem.sensitivity(values[np.newaxis])
    weighted = slopes[0, free] / problem.weighting.sigma(problem.observed)
    scale = np.linalg.norm(weighted, axis=-1)
    if not np.all(np.isfinite(scale) & (scale > 0)):
        return None
    _, singular, directions = np.linalg.svd(
        (weighted / scale[:, np.newaxis]).T, full_matrices=False
    )
    log_pressure, by_parameter = _log_pressure(fit, values, free, line, product, flow, method)
    pull = directions @ (by_parameter / scale)
    seen = singular > _UNSEEN * singular[0]
    if np.any(np.abs(pull[~seen]) > _NO_MATTER * np.abs(pull).max()):
        return None
    reading, new_slopes, share = _new_readings(fit, values, candidates)
    push = directions[seen] @ (new_slopes[free] / scale[:, np.newaxis])
    scatter = max(fit.scatter, 1.0) if problem.weighting.known else fit.scatter
    size = scatter**2 / singular[seen] ** 2
    return Rival(
        fit.weight,
        log_pressure,
        float(np.sum(size * pull[seen] ** 2)),
        reading,
        (size * pull[seen]) @ push,
        size @ push**2,
        share * reading * scatter,
    )


def _log_pressure(
    fit: Fit,
    values: FloatArray,
    free: FloatArray,
    line: Line,
    product: Product,
    flow: float,
    method: str | None,
) -> tuple[float, FloatArray]:
    """ln(pressure) and its derivatives by the free parameters, by central differences in one call.

    A parameter of the instrument does not reach the pipe: its derivative is 0.
    """
    every = (*fit.record.parameters, *fit.problem.extra)
    own = np.flatnonzero(free)
    lower = np.array([one.lower for one in every])[own]
    upper = np.array([one.upper for one in every])[own]
    room = 0.5 * np.minimum(values[own] - lower, upper - values[own])
    size = np.where(values[own] != 0, np.abs(values[own]), 1.0)
    step = np.minimum(_STEP * size, room)
    moved = np.repeat(values[np.newaxis], 2 * own.size + 1, axis=0)
    row = np.arange(own.size)
    moved[1 + 2 * row, own] += step
    moved[2 + 2 * row, own] -= step
    found = walk(line, product, np.full(1, flow), source=fit.source_of(moved), method=method)
    pressure = found.differential_pressure
    if not np.all(pressure > 0):
        raise InputError(
            "the line needs no pressure at this flow, so that there is nothing to narrow", line.name
        )
    logs = np.log(np.broadcast_to(pressure, (moved.shape[0],)))
    slopes = np.zeros(values.size)
    width = moved[1 + 2 * row, own] - moved[2 + 2 * row, own]
    slopes[own] = (logs[1::2] - logs[2::2]) / width
    return float(logs[0]), slopes[free]


def _new_readings(
    fit: Fit, values: FloatArray, candidates: Candidates
) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Predicted readings, their slopes (p, candidates), and their weighting as shares of them.

    Slopes by central differences, all shifted parameters in one call.
    """
    weighting, extra = fit.problem.weighting, fit.problem.extra
    count = len(fit.record.parameters)
    at, geometry = candidates.setting, candidates.geometry
    if geometry is None:
        slopes = fit.record.jacobian(at, *fit.model)
        reading = fit.model.stress(at)
        table = np.stack([np.broadcast_to(slope, at.shape) for slope in slopes])
        return reading, table, weighting.sigma(reading) / reading
    row = np.arange(values.size)
    step = _STEP * np.where(values != 0, np.abs(values), 1.0)
    moved = np.repeat(values[np.newaxis], 2 * values.size + 1, axis=0)
    moved[1 + 2 * row, row] += step
    moved[2 + 2 * row, row] -= np.where(values != 0, step, 0.0)
    models = fit.model_of(moved[:, :count]).with_new_axis()
    fitted = {one.key: moved[:, count + i, np.newaxis] for i, one in enumerate(extra)}
    same = geometry.key == getattr(getattr(fit.problem, "geometry", None), "key", None)
    instrument = {key: value for key, value in fitted.items() if key in geometry.dimensions}
    if same and instrument:
        geometry = geometry.replaced(**instrument)
    readings = np.broadcast_to(geometry.predict(models, at), (moved.shape[0], at.size))
    width = moved[1 + 2 * row, row] - moved[2 + 2 * row, row]
    table = (readings[1::2] - readings[2::2]) / width[:, np.newaxis]
    if same:
        return readings[0], table, weighting.sigma(readings[0]) / readings[0]
    # The readings so far are stresses or of another instrument: a new one is as good, relatively,
    # as a stress is there.
    _, stress = geometry.sheared(fit.model, at)
    return readings[0], table, weighting.sigma(stress) / stress
