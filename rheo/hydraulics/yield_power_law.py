"""The flow curves that are a Herschel-Bulkley curve in disguise, and the Bingham numbers."""

from __future__ import annotations

import numpy as np

from rheo.hydraulics.conditions import FloatArray, Pipe
from rheo.models import Model

# Parameter keys of yield stress, consistency and flow index; None for a yield stress of 0 or an
# index of 1.
_ROLES: dict[str, tuple[str | None, str, str | None]] = {
    "newtonian": (None, "viscosity", None),
    "power-law": (None, "consistency", "flow_index"),
    "bingham": ("yield_stress", "plastic_viscosity", None),
    "herschel-bulkley": ("yield_stress", "consistency", "flow_index"),
}
YIELD_POWER_LAWS = tuple(_ROLES)


def as_yield_power_law(model: Model) -> tuple[FloatArray, FloatArray, FloatArray]:
    """Return yield stress [Pa], consistency [Pa.s^n] and flow index [-] of such a flow curve."""
    yield_key, size_key, index_key = _ROLES[model.key]
    size = model.parameters[size_key]
    yield_stress = np.zeros_like(size) if yield_key is None else model.parameters[yield_key]
    index = np.ones_like(size) if index_key is None else model.parameters[index_key]
    return yield_stress, size, index


def hedstrom(pipe: Pipe) -> FloatArray:
    """Return He = ρD²τ_y/η_p² [-] of a Bingham fluid."""
    yield_stress, viscosity, _ = as_yield_power_law(pipe.model)
    return pipe.density * pipe.diameter**2 * yield_stress / viscosity**2
