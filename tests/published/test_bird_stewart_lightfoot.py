"""Bird, Stewart & Lightfoot, "Transport Phenomena" (1960), example 2.3-1: glycerine in a capillary.

Statement and answers are from memory. A pressure drop of 40 psi drives 0.00398 ft3/min through a
horizontal tube 1 ft long and 0.1 in. in diameter; the density is 1.261 g/cm3. Printed answers: a
viscosity of 492 cP, three digits, and a Reynolds number of 2.41.
"""

from __future__ import annotations

import math

import pytest

import rheo
from rheo.units import parse_quantity

DIAMETER = parse_quantity("0.1 in", "m")
LENGTH = parse_quantity("1 ft", "m")
PRESSURE_DROP = parse_quantity("40 psi", "Pa")
FLOW = parse_quantity("0.00398 ft^3/min", "m^3/s")
DENSITY = parse_quantity("1.261 g/cm3", "kg/m^3")
VELOCITY = FLOW / (math.pi * DIAMETER**2 / 4.0)


def test_viscosity_and_reynolds_number_of_glycerine() -> None:
    wall_stress = PRESSURE_DROP * DIAMETER / (4.0 * LENGTH)
    viscosity = wall_stress / (8.0 * VELOCITY / DIAMETER)
    assert viscosity == pytest.approx(0.492, abs=0.0005)
    reynolds = float(DENSITY * VELOCITY * DIAMETER / viscosity)
    assert reynolds == pytest.approx(2.41, abs=0.005)


def test_printed_viscosity_gives_the_pressure_drop_back() -> None:
    glycerine = rheo.model("newtonian", viscosity=0.492)
    flow = rheo.pipe_flow(glycerine, diameter=DIAMETER, velocity=VELOCITY, density=DENSITY)
    # Half a unit of the last printed digit of the viscosity is 0.1 %.
    assert float(flow.pressure_gradient) * LENGTH == pytest.approx(PRESSURE_DROP, rel=1e-3)
    assert float(flow.reynolds) == pytest.approx(2.41, abs=0.005)
    assert float(flow.velocity_ratio) == pytest.approx(2.0, rel=1e-12)
