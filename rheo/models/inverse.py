"""Shear rate from shear stress where no closed form exists."""

from __future__ import annotations

import numpy as np

from rheo.models.record import FloatArray, Model

# The logarithm of the rate is sought between these. A stress that needs more than 1e20 1/s lies
# on or above a plateau of the flow curve.
_LOWEST, _HIGHEST = -600.0, 46.0
_STEPS = 200
_LARGEST_STEP = 10.0


def rate_from_stress(
    model: Model, stress: FloatArray, start: FloatArray | None = None
) -> FloatArray:
    """Return the shear rate [1/s] at a shear stress [Pa]; 0 at and below the yield stress.

    Closed form where the record has one; else Newton's method in logarithms with a bracket,
    to the last digits of the flow curve. The flow curve must rise with the rate.

    Parameters
    ----------
    model : Model
        Parameters broadcast against `stress`.
    stress : array
        Shear stress [Pa], 0 or more; NaN gives NaN.
    start : array, optional
        A shear rate [1/s] near the answer, above 0; used only where there is no closed form.

    Returns
    -------
    array
        Shear rate [1/s]; infinite where no rate up to 1e20 1/s reaches the stress.
    """
    if model.record.rate is not None:
        return model.record.rate(stress, *model)
    shape = np.broadcast_shapes(np.shape(stress), model.shape)
    stress = np.broadcast_to(stress, shape)
    rate = np.where(np.isnan(stress), np.nan, 0.0)
    flows = stress > 0
    if np.any(flows):
        local = model.map(lambda value: np.broadcast_to(value, shape)[flows])
        first = None if start is None else np.broadcast_to(start, shape)[flows]
        rate[flows] = _solve(local, stress[flows], first)
    return rate


def _solve(model: Model, stress: FloatArray, start: FloatArray | None) -> FloatArray:
    """Newton's method on ln(stress) against ln(rate), kept inside a shrinking bracket."""
    target = np.log(stress)
    low = np.full(stress.shape, -np.inf)
    high = np.full(stress.shape, np.inf)
    if start is None:
        one = np.ones_like(stress)
        offset = target - np.log(model.record.stress(one, *model))
        at = np.clip(offset / model.record.log_slope(one, *model), -40.0, 40.0)
    else:
        at = np.log(start)
    at = np.clip(at, _LOWEST, _HIGHEST)
    for _ in range(_STEPS):
        rate = np.exp(at)
        gap = np.log(model.record.stress(rate, *model)) - target
        high = np.where(gap > 0, at, high)
        low = np.where(gap <= 0, at, low)
        step = gap / model.record.log_slope(rate, *model)
        new = at - np.clip(step, -_LARGEST_STEP, _LARGEST_STEP)
        new = np.clip(new, _LOWEST, _HIGHEST)
        outside = (new < low) | (new > high)
        new[outside] = 0.5 * (low[outside] + high[outside])
        moved = np.abs(new - at)
        at = new
        # Newton's error is squared at each step, so a step of 1e-8 leaves 1e-16.
        if np.all(moved <= 1e-8):
            break
    return np.where(at < _HIGHEST, np.exp(at), np.inf)
