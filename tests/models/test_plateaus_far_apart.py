"""Curves between two plateaus keep their digits wherever the plateaus lie.

The references are the published equations as printed, worked out with 60 digits.
"""

from __future__ import annotations

import mpmath
import numpy as np
import pytest

import rheo

KEYS = ("carreau", "carreau-yasuda", "cross")


def draw(key: str, random: np.random.Generator) -> dict[str, float]:
    """Return legal parameters: plateaus ten decades apart, either way round, or all but equal."""
    zero = 10.0 ** random.uniform(-4, 6)
    infinite = 10.0 ** random.uniform(-4, 6)
    found = {"time_constant": 10.0 ** random.uniform(-7, 6)}
    if key == "cross":
        found["rate_index"] = random.uniform(0.0, 1.0)
    else:
        found["flow_index"] = random.uniform(0.0, 2.0)
        if found["flow_index"] > 1:
            infinite = zero * (1.0 - 10.0 ** random.uniform(-12, 0))
    if key == "carreau-yasuda":
        found["yasuda_exponent"] = random.uniform(0.1, 10.0)
    return {"zero_shear_viscosity": zero, "infinite_shear_viscosity": infinite, **found}


def log_of_stress(key: str, values: dict[str, float], log_rate: mpmath.mpf) -> mpmath.mpf:
    """Return ln(stress) by the equation as printed."""
    at = {name: mpmath.mpf(value) for name, value in values.items()}
    rate = mpmath.e**log_rate
    reduced = at["time_constant"] * rate
    if key == "cross":
        factor = 1 / (1 + reduced ** at["rate_index"])
    else:
        bend = at.get("yasuda_exponent", mpmath.mpf(2))
        factor = (1 + reduced**bend) ** ((at["flow_index"] - 1) / bend)
    zero, infinite = at["zero_shear_viscosity"], at["infinite_shear_viscosity"]
    return mpmath.log(rate * (infinite + (zero - infinite) * factor))


@pytest.mark.parametrize("key", KEYS)
def test_stress_and_slope_keep_their_digits(key: str) -> None:
    random = np.random.default_rng(KEYS.index(key))
    for _ in range(150):
        values = draw(key, random)
        rate = 10.0 ** random.uniform(-6, 7)
        model = rheo.model(key, **values)
        with mpmath.workdps(60):
            at = mpmath.log(mpmath.mpf(rate))
            stress = float(mpmath.e ** log_of_stress(key, values, at))
            slope = float(
                mpmath.diff(
                    lambda one, values=values: log_of_stress(key, values, one),
                    at,
                    h=mpmath.mpf(10) ** -20,
                )
            )
        assert float(model.stress(rate)) == pytest.approx(stress, rel=1e-14), values
        assert float(model.log_slope(rate)) == pytest.approx(slope, rel=1e-12, abs=1e-14), values
