"""Shear rate from shear stress where no closed form exists."""

from __future__ import annotations

import numpy as np

from rheo.models.record import FloatArray, Model


def rate_from_stress(model: Model, stress: FloatArray) -> FloatArray:
    """Return the shear rate [1/s] at a shear stress [Pa]; 0 at and below the yield stress.

    Closed form where the record has one; else Newton's method in logarithms with a bracket,
    to 1e-14 in the logarithm of the rate. The flow curve must rise with the rate.

    Parameters
    ----------
    model : Model
        Parameters broadcast against `stress`.
    stress : array
        Shear stress [Pa], 0 or more.

    Returns
    -------
    array
        Shear rate [1/s].
    """
    if model.record.rate is not None:
        return model.record.rate(stress, *model)
    stress, *values = np.broadcast_arrays(stress, *model)
    rate = np.zeros(stress.shape)
    flows = stress > 0
    if np.any(flows):
        chosen = [value[flows] for value in values]
        rate[flows] = _solve(model.record.stress, model.record.log_slope, stress[flows], chosen)
    return rate


def _solve(stress_of, log_slope_of, stress, values):  # type: ignore[no-untyped-def]
    """Newton's method on ln(stress) against ln(rate), kept inside a shrinking bracket."""
    target = np.log(stress)
    low = np.full(stress.shape, -230.0)
    high = np.full(stress.shape, 230.0)
    at = np.clip(target - np.log(stress_of(np.ones_like(stress), *values)), -60.0, 60.0)
    for _ in range(200):
        rate = np.exp(at)
        gap = np.log(stress_of(rate, *values)) - target
        high = np.where(gap > 0, at, high)
        low = np.where(gap <= 0, at, low)
        step = gap / log_slope_of(rate, *values)
        new = at - step
        outside = ~((new > low) & (new < high))
        new = np.where(outside, 0.5 * (low + high), new)
        moved = np.abs(new - at)
        at = new
        if np.all(moved <= 1e-14 * np.maximum(1.0, np.abs(at))):
            break
    return np.exp(at)
