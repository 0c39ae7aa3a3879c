"""Vectorised root finding for relations that rise with the shear rate."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

from rheo.models.record import FloatArray, Model

Pair = tuple[FloatArray, FloatArray]

LARGEST_RATE = 1e20
"""Where the search ends [1/s]; no fluid is sheared so fast."""

_LOWEST, _HIGHEST = -600.0, float(np.log(LARGEST_RATE))
_FLATTEST = 1e-12
_LARGEST_STEP = 8.0
_PLAIN_STEPS, _STEPS = 12, 160


def solve_log(
    value_and_slope: Callable[..., Pair],
    model: Model,
    target: FloatArray,
    start: FloatArray | None = None,
    extra: tuple[FloatArray, ...] = (),
) -> FloatArray:
    """Solve ``value = target`` for the shear rate, element by element.

    Newton's method on logarithms, in which all our relations are nearly straight, kept inside a
    shrinking bracket; elements that take long are bisected in between.

    Parameters
    ----------
    value_and_slope : callable
        ``value_and_slope(model, rate, *extra)``: a positive quantity that rises with the shear
        rate, and d ln(value)/d ln(rate).
    model : Model
        Flow curve; parameters broadcast against `target`.
    target : array
        Wanted values, above 0; NaN gives NaN.
    start : array, optional
        First shear rate [1/s]; `target` itself when absent.
    extra : tuple of array
        Further arguments that broadcast along, such as dimensions.

    Returns
    -------
    array
        Shear rate [1/s], in the shape to which all arguments broadcast; `LARGEST_RATE` where the
        value is not reached below it, as with a flow curve whose stress levels off.
    """
    first = target if start is None else start
    shape = np.broadcast_shapes(
        np.shape(target), np.shape(first), model.shape, *(np.shape(value) for value in extra)
    )

    def flatten(value: FloatArray) -> FloatArray:
        return np.broadcast_to(value, shape).reshape(-1)

    wanted = np.log(flatten(target))
    at = np.clip(np.log(flatten(first)), _LOWEST, _HIGHEST)
    low, high = np.full(at.shape, -np.inf), np.full(at.shape, np.inf)
    flat = model.map(flatten)
    flat_extra = tuple(flatten(value) for value in extra)
    at[np.isnan(wanted)] = np.nan
    active = np.flatnonzero(~np.isnan(at))
    for step_number in range(_STEPS):
        if active.size == 0:
            break
        local, more = flat, flat_extra
        if active.size < at.size:
            local = flat.at(active)
            more = tuple(value[active] for value in flat_extra)
        here = at[active]
        value, slope = value_and_slope(local, np.exp(here), *more)
        # A value too small for a double is below every target.
        gap = np.log(np.maximum(value, np.finfo(float).tiny)) - wanted[active]
        low[active] = np.where(gap <= 0, here, low[active])
        high[active] = np.where(gap > 0, here, high[active])
        step = np.clip(gap / np.maximum(slope, _FLATTEST), -_LARGEST_STEP, _LARGEST_STEP)
        new = np.clip(here - step, _LOWEST, _HIGHEST)
        below, above = low[active], high[active]
        outside = (new < below) | (new > above)
        # Newton's error is squared at each step, so a step of 1e-8 leaves 1e-16.
        settled = ~outside & (np.abs(new - here) <= 1e-8)
        settled |= above - below <= 4e-16 * np.maximum(np.abs(here), 1.0)
        if step_number >= _PLAIN_STEPS and step_number % 2:
            outside |= ~settled & np.isfinite(above - below)
        new[outside] = 0.5 * (below[outside] + above[outside])
        at[active] = new
        active = active[~settled]
    return np.exp(at).reshape(shape)
