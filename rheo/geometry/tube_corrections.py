"""Entrance loss and wall slip of tubes, found from the readings without a model.

Bagley's plot (pressure drop against L/D at equal 8V/D) and Mooney's (8V/D against 1/D at equal
wall stress) ask the same thing: with which entrance loss and slip do the readings of all tubes
fall on one curve? Here that curve is a smooth one through all points at once, so that no readings
at equal rates or stresses are needed.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError
from rheo.geometry.dimensioned import Geometry
from rheo.geometry.smoothing import LEAST_POINTS, polynomial_residual

FloatArray = NDArray[np.float64]

_LARGEST_DEGREE = 5
_ROUNDING = 1e-11


@dataclass(frozen=True)
class Estimate:
    """A correction with its doubt.

    Parameters
    ----------
    value, standard_error : float
        In the unit of the dimension it stands for.
    low, high : float
        Interval that holds the true value with 95 % confidence, by Student's t.
    found : bool
        Whether it was found from the readings; False for one that was taken as given.
    """

    value: float
    standard_error: float
    low: float
    high: float
    found: bool


@dataclass(frozen=True, eq=False)
class TubeCorrections:
    """Entrance loss and slip of a set of tube readings.

    Parameters
    ----------
    geometry : Geometry
        The tubes with both corrections in them.
    entrance_diameters : Estimate
        Bagley's entrance loss [-].
    slip_coefficient : Estimate
        Slip velocity over wall stress [m/(Pa s)].
    correlation : float
        Between the two where both were found [-], else 0.
    scatter : float
        Standard deviation of ln(wall stress) about the one smooth curve [-].
    """

    geometry: Geometry
    entrance_diameters: Estimate
    slip_coefficient: Estimate
    correlation: float
    scatter: float


@dataclass(frozen=True, eq=False)
class _Tubes:
    """Flat readings, the corrections taken as given, and which of them are to be found."""

    diameter: FloatArray
    aspect: FloatArray
    apparent: FloatArray
    pressure: FloatArray
    given: tuple[float, float]
    wanted: tuple[bool, bool]

    def split(self, free: FloatArray) -> tuple[float, float]:
        """Return entrance loss and slip coefficient from the free coordinates."""
        entrance, slip = self.given
        rest = list(free)
        if self.wanted[0]:
            entrance = float(rest.pop(0))
        if self.wanted[1]:
            slip = float(rest.pop(0)) * self.most_slip(entrance)
        return entrance, slip

    def most_slip(self, entrance: float) -> float:
        """Return the slip coefficient with which one reading would be slip alone."""
        return float(np.min(self.apparent * self.diameter / (8.0 * self.stress(entrance))))

    def stress(self, entrance: float) -> FloatArray:
        return self.pressure / (4.0 * (self.aspect + entrance))

    def residual(self, values: tuple[float, float], degree: int) -> FloatArray:
        """Return ln(wall stress) less the best polynomial in ln(8V/D without slip)."""
        entrance, slip = values
        stress = self.stress(entrance)
        rate = self.apparent - 8.0 * slip * stress / self.diameter
        return polynomial_residual(np.log(rate), np.log(stress), degree)


def find_tube_corrections(
    geometry: Geometry,
    flow: ArrayLike,
    pressure_drop: ArrayLike,
    entrance: bool = True,
    slip: bool = True,
) -> TubeCorrections:
    """Find entrance loss and slip with which the readings of all tubes fall on one curve.

    Parameters
    ----------
    geometry : Geometry
        Tubes: a diameter and length for every reading, or arrays that broadcast with them. A
        correction that is not to be found is taken from here.
    flow, pressure_drop : array_like
        Readings [m3/s], [Pa], above 0.
    entrance, slip : bool
        Whether to find the entrance loss, which needs two different L/D, and the slip
        coefficient, which needs two different diameters.

    Returns
    -------
    TubeCorrections
        Both with intervals, and the geometry with both in it.

    Raises
    ------
    InputError
        For another geometry, readings that are not above 0, or tubes that do not differ.
    """
    tubes = _checked(geometry, flow, pressure_drop, (entrance, slip))
    best: tuple[float, FloatArray, int] | None = None
    count, wanted = tubes.pressure.size, sum(tubes.wanted)
    for degree in range(1, max(1, min(_LARGEST_DEGREE, count - wanted - 4)) + 1):
        free = _collapse(tubes, degree)
        residual = tubes.residual(tubes.split(free), degree)
        parameters = degree + 2 + wanted
        score = count * np.log(max(float(np.mean(residual**2)), _ROUNDING**2)) + 2 * parameters
        if count > parameters + 1:
            score += 2.0 * parameters * (parameters + 1) / (count - parameters - 1)
        if best is None or score < best[0] - 2.0:
            best = (score, free, degree)
    assert best is not None
    return _reported(geometry, tubes, tubes.split(best[1]), best[2])


def _checked(
    geometry: Geometry, flow: ArrayLike, pressure_drop: ArrayLike, wanted: tuple[bool, bool]
) -> _Tubes:
    if geometry.key != "tube":
        raise InputError(
            f"entrance loss and slip are found from tube readings, not from '{geometry.key}'"
        )
    dimensions = geometry.dimensions
    flow, pressure, diameter, length, given_entrance, given_slip = (
        np.ravel(value)
        for value in np.broadcast_arrays(
            np.asarray(flow, dtype=float),
            np.asarray(pressure_drop, dtype=float),
            *dimensions.values(),
        )
    )
    if not np.all((flow > 0) & (pressure > 0) & np.isfinite(flow) & np.isfinite(pressure)):
        raise InputError("a flow or pressure drop is not above 0; leave such readings out")
    aspect = length / diameter
    if wanted[0] and np.ptp(aspect) <= 0.02 * np.max(aspect):
        raise InputError(
            "all tubes have the same length over diameter; "
            "the entrance loss needs two different ones"
        )
    if wanted[1] and np.ptp(diameter) <= 0.02 * np.max(diameter):
        raise InputError("all tubes have the same diameter; slip needs two different ones")
    least = LEAST_POINTS + sum(wanted)
    if flow.size < least:
        raise InputError(f"there are {flow.size} readings; this needs {least} or more")
    if np.ptp(given_entrance) > 0 or np.ptp(given_slip) > 0:
        raise InputError("entrance_diameters and slip_coefficient must be one number for all tubes")
    return _Tubes(
        diameter,
        aspect,
        32.0 * flow / (np.pi * diameter**3),
        pressure,
        (float(given_entrance[0]), float(given_slip[0])),
        wanted,
    )


def _collapse(tubes: _Tubes, degree: int) -> FloatArray:
    """Return the free coordinates with which the readings lie closest to one curve."""
    from scipy.optimize import least_squares

    start, low, high = [], [], []
    if tubes.wanted[0]:
        shortest = float(np.min(tubes.aspect))
        start.append(0.02 * shortest)
        low.append(-0.9 * shortest)
        high.append(100.0 * shortest)
    if tubes.wanted[1]:
        start.append(0.05)
        low.append(0.0)
        high.append(0.999)
    if not start:
        return np.zeros(0)

    def residual(free: FloatArray) -> FloatArray:
        return tubes.residual(tubes.split(free), degree)

    solution = least_squares(
        residual,
        start,
        bounds=(low, high),
        x_scale=np.maximum(np.abs(start), 1e-3),
        xtol=1e-14,
        ftol=1e-14,
        gtol=1e-14,
        max_nfev=400,
    )
    return np.asarray(solution.x, dtype=float)


def _reported(
    geometry: Geometry, tubes: _Tubes, values: tuple[float, float], degree: int
) -> TubeCorrections:
    from scipy.stats import t

    residual = tubes.residual(values, degree)
    wanted = [which for which in (0, 1) if tubes.wanted[which]]
    freedom = max(residual.size - degree - 1 - len(wanted), 1)
    scatter = float(np.sqrt(residual @ residual / freedom))
    errors, correlation = np.zeros(2), 0.0
    if wanted:
        scale = (float(np.min(tubes.aspect)), tubes.most_slip(values[0]))
        columns = [
            _derivative(tubes, values, which, 1e-5 * scale[which], degree) for which in wanted
        ]
        jacobian = np.stack(columns, axis=-1)
        covariance = scatter**2 * np.linalg.pinv(jacobian.T @ jacobian, rcond=1e-30)
        errors[wanted] = np.sqrt(np.diag(covariance))
        if len(wanted) == 2 and np.all(errors > 0):
            correlation = float(covariance[0, 1] / (errors[0] * errors[1]))
    reach = float(t.ppf(0.975, freedom))
    entrance, slip = (
        Estimate(value, error, value - reach * error, value + reach * error, found)
        for value, error, found in zip(values, errors.tolist(), tubes.wanted, strict=True)
    )
    corrected = geometry.replaced(entrance_diameters=entrance.value, slip_coefficient=slip.value)
    return TubeCorrections(corrected, entrance, slip, correlation, scatter)


def _derivative(
    tubes: _Tubes, values: tuple[float, float], which: int, step: float, degree: int
) -> FloatArray:
    # One-sided towards more of the correction: less slip than none would still be a flow, but
    # more of it than there is room for would not.
    sign = -1.0 if which == 1 and values[1] > 0.5 * tubes.most_slip(values[0]) else 1.0
    beside = (values[0] + sign * step, values[1])
    if which == 1:
        beside = (values[0], values[1] + sign * step)
    return (tubes.residual(beside, degree) - tubes.residual(values, degree)) / (sign * step)
