"""Casson fluid."""

from __future__ import annotations

from math import comb

import numpy as np

from rheo.models.common import YIELD_STRESS
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def stress(rate: FloatArray, yield_stress: FloatArray, casson_viscosity: FloatArray) -> FloatArray:
    """Shear stress [Pa]."""
    return (np.sqrt(yield_stress) + np.sqrt(casson_viscosity * rate)) ** 2


def rate(stress: FloatArray, yield_stress: FloatArray, casson_viscosity: FloatArray) -> FloatArray:
    """Shear rate [1/s]."""
    return np.maximum(np.sqrt(stress) - np.sqrt(yield_stress), 0.0) ** 2 / casson_viscosity


def log_slope(
    rate: FloatArray, yield_stress: FloatArray, casson_viscosity: FloatArray
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    root = np.sqrt(casson_viscosity * rate)
    return root / (np.sqrt(yield_stress) + root)


def jacobian(
    rate: FloatArray, yield_stress: FloatArray, casson_viscosity: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """d stress/d (yield_stress, casson_viscosity); infinite for a yield stress of 0."""
    rest = np.sqrt(yield_stress)
    root = np.sqrt(casson_viscosity * rate)
    with np.errstate(divide="ignore", invalid="ignore"):
        by_yield = 1.0 + np.where(root > 0, root / rest, 0.0)
    return by_yield, (rest + root) * np.sqrt(rate / casson_viscosity)


def moment_ratio(
    k: int, rate: FloatArray, yield_stress: FloatArray, casson_viscosity: FloatArray
) -> FloatArray:
    """Integral of stress^k rate d(stress) over stress^(k+1) rate [-]; all terms positive."""
    b = log_slope(rate, yield_stress, casson_viscosity)
    rest = np.sqrt(yield_stress)
    a = rest / (rest + np.sqrt(casson_viscosity * rate))
    order = 2 * k + 1
    return 2.0 * sum(
        comb(order, j) * a ** (order - j) * b ** (j + 1) / (j + 3) for j in range(order + 1)
    )


def _to_parameters(shape: tuple, size: tuple) -> tuple:
    # shape is yield_stress/casson_viscosity, size the Casson viscosity.
    return shape[0] * size[0], size[0]


RECORD = ModelRecord(
    key="casson",
    name="Casson",
    equation="√τ = √τ_y + √(η_c γ̇)",
    parameters=(
        YIELD_STRESS,
        Parameter("casson_viscosity", "η_c", "Pa.s", "Casson viscosity", 1e-9, 1e9),
    ),
    stress=stress,
    rate=rate,
    log_slope=log_slope,
    jacobian=jacobian,
    yield_stress=lambda yield_stress, casson_viscosity: yield_stress,
    moment_ratio=moment_ratio,
    source="N. Casson, in Rheology of Disperse Systems, ed. C. C. Mill, Pergamon (1959) 84",
    validity="Chocolate, blood, pigment and printing-ink suspensions.",
    separable=Separable(
        shape=("yield_rate",),
        grid=lambda rate: (
            np.concatenate(
                [[0.0], np.geomspace(rate[rate > 0].min() * 1e-6, rate.max() * 1e6, 60)]
            ),
        ),
        basis=lambda rate, yield_rate: ((np.sqrt(yield_rate) + np.sqrt(rate)) ** 2,),
        to_parameters=_to_parameters,
        logarithmic=(False,),
    ),
)
