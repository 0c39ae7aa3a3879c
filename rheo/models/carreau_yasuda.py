"""Carreau-Yasuda fluid: two plateaus and a power law between them, with a free bend."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.models.common import (
    INFINITE_SHEAR_VISCOSITY,
    PLATEAU_FLOW_INDEX,
    TIME_CONSTANT,
    ZERO_SHEAR_VISCOSITY,
    reciprocal_rate_grid,
)
from rheo.models.record import FloatArray, ModelRecord, Parameter, Separable


def log_factor(
    rate: FloatArray, time_constant: FloatArray, flow_index: FloatArray, exponent: FloatArray
) -> FloatArray:
    """ln[(η - η_∞)/(η_0 - η_∞)] [-]."""
    return (flow_index - 1.0) / exponent * np.log1p((time_constant * rate) ** exponent)


def between(
    zero_shear_viscosity: FloatArray, infinite_shear_viscosity: FloatArray, log_factor: FloatArray
) -> FloatArray:
    """η_∞ + (η_0 - η_∞) exp(log_factor) [Pa.s], as a sum of terms of 0 or more.

    So it does not cancel, whichever of the plateaus is the higher one and however far.
    """
    step = zero_shear_viscosity - infinite_shear_viscosity
    factor = np.exp(log_factor)
    found = infinite_shear_viscosity + step * factor
    if np.any(step < 0):
        rising = zero_shear_viscosity * factor - infinite_shear_viscosity * np.expm1(log_factor)
        found = np.where(step < 0, rising, found)
    return found


def slope_of_plateaus(
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    log_factor: FloatArray,
    flow_index: FloatArray,
    reduced: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-] where the bend begins as 1 + reduced; does not cancel."""
    step = zero_shear_viscosity - infinite_shear_viscosity
    above = step * np.exp(log_factor)
    rise = infinite_shear_viscosity + above * (1.0 + flow_index * reduced) / (1.0 + reduced)
    slope = rise / (infinite_shear_viscosity + above)
    if np.any(step < 0):
        both = (zero_shear_viscosity, infinite_shear_viscosity)
        falls = log_factor + np.log1p(flow_index * reduced) - np.log1p(reduced)
        slope = np.where(step < 0, between(*both, falls) / between(*both, log_factor), slope)
    return slope


def stress(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
    yasuda_exponent: FloatArray,
) -> FloatArray:
    """Shear stress [Pa]."""
    factor = log_factor(rate, time_constant, flow_index, yasuda_exponent)
    return rate * between(zero_shear_viscosity, infinite_shear_viscosity, factor)


def log_slope(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
    yasuda_exponent: FloatArray,
) -> FloatArray:
    """d ln(stress)/d ln(rate) [-]."""
    reduced = (time_constant * rate) ** yasuda_exponent
    factor = (flow_index - 1.0) / yasuda_exponent * np.log1p(reduced)
    return slope_of_plateaus(
        zero_shear_viscosity, infinite_shear_viscosity, factor, flow_index, reduced
    )


def jacobian(
    rate: FloatArray,
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
    yasuda_exponent: FloatArray,
) -> tuple[FloatArray, ...]:
    """d stress/d (η_0, η_∞, λ, n, a)."""
    product = time_constant * rate
    reduced = product**yasuda_exponent
    bend = np.log1p(reduced)
    log_of_it = (flow_index - 1.0) / yasuda_exponent * bend
    factor = np.exp(log_of_it)
    step = rate * (zero_shear_viscosity - infinite_shear_viscosity) * factor
    share = reduced / (1.0 + reduced)
    log_product = np.log(np.where(product > 0, product, 1.0))
    return (
        rate * factor,
        -rate * np.expm1(log_of_it),
        step * (flow_index - 1.0) * share / time_constant,
        step * bend / yasuda_exponent,
        step
        * (flow_index - 1.0)
        / yasuda_exponent
        * (share * log_product - bend / yasuda_exponent),
    )


def stays_positive(
    zero_shear_viscosity: FloatArray,
    infinite_shear_viscosity: FloatArray,
    time_constant: FloatArray,
    flow_index: FloatArray,
    *_: Any,
) -> NDArray[np.bool_]:
    """Return where the stress stays above 0 at every rate."""
    return np.asarray((flow_index <= 1) | (infinite_shear_viscosity <= zero_shear_viscosity))


def check_rising(*parameters: Any) -> None:
    """Refuse a curve that would turn negative."""
    if not np.all(stays_positive(*parameters)):
        raise InputError(
            "with a flow_index above 1 the infinite_shear_viscosity must not exceed the "
            "zero_shear_viscosity, or the stress turns negative"
        )


def plateau_basis(log_factor: FloatArray, rate: FloatArray) -> tuple[FloatArray, FloatArray]:
    """Columns whose coefficients are η_0 and η_∞."""
    return rate * np.exp(log_factor), -rate * np.expm1(log_factor)


def plateau_parameters(
    order: Callable[[tuple[Any, ...]], tuple[Any, ...]] = lambda shape: shape,
) -> Callable[[tuple[Any, ...], tuple[Any, ...]], tuple[Any, ...]]:
    """Return the map from shape and (η_0, η_∞) to parameters in record order."""
    return lambda shape, size: (size[0], size[1], *order(shape))


RECORD = ModelRecord(
    key="carreau-yasuda",
    name="Carreau-Yasuda",
    equation="η = η_∞ + (η_0 - η_∞)[1 + (λγ̇)^a]^((n-1)/a)",
    parameters=(
        ZERO_SHEAR_VISCOSITY,
        INFINITE_SHEAR_VISCOSITY,
        TIME_CONSTANT,
        PLATEAU_FLOW_INDEX,
        Parameter("yasuda_exponent", "a", "-", "bend of the first plateau", 0.1, 10.0),
    ),
    stress=stress,
    log_slope=log_slope,
    jacobian=jacobian,
    check=check_rising,
    allowed=stays_positive,
    source="K. Yasuda, R. C. Armstrong & R. E. Cohen, Rheol. Acta 20 (1981) 163",
    validity="Polymer solutions and melts and gums with a plateau at low rates.",
    separable=Separable(
        shape=("time_constant", "flow_index", "yasuda_exponent"),
        grid=lambda rate: (
            reciprocal_rate_grid(rate, 25),
            np.linspace(0.0, 1.2, 13),
            np.geomspace(0.1, 10.0, 9),
        ),
        basis=lambda rate, *shape: plateau_basis(log_factor(rate, *shape), rate),
        to_parameters=plateau_parameters(),
        logarithmic=(True, False, True),
    ),
)
