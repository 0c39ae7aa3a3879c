"""Cross fluid."""

from __future__ import annotations

import numpy as np

from rheo.models.carreau_yasuda import plateau_parameters
from rheo.models.common import (
    INFINITE_SHEAR_VISCOSITY,
    TIME_CONSTANT,
    ZERO_SHEAR_VISCOSITY,
    reciprocal_rate_grid,
)
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def basis(
    rate: FloatArray, time_constant: FloatArray, rate_index: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Columns whose coefficients are η_0 and η_∞."""
    reduced = (time_constant * rate) ** rate_index
    share = rate / (1.0 + reduced)
    return share, share * reduced


def stress(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    rate_index: FloatArray,
) -> FloatArray:
    """Shear stress [Pa]."""
    reduced = (time_constant * rate) ** rate_index
    share = 1.0 / (1.0 + reduced)
    return rate * (infinite_shear_viscosity * reduced * share + zero_shear_viscosity * share)


def log_slope(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    rate_index: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-], of terms of 0 or more where the rate index is at most 1."""
    reduced = (time_constant * rate) ** rate_index
    rise = infinite_shear_viscosity * reduced * (reduced + 1.0 + rate_index)
    rise = rise + zero_shear_viscosity * (1.0 + (1.0 - rate_index) * reduced)
    whole = (1.0 + reduced) * (infinite_shear_viscosity * reduced + zero_shear_viscosity)
    return rise / whole


def jacobian(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    rate_index: FloatArray,
) -> tuple[FloatArray, ...]:
    """d stress/d (η_0, η_∞, λ, m)."""
    product = time_constant * rate
    reduced = product**rate_index
    share = 1.0 / (1.0 + reduced)
    fall = rate * (zero_shear_viscosity - infinite_shear_viscosity) * share * (reduced * share)
    return (
        rate * share,
        rate * reduced * share,
        -fall * rate_index / time_constant,
        -fall * np.log(np.where(product > 0, product, 1.0)),
    )


RECORD = ModelRecord(
    key="cross",
    name="Cross",
    equation="η = η_∞ + (η_0 - η_∞)/[1 + (λγ̇)^m]",
    parameters=(
        ZERO_SHEAR_VISCOSITY,
        INFINITE_SHEAR_VISCOSITY,
        TIME_CONSTANT,
        # Above 1 the stress of a Cross fluid can fall as the rate rises: no flow curve.
        Parameter("rate_index", "m", "-", "rate index", 0.0, 1.0),
    ),
    stress=stress,
    log_slope=log_slope,
    jacobian=jacobian,
    source="M. M. Cross, J. Colloid Sci. 20 (1965) 417",
    validity="Polymer solutions, gums and dispersions with a plateau at low rates.",
    separable=Separable(
        shape=("time_constant", "rate_index"),
        grid=lambda rate: (reciprocal_rate_grid(rate), np.linspace(0.02, 1.0, 35)),
        basis=basis,
        to_parameters=plateau_parameters(),
        logarithmic=(True, False),
    ),
)
