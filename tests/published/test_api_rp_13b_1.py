"""API RP 13B-1: the six-speed viscometer with rotor R1 and bob B1. Values are from memory.

Printed: 1.7023 1/s for each rev/min, 0.511 Pa for each degree of the dial, and the field's
shortcuts at 600 and 300 rev/min: plastic viscosity [cP] is the difference of the two readings and
yield point [lb/100 ft2] is the reading at 300 less the plastic viscosity.
"""

from __future__ import annotations

import math

import pytest

import rheo
from rheo.geometry.six_speed import torque_from_dial
from rheo.units import from_si

ROTOR_AND_BOB = rheo.geometry("six-speed")


def test_shear_rate_for_each_rpm() -> None:
    rate, _ = ROTOR_AND_BOB.nominal(math.pi / 30.0, 1.0)
    assert float(rate) == pytest.approx(1.7023, abs=5e-5)


@pytest.mark.parametrize(("rpm", "printed"), [(600, 1022.0), (300, 511.0), (6, 10.2), (3, 5.11)])
def test_shear_rates_of_the_six_speeds(rpm: int, printed: float) -> None:
    rate, _ = ROTOR_AND_BOB.nominal(rpm * math.pi / 30.0, 1.0)
    # The handbooks' table is made with 1.703 and prints three digits, 600 rpm as 1022.
    assert float(rate) == pytest.approx(printed, rel=2.5e-3)


def test_stress_for_each_degree() -> None:
    _, stress = ROTOR_AND_BOB.nominal(1.0, torque_from_dial(1.0))
    assert float(stress) == pytest.approx(0.511, abs=5e-4)
    # 1.067 lb/100 ft2, which the field takes as 1.
    assert float(from_si(stress, "Pa", "lb/100ft2")) == pytest.approx(1.067, abs=1e-3)


def test_field_shortcuts_are_bingham_within_their_rounding() -> None:
    """Readings of 46 and 28: 18 cP and 10 lb/100 ft2 by the shortcut."""
    rate, stress = ROTOR_AND_BOB.nominal(
        [300 * math.pi / 30.0, 600 * math.pi / 30.0], torque_from_dial([28.0, 46.0])
    )
    viscosity = float((stress[1] - stress[0]) / (rate[1] - rate[0]))
    yield_stress = float(stress[0]) - viscosity * float(rate[0])
    assert viscosity == pytest.approx(0.018, rel=2e-3)
    # The shortcut counts a degree as 1 lb/100 ft2 and so comes out 6.7 % low.
    assert float(from_si(yield_stress, "Pa", "lb/100ft2")) == pytest.approx(10.67, abs=0.03)
