"""Models that may be the right one, linear around their fits: pressure drop and new readings.

A model's doubt in its parameters is taken from the singular values of its weighted sensitivities,
so that a parameter that moves neither the readings nor the pressure drop (a plateau never reached)
does no harm, while one that moves the pressure drop and not the readings is found out.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.scaling import ScaledProblem
from rheo.line.parts import FloatArray, Line
from rheo.line.product import FlowCurveSource, Product
from rheo.line.thickness import thicker_curve
from rheo.line.walk import walk
from rheo.models import Model

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


def curve_at(fit: Fit, values: FloatArray, state: float | None) -> FlowCurveSource:
    """Return the flow curve of a fit at parameters of shape (..., p), for use in a line.

    Parameters
    ----------
    fit : Fit
        The fitted model.
    values : array, shape (..., p)
        Parameters of the model and what is fitted with it.
    state : float or None
        For a fit over solids fractions the product's fraction; the reference when None.

    Returns
    -------
    Model or callable
        A function of temperature for a fit over temperatures.
    """
    problem = fit.problem
    if not isinstance(problem, ScaledProblem):
        return fit.model_of(values[..., : len(fit.record.parameters)])
    curve = problem.curve(values)
    if problem.law.state == "temperature":
        return curve
    return curve(problem.law.reference if state is None else state)


def model_at(fit: Fit, product: Product, state: float | None) -> Model:
    """Return the fitted flow curve at the product's temperature, or its solids fraction."""
    values = np.array([one.value for one in fit.parameters.values()], dtype=float)
    return product.model_at(product.temperature, curve_at(fit, values, state))


def rival(
    fit: Fit,
    line: Line,
    product: Product,
    flow: float,
    candidates: Candidates,
    state: float | None = None,
    method: str | None = None,
    thickness: float = 1.0,
) -> Rival | None:
    """Return a fitted model as a rival.

    Parameters
    ----------
    fit : Fit
        The fitted model.
    line, product, flow : Line, Product, float
        Where the pressure drop is wanted, and the flow [m3/s]; readings would be taken at the
        product's temperature.
    candidates : Candidates
        Readings that could be taken.
    state : float, optional
        For a fit over solids fractions the product's fraction; the reference when absent.
    method : str, optional
        Turbulent friction method.
    thickness : float
        Stress of the product in the line over that of the product that is measured [-].

    Returns
    -------
    Rival or None
        None where the readings leave the pressure drop by this model open.
    """
    problem = fit.problem
    values = np.array([one.value for one in fit.parameters.values()], dtype=float)
    free = np.array([key in fit.parameter_keys for key in fit.parameters])
    if not free.any() or fit.freedom < 1:
        return None
    _, slopes = problem.sensitivity(values[np.newaxis])
    weighted = slopes[0, free] / problem.weighting.sigma(problem.observed)
    scale = np.linalg.norm(weighted, axis=-1)
    if not np.all(np.isfinite(scale) & (scale > 0)):
        return None
    scaled = (weighted / scale[:, np.newaxis]).T
    _, singular, directions = np.linalg.svd(scaled, full_matrices=False)
    moved, width = _moved(fit, values, free)
    source = curve_at(fit, moved, state)
    pumped = source if thickness == 1.0 else thicker_curve(source, thickness)
    logs = _log_pressures(line, product, flow, pumped, moved.shape[0], method)
    pull = directions @ ((logs[1::2] - logs[2::2]) / width / scale)
    seen = singular > _UNSEEN * singular[0]
    if np.any(np.abs(pull[~seen]) > _NO_MATTER * np.abs(pull).max()):
        return None
    model = product.model_at(product.temperature, source)
    readings, share = _new_readings(fit, model, moved, candidates)
    new_slopes = (readings[1::2] - readings[2::2]) / (width * scale)[:, np.newaxis]
    push = directions[seen] @ new_slopes
    scatter = max(fit.scatter, 1.0) if problem.weighting.known else fit.scatter
    size = scatter**2 / singular[seen] ** 2
    return Rival(
        fit.weight,
        float(logs[0]),
        float(np.sum(size * pull[seen] ** 2)),
        readings[0],
        (size * pull[seen]) @ push,
        size @ push**2,
        share * readings[0] * scatter,
    )


def _moved(fit: Fit, values: FloatArray, free: NDArray[np.bool_]) -> tuple[FloatArray, FloatArray]:
    """Parameters at the fit and with each free one moved up and down in turn, and the widths."""
    every = (*fit.record.parameters, *fit.problem.extra)
    index = np.flatnonzero(free)
    lower = np.array([one.lower for one in every])[index]
    upper = np.array([one.upper for one in every])[index]
    room = 0.5 * np.minimum(values[index] - lower, upper - values[index])
    size = np.where(values[index] != 0, np.abs(values[index]), 1.0)
    step = np.minimum(_STEP * size, room)
    moved = np.repeat(values[np.newaxis], 2 * index.size + 1, axis=0)
    row = np.arange(index.size)
    moved[1 + 2 * row, index] += step
    moved[2 + 2 * row, index] -= step
    return moved, moved[1 + 2 * row, index] - moved[2 + 2 * row, index]


def _log_pressures(
    line: Line,
    product: Product,
    flow: float,
    source: FlowCurveSource,
    count: int,
    method: str | None,
) -> FloatArray:
    found = walk(line, product, np.full(1, flow), source=source, method=method)
    pressure = np.broadcast_to(found.differential_pressure, (count,))
    if not np.all(pressure > 0):
        raise InputError(
            "the line needs no pressure at this flow, so that there is nothing to narrow", line.name
        )
    return np.log(pressure)


def _new_readings(
    fit: Fit, model: Model, moved: FloatArray, candidates: Candidates
) -> tuple[FloatArray, FloatArray]:
    """Readings at every row of parameters, and their weighting at the fit as shares of them."""
    weighting, at, geometry = fit.problem.weighting, candidates.setting, candidates.geometry
    rows = model.with_new_axis()
    if geometry is None:
        readings = rows.stress(at)
        return readings, weighting.sigma(readings[0]) / readings[0]
    count = len(fit.record.parameters)
    fitted = {
        one.key: moved[:, count + i, np.newaxis]
        for i, one in enumerate(fit.problem.extra)
        if one.key in geometry.record.dimension_keys
    }
    whole = geometry.replaced(**fitted) if fitted else geometry
    readings = np.broadcast_to(whole.predict(rows, at), (moved.shape[0], at.size))
    own = getattr(fit.problem, "geometry", None)
    if own is not None and own.key == geometry.key:
        return readings, weighting.sigma(readings[0]) / readings[0]
    # The readings so far are stresses or of another instrument: a new one is as good, relatively,
    # as a stress is there.
    _, stress = geometry.sheared(
        model.map(lambda value: value[..., 0] if value.ndim else value), at
    )
    return readings, weighting.sigma(stress) / stress
