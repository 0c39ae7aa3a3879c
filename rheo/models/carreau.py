"""Carreau fluid: the Carreau-Yasuda curve with an exponent of 2."""

from __future__ import annotations

import numpy as np

from rheo.models import carreau_yasuda
from rheo.models.common import (
    INFINITE_SHEAR_VISCOSITY,
    PLATEAU_FLOW_INDEX,
    TIME_CONSTANT,
    ZERO_SHEAR_VISCOSITY,
    reciprocal_rate_grid,
)
from rheo.models.record import FloatArray, ModelRecord, Separable


def log_factor(rate: FloatArray, time_constant: FloatArray, flow_index: FloatArray) -> FloatArray:
    """ln[(η - η_∞)/(η_0 - η_∞)] [-]."""
    return 0.5 * (flow_index - 1.0) * np.log1p((time_constant * rate) ** 2)


def stress(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """Shear stress [Pa]."""
    factor = log_factor(rate, time_constant, flow_index)
    return rate * carreau_yasuda.between(zero_shear_viscosity, infinite_shear_viscosity, factor)


def log_slope(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    reduced = (time_constant * rate) ** 2
    factor = 0.5 * (flow_index - 1.0) * np.log1p(reduced)
    return carreau_yasuda.slope_of_plateaus(
        zero_shear_viscosity, infinite_shear_viscosity, factor, flow_index, reduced
    )


def jacobian(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
) -> tuple[FloatArray, ...]:
    """d stress/d (η_0, η_∞, λ, n)."""
    return carreau_yasuda.jacobian(
        rate,
        zero_shear_viscosity,
        infinite_shear_viscosity,
        time_constant,
        flow_index,
        np.asarray(2.0),
    )[:4]


RECORD = ModelRecord(
    key="carreau",
    name="Carreau",
    equation="η = η_∞ + (η_0 - η_∞)[1 + (λγ̇)²]^((n-1)/2)",
    parameters=(
        ZERO_SHEAR_VISCOSITY,
        INFINITE_SHEAR_VISCOSITY,
        TIME_CONSTANT,
        PLATEAU_FLOW_INDEX,
    ),
    stress=stress,
    log_slope=log_slope,
    jacobian=jacobian,
    check=carreau_yasuda.check_rising,
    allowed=carreau_yasuda.stays_positive,
    source="P. J. Carreau, Trans. Soc. Rheol. 16 (1972) 99",
    validity="Polymer solutions and gums with a plateau at low rates.",
    separable=Separable(
        shape=("time_constant", "flow_index"),
        grid=lambda rate: (reciprocal_rate_grid(rate), np.linspace(0.0, 1.5, 31)),
        basis=lambda rate, *shape: carreau_yasuda.plateau_basis(log_factor(rate, *shape), rate),
        to_parameters=carreau_yasuda.plateau_parameters(),
        logarithmic=(True, False),
    ),
)
