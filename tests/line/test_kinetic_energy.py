"""Kinetic energy of the stream."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo.geometry import tube_flow
from rheo.line.kinetic_energy import kinetic_energy_factor, laminar_factor


@settings(deadline=None, max_examples=60, derandomize=True)
@given(st.floats(0.0, 500.0), st.floats(1e-3, 100.0), st.floats(0.1, 2.0), st.floats(1e-4, 1e4))
def test_the_closed_form_is_the_integral(
    yield_stress: float, consistency: float, index: float, rate: float
) -> None:
    model = rheo.model(
        "herschel-bulkley", yield_stress=yield_stress, consistency=consistency, flow_index=index
    )
    at = np.asarray(rate)
    by_quadrature = float(tube_flow.kinetic_energy_factor(model, at))
    assert float(laminar_factor(model, at)) == pytest.approx(by_quadrature, rel=1e-9)


@pytest.mark.parametrize("n", [0.25, 0.5, 1.0])
def test_a_power_law(n: float) -> None:
    """α = 3(3n + 1)²/((2n + 1)(5n + 3)), from the laminar profile."""
    model = rheo.model("power-law", consistency=3.0, flow_index=n)
    by_hand = 3 * (3 * n + 1) ** 2 / ((2 * n + 1) * (5 * n + 3))
    assert float(laminar_factor(model, np.asarray(10.0))) == pytest.approx(by_hand, rel=1e-13)


def test_other_flow_curves_by_quadrature() -> None:
    carreau = rheo.model(
        "carreau",
        zero_shear_viscosity=5.0,
        infinite_shear_viscosity=0.01,
        time_constant=1.0,
        flow_index=0.4,
    )
    found = float(laminar_factor(carreau, np.asarray(30.0)))
    exact = float(tube_flow.kinetic_energy_factor(carreau, np.asarray(30.0)))
    assert found == pytest.approx(exact, rel=1e-8)
    assert 1.0 < found < 2.0


@pytest.mark.parametrize("bend", [0.3, 1.0, 5.0])
def test_quadrature_for_losses_keeps_what_it_promises(bend: float) -> None:
    """Right to 1e-4 also where the curve bends sharply anywhere below the wall's shear rate."""
    model = rheo.model(
        "carreau-yasuda",
        zero_shear_viscosity=5.0,
        infinite_shear_viscosity=0.001,
        time_constant=np.geomspace(1e-3, 1e3, 300),
        flow_index=0.1,
        yasuda_exponent=bend,
    )
    found = laminar_factor(model, np.asarray(30.0))
    exact = tube_flow.kinetic_energy_factor(model, np.asarray(30.0))
    np.testing.assert_allclose(found, exact, rtol=1e-4)


@pytest.mark.parametrize(
    "model",
    [
        rheo.model("newtonian", viscosity=1e-3),
        rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.3, flow_index=0.6),
    ],
)
def test_in_every_regime_it_is_that_of_the_pipe_flow(model: rheo.Model) -> None:
    flow = rheo.pipe_flow(model, 0.05, np.geomspace(0.01, 8.0, 60), 1000.0)
    assert {"laminar", "transition", "turbulent"} <= set(flow.regime)
    np.testing.assert_allclose(kinetic_energy_factor(flow), flow.kinetic_energy_factor, rtol=1e-9)
    one = rheo.pipe_flow(model, 0.05, 1.0, 1000.0)
    assert float(kinetic_energy_factor(one)) == pytest.approx(
        float(one.kinetic_energy_factor), rel=1e-9
    )
