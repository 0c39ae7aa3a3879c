"""Parameters and search grids that several models share."""

from __future__ import annotations

import numpy as np

from rheo.models.record import FloatArray, Parameter

YIELD_STRESS = Parameter("yield_stress", "τ_y", "Pa", "yield stress", 0.0, 1e6)
CONSISTENCY = Parameter("consistency", "K", "Pa.s^n", "consistency", 1e-12, 1e9)
FLOW_INDEX = Parameter("flow_index", "n", "-", "flow index", 0.01, 2.0)
ZERO_SHEAR_VISCOSITY = Parameter(
    "zero_shear_viscosity", "η_0", "Pa.s", "zero-shear viscosity", 1e-9, 1e9
)
INFINITE_SHEAR_VISCOSITY = Parameter(
    "infinite_shear_viscosity", "η_∞", "Pa.s", "infinite-shear viscosity", 0.0, 1e6
)
TIME_CONSTANT = Parameter("time_constant", "λ", "s", "time constant", 1e-9, 1e9)
PLATEAU_FLOW_INDEX = Parameter("flow_index", "n", "-", "flow index", 0.0, 2.0)


def flow_index_grid(count: int = 41, upper: float = FLOW_INDEX.upper) -> FloatArray:
    """Return flow indices that cover the allowed range, denser where they are small."""
    return np.geomspace(FLOW_INDEX.lower, upper, count)


def reciprocal_rate_grid(rate: FloatArray, count: int = 33, beyond: float = 1e3) -> FloatArray:
    """Return time constants [s] whose onset lies in the rates given, and `beyond` on each side."""
    flowing = rate[rate > 0]
    return np.geomspace(1.0 / (flowing.max() * beyond), beyond / flowing.min(), count)
