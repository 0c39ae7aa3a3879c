"""A general optimiser from random starts, against which a global search is held."""

from __future__ import annotations

import numpy as np
from scipy.optimize import least_squares

from rheo.models import ModelRecord

# Ranges as multiples of what the readings show: lowest and highest rate, stress and viscosity.
_SPREAD = {
    "yield_stress": ("stress", 1e-3, 1.0),
    "half_stress": ("stress", 0.1, 10.0),
    "consistency": ("stress", 0.1, 3.0),
    "viscosity": ("viscosity", 1.0, 1.0),
    "plastic_viscosity": ("viscosity", 1.0, 1.0),
    "casson_viscosity": ("viscosity", 0.01, 1.0),
    "zero_shear_viscosity": ("viscosity", 1.0, 1e4),
    "infinite_shear_viscosity": ("viscosity", 1e-3, 1.0),
    "time_constant": ("time", 1e-2, 1e2),
    "rate_offset": ("rate", 1e-2, 1.0),
}
_EVEN = {
    "flow_index": (0.01, 1.5),
    "rate_index": (0.01, 1.0),
    "yasuda_exponent": (0.1, 10.0),
    "stress_index": (1.0, 10.0),
}


def random_starts(
    record: ModelRecord, rate: np.ndarray, stress: np.ndarray, count: int, seed: int
) -> np.ndarray:
    """Return starting parameters (count, p) spread over all that readings could mean."""
    random = np.random.default_rng(seed)
    sizes = {"rate": rate, "stress": stress, "viscosity": stress / rate, "time": 1.0 / rate}
    columns = []
    for one in record.parameters:
        share = random.uniform(size=count)
        if one.key in _EVEN:
            low, high = _EVEN[one.key]
            columns.append(low + share * (high - low))
        else:
            of, below, above = _SPREAD[one.key]
            low, high = sizes[of].min() * below, sizes[of].max() * above
            columns.append(low * (high / low) ** share)
    return np.stack(columns, axis=-1)


def lowest_of_random_starts(
    record: ModelRecord, rate: np.ndarray, stress: np.ndarray, sigma: np.ndarray, count: int
) -> float:
    """Return the lowest weighted sum of squares that scipy finds within the model's bounds."""
    lower = np.array([one.lower for one in record.parameters])
    upper = np.array([one.upper for one in record.parameters])

    def residual(parameters: np.ndarray) -> np.ndarray:
        return (record.stress(rate, *np.asarray(parameters)[:, None]) - stress) / sigma

    def slopes(parameters: np.ndarray) -> np.ndarray:
        columns = record.jacobian(rate, *np.asarray(parameters)[:, None])
        return np.stack([np.broadcast_to(one, rate.shape) / sigma for one in columns], axis=-1)

    lowest = np.inf
    for start in random_starts(record, rate, stress, count, seed=7):
        found = least_squares(
            residual,
            np.clip(start, lower, upper),
            jac=slopes,
            bounds=(lower, upper),
            x_scale="jac",
            ftol=1e-12,
            xtol=1e-12,
            gtol=1e-12,
            max_nfev=100,
        )
        lowest = min(lowest, 2.0 * found.cost)
    return lowest
