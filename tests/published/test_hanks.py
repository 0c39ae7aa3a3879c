"""Hanks, "The laminar-turbulent transition for fluids with a yield stress", AIChE J. 9 (1963) 306.

The equations are the paper's: x/(1 - x)^3 = He/16 800 and Re = He/(8x)(1 - 4x/3 + x^4/3), with
x the yield stress over the critical wall stress. The constants are from memory; 16 800 is
8 times the 2100 at which a Newtonian fluid is taken to leave laminar flow.
"""

from __future__ import annotations

import pytest

import rheo

VISCOSITY = 0.02
DIAMETER = 0.1
DENSITY = 1000.0


def _critical_velocity(hedstrom: float) -> float:
    yield_stress = hedstrom * VISCOSITY**2 / (DENSITY * DIAMETER**2)
    fluid = rheo.model("bingham", yield_stress=yield_stress, plastic_viscosity=VISCOSITY)
    return float(rheo.critical_velocity(fluid, diameter=DIAMETER, density=DENSITY, method="hanks"))


def test_without_a_yield_stress_it_is_2100() -> None:
    reynolds = DENSITY * _critical_velocity(1e-6) * DIAMETER / VISCOSITY
    assert reynolds == pytest.approx(2100.0, abs=0.5)


@pytest.mark.parametrize("ratio", [0.1, 0.5, 0.9])
def test_stress_ratio_at_the_change(ratio: float) -> None:
    hedstrom = 16800.0 * ratio / (1.0 - ratio) ** 3
    reynolds = hedstrom / (8.0 * ratio) * (1.0 - 4.0 * ratio / 3.0 + ratio**4 / 3.0)
    expected = reynolds * VISCOSITY / (DENSITY * DIAMETER)
    assert _critical_velocity(hedstrom) == pytest.approx(expected, rel=1e-9)
