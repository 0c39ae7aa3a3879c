"""Profile-likelihood intervals: how far a parameter may move while the others follow.

D. M. Bates & D. G. Watts, Nonlinear Regression Analysis and Its Applications, Wiley (1988),
chapter 6. Unlike value ± t·stderr the interval need not be symmetric, and it shows by its trace
where the readings do not close a parameter in.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import TYPE_CHECKING

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.fitting.coordinates import Coordinates
from rheo.fitting.core import minimise
from rheo.fitting.intervals import t_quantile
from rheo.fitting.problem import coordinates, parameter_keys
from rheo.fitting.residuals import weighted

if TYPE_CHECKING:
    from rheo.fitting.result import Fit

FloatArray = NDArray[np.float64]

# Distances from the value, in standard errors, at which the sum of squares is worked out first.
# The last is the bound.
_REACHES = np.array([0.5, 1.0, 1.5, 2.0, 2.5, 3.0, 4.0, 6.0, 10.0, 30.0, 200.0, np.inf])
_REFINEMENTS = 60
_CLOSE = 1e-6


@dataclass(frozen=True, eq=False)
class Profile:
    """Profile of one parameter.

    Parameters
    ----------
    key : str
        Parameter.
    value : float
        Least-squares value, SI.
    low, high : float
        Where the sum of squares has risen to the limit of the confidence level, SI; the bound of
        the parameter where it never rises so far.
    low_open, high_open : bool
        Whether that end is a bound and no limit.
    trace_value : array, shape (m,)
        Values of the parameter in rising order, SI.
    trace_root : array, shape (m,)
        Signed root of the rise of the sum of squares over the variance of the residuals [-], to be
        compared with Student's t: a straight line where value ± t·stderr holds.
    """

    key: str
    value: float
    low: float
    high: float
    low_open: bool
    high_open: bool
    trace_value: FloatArray
    trace_root: FloatArray


def profile(fit: Fit, key: str, level: float = 0.95) -> Profile:
    """Return the profile of a parameter and its interval.

    Parameters
    ----------
    fit : Fit
        A fitted model with more readings than free parameters.
    key : str
        One of its parameters.
    level : float
        Confidence level, between 0 and 1.

    Returns
    -------
    Profile

    Raises
    ------
    InputError
        For an unknown parameter, a level outside 0 to 1, or no reading to spare.
    """
    keys = parameter_keys(fit.problem)
    if key not in keys:
        raise InputError(f"unknown parameter '{key}'; there are {', '.join(keys)}", "profile")
    if not 0.0 < level < 1.0:
        raise InputError(f"the level is {level:g}; it must lie between 0 and 1", "profile")
    if fit.freedom < 1:
        raise InputError("there are as many free parameters as readings", "profile")
    index = keys.index(key)
    limit = t_quantile(fit.freedom, 0.5 + 0.5 * level)
    ends = [_one_side(fit, index, limit, sign) for sign in (-1.0, 1.0)]
    (low, low_open, below), (high, high_open, above) = ends
    values = np.concatenate([below[0][::-1], [fit.final.parameters[index]], above[0]])
    roots = np.concatenate([-below[1][::-1], [0.0], above[1]])
    value = float(fit.final.parameters[index])
    return Profile(key, value, low, high, low_open, high_open, values, roots)


def _one_side(
    fit: Fit, index: int, limit: float, sign: float
) -> tuple[float, bool, tuple[FloatArray, FloatArray]]:
    """Return the end of the interval on one side, whether it is a bound, and the trace."""
    scale = coordinates(fit.problem)
    middle = scale.inner(fit.final.parameters)
    end = scale.inner_bounds[0 if sign < 0 else 1][index]
    unit = _inner_error(fit, index, scale)
    reaches = np.minimum(_REACHES * unit, abs(end - middle[index]))
    at = np.unique(middle[index] + sign * reaches)[:: int(sign)]
    at = at[at != middle[index]]
    if at.size == 0:
        return float(fit.final.parameters[index]), True, (at, at)
    roots = _roots(fit, index, at, scale)
    bound = (fit.problem.record.parameters + fit.problem.extra)[index]
    for step in range(_REFINEMENTS):
        known = np.concatenate([[0.0], np.maximum.accumulate(roots)])
        places = np.concatenate([[middle[index]], at])
        beyond = int(np.searchsorted(known, limit))
        if beyond == known.size:
            end = bound.lower if sign < 0 else bound.upper
            return float(end), True, (_outer(scale, middle, index, at), roots)
        # Straight interpolation, and halves in between, for a rise that is all but a step.
        rise = known[beyond] - known[beyond - 1]
        share = 0.5 if step % 3 == 2 else (limit - known[beyond - 1]) / rise
        new = places[beyond - 1] + share * (places[beyond] - places[beyond - 1])
        if np.min(np.abs(roots - limit)) <= _CLOSE * limit or np.any(places == new):
            break
        at = np.insert(at, beyond - 1, new)
        roots = np.insert(roots, beyond - 1, _roots(fit, index, np.array([new]), scale))
    outer = _outer(scale, middle, index, at)
    return float(outer[int(np.argmin(np.abs(roots - limit)))]), False, (outer, roots)


def _inner_error(fit: Fit, index: int, scale: Coordinates) -> float:
    """Return the standard error in the coordinate of the search, or what stands for it.

    At a bound that is half the way to the one-sided limit, and a tenth of the value for a
    parameter that is not identified.
    """
    inner = scale.inner(fit.final.parameters)
    outer = scale.outer(inner)
    one = fit.parameters[parameter_keys(fit.problem)[index]]
    error = one.stderr
    if one.bound:
        error = 0.5 * max(one.high - one.value, one.value - one.low)
        limit = scale.inner(np.where(np.arange(inner.size) == index, one.value + error, outer))
        return float(abs(limit[index] - inner[index]))
    if not (np.isfinite(error) and error > 0):
        error = 0.1 * abs(one.value)
    return float(error / scale.slope(inner, outer)[index])


def _outer(scale: Coordinates, middle: FloatArray, index: int, at: FloatArray) -> FloatArray:
    rows = np.repeat(middle[np.newaxis], at.size, axis=0)
    rows[:, index] = at
    return scale.settled(scale.outer(rows))[:, index]


def _roots(fit: Fit, index: int, at: FloatArray, scale: Coordinates) -> FloatArray:
    """Return the root of the rise at values held at coordinates `at`, the others following.

    Each is searched from the fit and from where its covariance points, all at once.
    """
    middle = scale.inner(fit.final.parameters)
    values = _outer(scale, middle, index, at)
    still = np.repeat(middle[np.newaxis], at.size, axis=0)
    along = still.copy()
    free = np.flatnonzero(fit.final.free)
    if index in free and np.isfinite(fit.final.covariance).all():
        slope = scale.slope(middle, scale.outer(middle))[free]
        covariance = fit.final.covariance / np.outer(slope, slope)
        place = int(np.flatnonzero(free == index)[0])
        direction = covariance[place] / covariance[place, place]
        along[:, free] += (at - middle[index])[:, np.newaxis] * direction
    start = scale.outer(np.clip(np.concatenate([still, along]), *scale.inner_bounds))
    held = np.tile(values, 2)
    whole = Coordinates.stacked([scale], [held.size])
    whole.lower[:, index] = whole.upper[:, index] = held
    start[:, index] = held
    found = minimise(weighted([fit.problem], [held.size]), start, whole, steps=100)
    lowest = found.sum_of_squares.reshape(2, -1).min(axis=0)
    variance = fit.weighted_ss / fit.freedom
    return np.sqrt(np.maximum(lowest - fit.weighted_ss, 0.0) / variance)
