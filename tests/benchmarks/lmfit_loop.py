"""The ordinary alternative of several benchmarks: one lmfit fit after another.

Each model is fitted with the numerical derivatives that lmfit takes by itself, from one start.
"""

from __future__ import annotations

import warnings
from collections.abc import Callable, Mapping
from dataclasses import dataclass

import lmfit
import numpy as np

import rheo
from rheo.models import ModelRecord

# An upper bound beyond this is left out: lmfit's map of two far bounds onto a sine loses digits.
FAR = 20.0
SAME_CRITERION = 0.01


@dataclass(frozen=True)
class Ended:
    """Sum of squares at which a fit ended, infinite where it failed, and whether it succeeded."""

    sum_of_squares: float
    success: bool


def start_of_curve(rate: np.ndarray, stress: np.ndarray) -> dict[str, float]:
    """Return what one reads off the ends of a curve."""
    viscosity = stress / rate
    return {
        "viscosity": viscosity[-1],
        "consistency": stress[0] / rate[0] ** 0.5,
        "flow_index": 0.5,
        "yield_stress": stress[0] / 2.0,
        "plastic_viscosity": viscosity[-1],
        "casson_viscosity": viscosity[-1],
        "zero_shear_viscosity": viscosity[0],
        "infinite_shear_viscosity": viscosity[-1],
        "time_constant": (rate[0] * rate[-1]) ** -0.5,
        "yasuda_exponent": 2.0,
        "rate_index": 0.5,
        "rate_offset": rate[0],
        "half_stress": (stress[0] * stress[-1]) ** 0.5,
        "stress_index": 2.0,
    }


def default_start(rate: np.ndarray, stress: np.ndarray) -> dict[str, float]:
    """Return 1 for every parameter, as one writes who knows nothing of the product."""
    return dict.fromkeys(start_of_curve(rate, stress), 1.0)


def fit_all(
    start: Mapping[str, float],
    observed: np.ndarray,
    predict: Callable[[ModelRecord, list[float]], np.ndarray],
    most: int | None = None,
) -> dict[str, Ended]:
    """Fit every model to readings by relative residuals.

    Parameters
    ----------
    start : mapping
        Of each parameter.
    observed : array, shape (n,)
        Readings.
    predict : callable
        ``predict(record, values)`` of a model's parameters.
    most : int, optional
        Evaluations after which a fit is given up; lmfit's own number when absent.
    """
    found = {}
    for record in rheo.model_records().values():
        first = lmfit.Parameters()
        for one in record.parameters:
            upper = one.upper if one.upper <= FAR else np.inf
            value = min(max(start[one.key], one.lower), upper)
            first.add(one.key, value=value, min=one.lower, max=upper)

        def residual(values: lmfit.Parameters, record: ModelRecord = record) -> np.ndarray:
            own = [values[key].value for key in record.parameter_keys]
            return predict(record, own) / observed - 1

        with warnings.catch_warnings(), np.errstate(all="ignore"):
            warnings.simplefilter("ignore")
            try:
                ended = lmfit.minimize(residual, first, max_nfev=most)
                found[record.key] = Ended(float(ended.chisqr), bool(ended.success))
            except ValueError:
                found[record.key] = Ended(np.inf, False)
    return found


def fit_curve(
    rate: np.ndarray,
    stress: np.ndarray,
    start: Callable[[np.ndarray, np.ndarray], dict[str, float]] = start_of_curve,
) -> dict[str, Ended]:
    """Fit every model to a flow curve."""
    return fit_all(start(rate, stress), stress, lambda record, own: record.stress(rate, *own))


def worse_and_better(
    ended: Mapping[str, Ended], criteria: Mapping[str, float | None], points: int
) -> tuple[int, int]:
    """Return how many of lmfit's fits are worse than ours, and how many better, by AICc."""
    worse = better = 0
    for key, one in ended.items():
        count = len(rheo.model_record(key).parameters) + 1
        own = points * np.log(one.sum_of_squares / points) + 2 * count
        own += 2 * count * (count + 1) / (points - count - 1)
        ours = criteria[key]
        gap = own - (np.nan if ours is None else ours)
        worse += bool(gap > SAME_CRITERION)
        better += bool(gap < -SAME_CRITERION)
    return worse, better
