"""Coulson & Richardson, "Chemical Engineering" volume 1, chapter 3, and its solutions volume.

Statements and answers are from memory.
"""

from __future__ import annotations

import math

import pytest

import rheo


def test_bingham_material_hangs_in_a_vertical_tube() -> None:
    """Problem 3.30: density 2000 kg/m3, 0.3 m tube, just flowing out: printed 1472 N/m2.

    The wall carries the weight, so the wall stress is rho g D/4 = 1471.5 Pa with the book's 9.81.
    """
    hanging = 2000.0 * 9.81 * 0.3 / 4.0
    assert hanging == pytest.approx(1472.0, abs=0.51)
    material = rheo.model("bingham", yield_stress=hanging, plastic_viscosity=20.0)
    creeping = rheo.pipe_flow(material, diameter=0.3, velocity=1e-9, density=2000.0)
    assert float(creeping.wall_stress) == pytest.approx(1472.0, rel=1e-3)


class TestPowerLawAgainstBingham:
    """Example 3.8: k = 10 N s^n/m2 and n = 0.2, fitted over 10 to 50 1/s, 200 m of 40 mm pipe.

    Printed: plastic viscosity 0.150 N s/m2, yield stress 14.35 N/m2; with 1 m/s on the centre line
    a pressure drop of 626 000 N/m2 after the power law.
    """

    power_law = rheo.model("power-law", consistency=10.0, flow_index=0.2)

    def test_bingham_constants(self) -> None:
        low, high = self.power_law.stress([10.0, 50.0])
        plastic_viscosity = float(high - low) / 40.0
        assert plastic_viscosity == pytest.approx(0.150, abs=0.001)
        # 14.34 here: the book takes the rounded viscosity on into the yield stress.
        assert float(low) - 10.0 * 0.150 == pytest.approx(14.35, abs=0.01)

    def test_pressure_drop(self) -> None:
        velocity = 1.0 / (1.6 / 1.2)  # u_max/V = (3n + 1)/(n + 1)
        flow = rheo.pipe_flow(self.power_law, diameter=0.04, velocity=velocity, density=1000.0)
        assert float(flow.velocity_ratio) * velocity == pytest.approx(1.0, rel=1e-12)
        assert float(flow.pressure_gradient) * 200.0 == pytest.approx(626e3, abs=500.0)


def test_polymer_solution_in_a_pipe() -> None:
    """Chhabra & Richardson, "Non-Newtonian Flow in the Process Industries", example 3.1.

    2500 kg/h of 1075 kg/m3, m = 3 Pa s^n, n = 0.5, 10 m of 25 mm pipe. Printed: 110 kPa, and
    2.2 m/s on the centre line.
    """
    solution = rheo.model("power-law", consistency=3.0, flow_index=0.5)
    velocity = 2500.0 / 3600.0 / 1075.0 / (math.pi * 0.025**2 / 4.0)
    flow = rheo.pipe_flow(solution, diameter=0.025, velocity=velocity, density=1075.0)
    assert float(flow.pressure_gradient) * 10.0 == pytest.approx(110e3, abs=500.0)
    assert float(flow.velocity_ratio) * velocity == pytest.approx(2.2, abs=0.05)
