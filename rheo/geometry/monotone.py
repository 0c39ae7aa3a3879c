"""Vectorised root finding for relations that rise with the shear rate."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy.typing import NDArray

from rheo.models import Model

FloatArray = NDArray[np.float64]
Pair = tuple[FloatArray, FloatArray]

_LARGEST_STEP = 8.0
_STEPS = 40


def solve_log(
    value_and_slope: Callable[..., Pair],
    model: Model,
    target: FloatArray,
    start: FloatArray | None = None,
    extra: tuple[FloatArray, ...] = (),
) -> FloatArray:
    """Solve ``value = target`` for the shear rate, element by element.

    Newton's method on logarithms, in which all our relations are nearly straight; elements that
    have not settled are finished by a bracketing method.

    Parameters
    ----------
    value_and_slope : callable
        ``value_and_slope(model, rate, *extra)``: a positive quantity that rises with the shear
        rate, and d ln(value)/d ln(rate).
    model : Model
        Flow curve; parameters broadcast against `target`.
    target : array
        Wanted values, above 0.
    start : array, optional
        First shear rate [1/s]; `target` itself when absent.
    extra : tuple of array
        Further arguments that broadcast along, such as dimensions.

    Returns
    -------
    array
        Shear rate [1/s], in the shape to which all arguments broadcast.
    """
    first = target if start is None else start
    shape = np.broadcast_shapes(
        np.shape(target), np.shape(first), model.shape, *(np.shape(value) for value in extra)
    )

    def flatten(value: FloatArray) -> FloatArray:
        return np.broadcast_to(value, shape).reshape(-1)

    wanted = np.log(flatten(target))
    at = np.log(flatten(first))
    flat = model.map(flatten)
    flat_extra = tuple(flatten(value) for value in extra)
    active = np.arange(at.size)
    for _ in range(_STEPS):
        if active.size == 0:
            return np.exp(at).reshape(shape)
        local, more = flat, flat_extra
        if active.size < at.size:
            local = flat.at(active)
            more = tuple(value[active] for value in flat_extra)
        value, slope = value_and_slope(local, np.exp(at[active]), *more)
        step = np.clip((np.log(value) - wanted[active]) / slope, -_LARGEST_STEP, _LARGEST_STEP)
        at[active] -= step
        # Newton's error is squared at each step, so a step of 1e-8 leaves 1e-16.
        active = active[~(np.abs(step) <= 1e-8)]
    at[active] = _by_bracket(
        value_and_slope,
        flat.at(active),
        wanted[active],
        at[active],
        tuple(value[active] for value in flat_extra),
    )
    return np.exp(at).reshape(shape)


def _by_bracket(
    value_and_slope: Callable[..., Pair],
    model: Model,
    wanted: FloatArray,
    start: FloatArray,
    extra: tuple[FloatArray, ...],
) -> FloatArray:
    from scipy.optimize import elementwise

    def gap(log_rate: FloatArray, index: FloatArray) -> FloatArray:
        chosen = index.astype(int)
        value, _ = value_and_slope(
            model.at(chosen),
            np.exp(log_rate),
            *(value[chosen] for value in extra),
        )
        return np.log(value) - wanted[chosen]

    index = np.arange(start.size, dtype=float)
    bracket = elementwise.bracket_root(gap, start - 1.0, start + 1.0, args=(index,))
    return elementwise.find_root(gap, bracket.bracket, args=(index,)).x
