"""Flow curves for property tests: every registered model with parameters of plausible size."""

from __future__ import annotations

from collections.abc import Callable
from typing import Any

import mpmath
from hypothesis import strategies as st
from hypothesis.strategies import SearchStrategy

import rheo
from rheo import Model

KEYS = tuple(rheo.model_records())

# One set of parameters a model, of an everyday thick product.
EXAMPLES: dict[str, dict[str, float]] = {
    "newtonian": {"viscosity": 0.8},
    "power-law": {"consistency": 5.0, "flow_index": 0.3},
    "bingham": {"yield_stress": 20.0, "plastic_viscosity": 0.2},
    "herschel-bulkley": {"yield_stress": 12.0, "consistency": 4.2, "flow_index": 0.45},
    "casson": {"yield_stress": 8.0, "casson_viscosity": 1.0},
    "carreau": {
        "zero_shear_viscosity": 40.0,
        "infinite_shear_viscosity": 0.01,
        "time_constant": 3.0,
        "flow_index": 0.3,
    },
    "carreau-yasuda": {
        "zero_shear_viscosity": 10.0,
        "infinite_shear_viscosity": 0.05,
        "time_constant": 0.8,
        "flow_index": 0.35,
        "yasuda_exponent": 0.9,
    },
    "cross": {
        "zero_shear_viscosity": 30.0,
        "infinite_shear_viscosity": 0.01,
        "time_constant": 1.5,
        "rate_index": 0.8,
    },
    "sisko": {"infinite_shear_viscosity": 0.03, "consistency": 5.0, "flow_index": 0.25},
    "robertson-stiff": {"consistency": 3.0, "rate_offset": 4.0, "flow_index": 0.5},
    "ellis": {"zero_shear_viscosity": 8.0, "half_stress": 12.0, "stress_index": 2.2},
}

_EXPONENTS = {
    "viscosity": (-3, 3),
    "consistency": (-2, 2),
    "plastic_viscosity": (-3, 1),
    "casson_viscosity": (-3, 1),
    "yield_stress": (-2, 2.5),
    "zero_shear_viscosity": (-1, 3),
    "infinite_shear_viscosity": (-4, -1.5),
    "time_constant": (-3, 2),
    "rate_offset": (-2, 2),
    "half_stress": (-1, 2.5),
}
_PLAIN = {
    "flow_index": (0.1, 1.6),
    "rate_index": (0.05, 0.99),
    "yasuda_exponent": (0.3, 4.0),
    "stress_index": (1.0, 5.0),
}


def _value(model_key: str, key: str) -> SearchStrategy[float]:
    if key in _EXPONENTS:
        low, high = _EXPONENTS[key]
        return st.floats(low, high).map(lambda power: float(10.0**power))
    low, high = _PLAIN[key]
    # A plateau curve that thickens or stays flat between its plateaus is allowed, but rarely met.
    return st.floats(low, 1.0 if model_key.startswith("carreau") else high)


def models_of(key: str) -> SearchStrategy[Model]:
    """Return a strategy for one model with scalar parameters."""
    keys = rheo.model_records()[key].parameter_keys
    values: dict[str, SearchStrategy[Any]] = {name: _value(key, name) for name in keys}
    return st.fixed_dictionaries(values).map(lambda chosen: rheo.model(key, **chosen))


def any_model() -> SearchStrategy[Model]:
    """Return a strategy for any model with scalar parameters."""
    return st.sampled_from(KEYS).flatmap(models_of)


def example(key: str) -> Model:
    """Return an everyday product of a model."""
    return rheo.model(key, **EXAMPLES[key])


def powers_of_ten(low: float, high: float) -> SearchStrategy[float]:
    """Return a strategy for numbers whose logarithms are spread evenly."""
    return st.floats(low, high).map(lambda power: float(10.0**power))


def precise_stress(model: Model) -> Callable[[Any], Any]:
    """Return the textbook form of a model, written down a second time for mpmath."""
    key = model.key
    p = {name: mpmath.mpf(float(value)) for name, value in model.parameters.items()}

    def plateau(shape: Callable[[Any], Any]) -> Callable[[Any], Any]:
        low, high = p["zero_shear_viscosity"], p["infinite_shear_viscosity"]
        return lambda rate: rate * (high + (low - high) * shape(p["time_constant"] * rate))

    def ellis(rate: Any) -> Any:
        if rate == 0:
            return mpmath.mpf(0)
        y = mpmath.findroot(
            lambda z: (
                z
                + mpmath.log(1 + mpmath.exp((p["stress_index"] - 1) * z))
                - mpmath.log(rate * p["zero_shear_viscosity"] / p["half_stress"])
            ),
            mpmath.log(mpmath.mpf(float(model.stress(float(rate)))) / p["half_stress"]),
        )
        return p["half_stress"] * mpmath.exp(y)

    forms = {
        "newtonian": lambda rate: p["viscosity"] * rate,
        "power-law": lambda rate: p["consistency"] * rate ** p["flow_index"],
        "bingham": lambda rate: p["yield_stress"] + p["plastic_viscosity"] * rate,
        "herschel-bulkley": lambda rate: (
            p["yield_stress"] + p["consistency"] * rate ** p["flow_index"]
        ),
        "casson": lambda rate: (
            (mpmath.sqrt(p["yield_stress"]) + mpmath.sqrt(p["casson_viscosity"] * rate)) ** 2
        ),
        "sisko": lambda rate: (
            p["infinite_shear_viscosity"] * rate + p["consistency"] * rate ** p["flow_index"]
        ),
        "robertson-stiff": lambda rate: (
            p["consistency"] * (rate + p["rate_offset"]) ** p["flow_index"]
        ),
        "ellis": ellis,
    }
    if key == "carreau":
        return plateau(lambda x: (1 + x**2) ** ((p["flow_index"] - 1) / 2))
    if key == "carreau-yasuda":
        a = p["yasuda_exponent"]
        return plateau(lambda x: (1 + x**a) ** ((p["flow_index"] - 1) / a))
    if key == "cross":
        return plateau(lambda x: 1 / (1 + x ** p["rate_index"]))
    return forms[key]
