"""Parameter intervals from the covariance, with the word for each."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import NDArray

from rheo.fitting.final import Final
from rheo.fitting.problem import Problem, coordinates, parameter_keys
from rheo.fitting.residuals import weighted

FloatArray = NDArray[np.float64]
LEVEL = 0.95


@dataclass(frozen=True)
class FittedParameter:
    """One parameter of a fit.

    Parameters
    ----------
    key, symbol, unit : str
        Name in code, symbol in tables, SI unit [-].
    value : float
        Least-squares value, SI.
    stderr : float
        Standard error, SI; NaN at a bound and where the data cannot identify the parameter.
    low, high : float
        95 % interval, SI: value ± t·stderr, cut off at the bounds of the parameter, or at a value
        that lies beyond: one at its bound may, given at another temperature or solids fraction.
    bound : str
        ``lower`` or ``upper`` if the value is at that bound, else empty.
    note : str
        What to know of the interval, empty for an ordinary one.
    """

    key: str
    symbol: str
    unit: str
    value: float
    stderr: float
    low: float
    high: float
    bound: str = ""
    note: str = ""

    @property
    def relative_error(self) -> float:
        """Standard error over the size of the value [-]; NaN or infinite where it has none."""
        return self.stderr / abs(self.value) if self.value != 0 else float("inf")


def t_quantile(freedom: int, probability: float) -> float:
    """Return the quantile of Student's t distribution with `freedom` degrees of freedom."""
    from scipy.special import stdtrit

    return float(stdtrit(freedom, probability))


def fitted_parameters(problem: Problem, final: Final) -> dict[str, FittedParameter]:
    """Return every parameter with its standard error and 95 % interval.

    Parameters
    ----------
    problem : Problem
        What was fitted.
    final : Final
        The minimum and its covariance.

    Returns
    -------
    dict of str to FittedParameter
        The model's parameters in record order, then those of the instrument.
    """
    every = (*problem.record.parameters, *problem.extra)
    freedom = problem.observed.size - int(final.free.sum())
    errors = np.full(len(every), np.nan)
    with np.errstate(invalid="ignore"):
        errors[final.free] = np.sqrt(np.diag(final.covariance))
    found = {}
    for index, (key, one) in enumerate(zip(parameter_keys(problem), every, strict=True)):
        value, error = float(final.parameters[index]), float(errors[index])
        bound = note = ""
        low, high = one.lower, one.upper
        if not final.free[index]:
            # Given at another temperature or solids fraction it lies beside its bound.
            bound = "lower" if abs(value - one.lower) <= abs(value - one.upper) else "upper"
            limit = _one_sided_limit(problem, final, index, freedom)
            low, high = (value, limit) if bound == "lower" else (limit, value)
            note = f"at its {bound} bound; the other end is a one-sided 95 % limit"
        elif np.isfinite(error):
            reach = t_quantile(freedom, 0.5 + 0.5 * LEVEL) * error
            low = max(value - reach, min(one.lower, value))
            high = min(value + reach, max(one.upper, value))
            if value - reach < one.lower or value + reach > one.upper:
                note = "cut off at a bound, so one-sided"
        else:
            note = "not identified by these readings"
        found[key] = FittedParameter(
            key, one.symbol, one.unit, value, error, low, high, bound, note
        )
    return found


def _one_sided_limit(problem: Problem, final: Final, index: int, freedom: int) -> float:
    """Return where the sum of squares has risen to the 95 % limit, inwards from a bound.

    The sum of squares is taken as quadratic in the search coordinate, the other parameters
    following.
    """
    scale = coordinates(problem)
    inner = scale.inner(final.parameters)
    lowest, highest = scale.inner_bounds
    outer = scale.outer(inner)
    with np.errstate(all="ignore"):
        residual, slopes = weighted([problem], [1])(outer[np.newaxis], np.zeros(1, dtype=np.intp))
        slopes = slopes[0] * scale.slope(inner, outer)[:, np.newaxis]
    direction = 1.0 if inner[index] <= lowest[index] else -1.0
    own = direction * slopes[index]
    others = slopes[final.free]
    if freedom <= 0 or not (np.isfinite(own).all() and np.isfinite(others).all()):
        return float(problem_bound(problem, index, direction))
    projected = own - others.T @ np.linalg.lstsq(others.T, own, rcond=None)[0]
    gradient = max(float(own @ residual[0]), 0.0)
    bend = float(projected @ projected)
    allowed_rise = final.sum_of_squares / freedom * t_quantile(freedom, LEVEL) ** 2
    if bend <= 0.0:
        return float(problem_bound(problem, index, direction))
    reach = (np.sqrt(gradient**2 + bend * allowed_rise) - gradient) / bend
    moved = inner.copy()
    moved[index] = np.clip(moved[index] + direction * reach, lowest[index], highest[index])
    return float(scale.outer(moved)[index])


def problem_bound(problem: Problem, index: int, direction: float) -> float:
    """Return the far bound of a parameter, seen in a direction of +1 or -1."""
    one = (*problem.record.parameters, *problem.extra)[index]
    return one.upper if direction > 0 else one.lower
