"""What a tube and a slot have in common: pressure flow along a channel of constant section."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.geometry.curve_integrals import moment_ratio
from rheo.models import Model
from rheo.models.monotone import solve_log

FloatArray = NDArray[np.float64]
_FLATTEST = 0.05


def solve_channel(model: Model, nominal_rate: FloatArray, k: int) -> FloatArray:
    """Return the wall shear rate at which the channel has a nominal (Newtonian) rate.

    The nominal rate is (k + 2)γ̇_w times the moment ratio of order k, and its logarithmic slope
    s((k + 2)γ̇_w/nominal - (k + 1)).

    Parameters
    ----------
    model : Model
        Flow curve; parameters broadcast.
    nominal_rate : array
        8V/D of a tube, 3V/h of a slot [1/s], above 0.
    k : int
        2 for a tube, 1 for a slot.

    Returns
    -------
    array
        Wall shear rate [1/s], to 1e-13 relative.
    """

    def relation(rough: bool, local: Model, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
        value = (k + 2) * rate * moment_ratio(local, rate, k, rough)
        slope = local.record.log_slope(rate, *local)
        # Where the stress has levelled off to the last digit, nothing is left of the value.
        share = rate / np.where(value > 0, value, np.inf)
        return value, slope * ((k + 2) * share - (k + 1))

    if model.record.moment_ratio is not None:
        return solve_log(lambda local, rate: relation(True, local, rate), model, nominal_rate)
    # At first as if the slope of ln(stress) were the same at all rates below.
    slope = np.maximum(model.record.log_slope(np.asarray(nominal_rate), *model), _FLATTEST)
    begin = nominal_rate * ((k + 1) * slope + 1.0) / ((k + 2) * slope)
    start = solve_log(lambda local, rate: relation(True, local, rate), model, nominal_rate, begin)
    return solve_log(lambda local, rate: relation(False, local, rate), model, nominal_rate, start)
