"""Shear rate from shear stress where no closed form exists."""

from __future__ import annotations

import numpy as np

from rheo.models.monotone import LARGEST_RATE, solve_log
from rheo.models.record import FloatArray, Model


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
    flows = stress > 0
    wanted = np.where(flows, stress, 1.0)
    if start is None:
        # From 1 1/s along the tangent there.
        one = np.ones_like(wanted)
        ratio = np.log(wanted / model.record.stress(one, *model))
        start = np.exp(np.clip(ratio / model.record.log_slope(one, *model), -40.0, 40.0))
    rate = solve_log(_stress_and_slope, model, wanted, start)
    rate = np.where(rate < LARGEST_RATE, rate, np.inf)
    return np.where(flows, rate, np.where(np.isnan(stress), np.nan, 0.0))


def _stress_and_slope(model: Model, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    return model.record.stress(rate, *model), model.record.log_slope(rate, *model)
