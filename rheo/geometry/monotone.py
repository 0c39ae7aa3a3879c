"""Vectorised root finding for relations that rise with the shear rate."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray
from scipy.optimize import elementwise

from rheo.models import Model

FloatArray = NDArray[np.float64]

_LARGEST_STEP = 8.0
_CONVERGED = 2e-15
_STEPS = 40


def solve_log(
    value_at: Callable[[Model, FloatArray], FloatArray],
    log_slope_at: Callable[[Model, FloatArray, FloatArray], FloatArray],
    model: Model,
    target: FloatArray,
    start: FloatArray | None = None,
) -> FloatArray:
    """Solve ``value_at(model, rate) = target`` for the shear rate, element by element.

    Newton's method on logarithms, in which all our relations are nearly straight; elements that
    have not settled are finished by a bracketing method.

    Parameters
    ----------
    value_at : callable
        ``value_at(model, rate)``: a positive quantity that rises with the shear rate.
    log_slope_at : callable
        ``log_slope_at(model, rate, value)``: d ln(value)/d ln(rate).
    model : Model
        Flow curve; parameters broadcast against `target`.
    target : array
        Wanted values, above 0.
    start : array, optional
        First shear rate [1/s]; `target` itself when absent.

    Returns
    -------
    array
        Shear rate [1/s], in the shape to which all arguments broadcast.
    """
    shape = np.broadcast_shapes(np.shape(target), model.shape)
    wanted = np.log(np.broadcast_to(target, shape).reshape(-1))
    flat = model.map(lambda value: np.broadcast_to(value, shape).reshape(-1))
    at = wanted.copy() if start is None else np.log(np.broadcast_to(start, shape).reshape(-1))
    active = np.arange(at.size)
    for _ in range(_STEPS):
        if active.size == 0:
            return np.exp(at).reshape(shape)
        local = flat if active.size == at.size else flat.map(lambda value, i=active: value[i])
        rate = np.exp(at[active])
        value = value_at(local, rate)
        step = (np.log(value) - wanted[active]) / log_slope_at(local, rate, value)
        step = np.clip(step, -_LARGEST_STEP, _LARGEST_STEP)
        new = at[active] - step
        at[active] = new
        # Newton's error is squared at each step, so a step of 1e-8 leaves 1e-16.
        active = active[~(np.abs(step) <= 1e-8 + _CONVERGED * np.abs(new))]
    local = flat.map(lambda value: value[active])
    at[active] = _by_bracket(value_at, local, wanted[active])
    return np.exp(at).reshape(shape)


def _by_bracket(
    value_at: Callable[[Model, FloatArray], FloatArray], model: Model, wanted: FloatArray
) -> FloatArray:
    def gap(log_rate: FloatArray, want: FloatArray, *parameters: FloatArray) -> FloatArray:
        local = model.map(lambda value: value)
        object.__setattr__(
            local, "parameters", dict(zip(model.parameters, parameters, strict=True))
        )
        return np.log(value_at(local, np.exp(log_rate))) - want

    args = (wanted, *model)
    bracket = elementwise.bracket_root(gap, wanted - 1.0, wanted + 1.0, args=args)
    found = elementwise.find_root(gap, bracket.bracket, args=args)
    return found.x
