"""White, "Fluid Mechanics", chapter 6: turbulent flow of water in pipes. Values are from memory.

The book's friction factor is four times the Fanning factor.
"""

from __future__ import annotations

import pytest

import rheo
from rheo.units import parse_quantity

# Solutions of Prandtl's smooth-pipe equation as the book tabulates them (eq. 6.38).
SMOOTH = {
    4.0e3: 0.0399,
    1.0e4: 0.0309,
    1.0e5: 0.0180,
    1.0e6: 0.0116,
    1.0e7: 0.0081,
    1.0e8: 0.0059,
}
HALF_A_DIGIT = 0.5e-4


def _factor(reynolds: float, method: str, roughness: float = 0.0) -> float:
    water = rheo.model("newtonian", viscosity=1e-3)
    velocity = reynolds * 1e-3 / (1000.0 * 0.1)
    return 4.0 * float(
        rheo.friction_factor(
            water,
            diameter=0.1,
            velocity=velocity,
            density=1000.0,
            roughness=roughness * 0.1,
            method=method,
        )
    )


@pytest.mark.parametrize(("reynolds", "printed"), SMOOTH.items())
def test_smooth_pipe_table(reynolds: float, printed: float) -> None:
    assert _factor(reynolds, "colebrook-white") == pytest.approx(printed, abs=HALF_A_DIGIT)


@pytest.mark.parametrize(("reynolds", "printed"), SMOOTH.items())
def test_dodge_and_metzner_with_a_newtonian_fluid(reynolds: float, printed: float) -> None:
    """Their equation with n' = 1 is Prandtl's with 4.0 and 0.40, rounded to one part in 200."""
    assert _factor(reynolds, "dodge-metzner") == pytest.approx(printed, abs=2 * HALF_A_DIGIT)


def test_water_in_asphalted_cast_iron() -> None:
    """Example 6.6: 200 ft of 6 in. pipe, eps = 0.0004 ft, 6 ft/s: f = 0.02, 4.5 ft, 280 lbf/ft2.

    The book takes 1.1e-5 ft2/s for water, so that Re = 270 000.
    """
    diameter = parse_quantity("6 in", "m")
    velocity = parse_quantity("6 ft/s", "m/s")
    length = parse_quantity("200 ft", "m")
    viscosity = 1000.0 * parse_quantity("1.1e-5 ft^2/s", "m^2/s")
    flow = rheo.pipe_flow(
        rheo.model("newtonian", viscosity=viscosity),
        diameter=diameter,
        velocity=velocity,
        density=1000.0,
        roughness=parse_quantity("0.0004 ft", "m"),
    )
    assert float(flow.reynolds) == pytest.approx(270e3, rel=0.02)
    factor = 4.0 * float(flow.friction_factor)
    assert factor == pytest.approx(0.02, abs=0.0005)
    # The book reads 0.02 from the chart and carries it on; Colebrook and White's value is 0.0198,
    # so that our own loss is 4.44 ft.
    pressure_drop = float(flow.pressure_gradient) * length * 0.02 / factor
    assert pressure_drop / (1000.0 * 9.80665) / 0.3048 == pytest.approx(4.5, abs=0.05)
    printed = 280.0 * parse_quantity("1 lbf/ft^2", "Pa")
    assert pressure_drop == pytest.approx(printed, rel=0.005)
