"""Which model: AICc, Akaike weights and the rule that the simpler one wins a tie.

K. P. Burnham & D. R. Anderson, Model Selection and Multimodel Inference, 2nd ed., Springer (2002),
sections 2.4 and 2.9.
"""

from __future__ import annotations

import math
from collections.abc import Sequence

import numpy as np
from numpy.typing import ArrayLike, NDArray

FloatArray = NDArray[np.float64]

# Models whose AICc lies this near the lowest are held to be as good (Burnham & Anderson, 2.6).
TIE = 2.0
# So far above the lowest, a model has considerably less support (Burnham & Anderson, 2.6).
CLEAR = 4.0
# Relative residuals below this are rounding of the input and no reason to prefer a model.
ROUNDING = 1e-9


def aicc(sum_of_squares: ArrayLike, readings: int, parameters: ArrayLike) -> FloatArray:
    """Return Akaike's criterion for small samples [-].

    n ln(S/n) + 2k + 2k(k+1)/(n-k-1) with k one more than the number of parameters, as the
    variance is estimated too; infinite where n - k - 1 is not above 0.

    Parameters
    ----------
    sum_of_squares : array_like
        Weighted sum of squares S [-], above 0.
    readings : int
        Number of readings n.
    parameters : array_like of int
        Number of parameters of the model, with or without those at a bound.
    """
    k = np.asarray(parameters) + 1
    spare = readings - k - 1
    with np.errstate(divide="ignore"):
        fit = readings * np.log(np.asarray(sum_of_squares, float) / readings)
    penalty = 2.0 * k + 2.0 * k * (k + 1) / np.where(spare > 0, spare, 1)
    return np.where(spare > 0, fit + penalty, np.inf)


def small_sample_term(readings: int, parameters: int) -> float:
    """Return what AICc adds to AIC [-]: 2k(k+1)/(n-k-1), infinite where n - k - 1 is not above 0.

    Parameters
    ----------
    readings : int
        Number of readings n.
    parameters : int
        Number of parameters of the model; k is one more.
    """
    k = parameters + 1
    spare = readings - k - 1
    return 2.0 * k * (k + 1) / spare if spare > 0 else math.inf


def fewest_readings(parameters: int) -> int:
    """Return the readings from which AICc is known on, for a model of so many parameters."""
    return parameters + 3


def akaike_weights(criteria: ArrayLike) -> FloatArray:
    """Return exp(-Δ/2), scaled to a sum of 1."""
    values = np.asarray(criteria, dtype=float)
    lowest = values.min()
    apart = np.zeros_like(values) if not np.isfinite(lowest) else values - lowest
    weights = np.exp(-0.5 * apart)
    return weights / weights.sum()


def winner(criteria: Sequence[float], parameters: Sequence[int]) -> int:
    """Return the index of the model to use: the fewest parameters within 2 units of the lowest."""
    lowest = min(criteria)
    near = [
        index
        for index, value in enumerate(criteria)
        if value <= lowest + TIE or not math.isfinite(lowest)
    ]
    return min(near, key=lambda index: (parameters[index], criteria[index]))


def order(criteria: Sequence[float], parameters: Sequence[int]) -> list[int]:
    """Return indices with the model to use first and the others by rising AICc."""
    first = winner(criteria, parameters)
    rest = sorted(range(len(criteria)), key=lambda index: (criteria[index], parameters[index]))
    return [first, *(index for index in rest if index != first)]
