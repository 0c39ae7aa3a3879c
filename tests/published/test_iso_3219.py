"""ISO 3219 (formerly DIN 53019): conversion factors of the standard concentric cylinders.

The radii stand as 1 : 1.0847, the bob is three of its radii long, the ends are worth 10 % of the
torque. Printed (from memory): shear stress 0.0446 M/R_i^3 and shear rate 1.291 n, n in rev/min,
both as representative values, the mean of bob and cup.
"""

from __future__ import annotations

import math

import pytest

import rheo

INNER = 0.0125
CUP_AND_BOB = rheo.geometry(
    "concentric-cylinders",
    inner_radius=INNER,
    outer_radius=1.0847 * INNER,
    length=3.0 * INNER,
    end_factor=1.10,
)
ONE_RPM = math.pi / 30.0


def test_representative_factors() -> None:
    rate, stress = CUP_AND_BOB.nominal(ONE_RPM, 1.0)
    assert float(rate) == pytest.approx(1.291, abs=5e-4)
    assert float(stress) * INNER**3 == pytest.approx(0.0446, abs=5e-5)


def test_values_at_the_bob_are_eight_percent_higher() -> None:
    rate, stress = CUP_AND_BOB.nominal(ONE_RPM, 1.0)
    bob_rate, bob_stress = CUP_AND_BOB.nominal(ONE_RPM, 1.0, form="bob")
    assert float(bob_rate / rate) == pytest.approx(1.08, abs=5e-3)
    assert float(bob_stress / stress) == pytest.approx(1.08, abs=5e-3)


def test_the_exact_relation_gives_the_factor_for_a_newtonian_fluid() -> None:
    """At the bob 1.3956 1/s per rpm, the printed 1.291 times 2 delta^2/(1 + delta^2)."""
    oil = rheo.model("newtonian", viscosity=0.5)
    rate, _ = CUP_AND_BOB.sheared(oil, ONE_RPM)
    at_bob = 1.291 * 2.0 * 1.0847**2 / (1.0 + 1.0847**2)
    # The printed factor has four digits.
    assert float(rate) == pytest.approx(at_bob, rel=4e-4)
