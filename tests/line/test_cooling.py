"""A line that cools on its way, and temperatures along a line."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from scipy.integrate import quad

import rheo
from rheo.line import Equipment, Line, Pipe, Product
from rheo.line.walk import walk

COOLING = Pipe(
    200.0, 0.05, ambient_temperature=278.15, heat_transfer_coefficient=40.0, name="yard run"
)
FLOW = 5e-4


def _model(temperature: object) -> rheo.Model:
    inverse = 1.0 / np.asarray(temperature) - 1.0 / 313.15
    return rheo.model("power-law", consistency=3.0 * np.exp(3500.0 * inverse), flow_index=0.5)


FAT = Product(
    _model, 950.0, temperature=333.15, heat_capacity=2500.0, temperature_range=(283.15, 343.15)
)


def _temperature(x: float, flow: float = FLOW) -> float:
    units = 40.0 * np.pi * 0.05 * x / (950.0 * flow * 2500.0)
    return 278.15 + (333.15 - 278.15) * float(np.exp(-units))


def test_pressure_is_the_integral_over_the_falling_temperature() -> None:
    found = walk(Line(discharge=(COOLING,)), FAT, FLOW)
    wall = (3 * 0.5 + 1) / (4 * 0.5) * 8 * 4 * FLOW / (np.pi * 0.05**3)

    def gradient(x: float) -> float:
        consistency = 3.0 * np.exp(3500.0 * (1.0 / _temperature(x) - 1.0 / 313.15))
        return 4.0 / 0.05 * consistency * wall**0.5

    by_hand, _ = quad(gradient, 0.0, 200.0, epsabs=0.0, epsrel=1e-12)
    # Eight Gauss-Legendre points along a smooth curve.
    assert float(found.friction_pressure) == pytest.approx(by_hand, rel=1e-8)
    assert float(found.steps[0].outlet_temperature) == pytest.approx(_temperature(200.0), rel=1e-12)


def test_the_next_pipe_takes_the_temperature_on() -> None:
    half = replace(COOLING, length=100.0)
    whole = walk(Line(discharge=(COOLING,)), FAT, FLOW).friction_pressure
    cut = walk(Line(discharge=(half, half)), FAT, FLOW).friction_pressure
    assert float(cut) == pytest.approx(float(whole), rel=1e-8)


def test_slower_flow_arrives_colder_and_may_need_more_pressure() -> None:
    line = Line(discharge=(COOLING,))
    flows = np.array([2e-5, 1e-4, 1e-3])
    found = walk(line, FAT, flows)
    assert np.all(np.diff(found.steps[0].outlet_temperature) > 0)
    apart = [float(walk(line, FAT, flow).friction_pressure) for flow in flows]
    np.testing.assert_allclose(found.friction_pressure, apart, rtol=1e-12)


def test_draws_and_flows_together() -> None:
    factor = np.array([0.8, 1.0, 1.3])

    def draws(temperature: object) -> rheo.Model:
        inverse = 1.0 / np.asarray(temperature) - 1.0 / 313.15
        return rheo.model(
            "power-law", consistency=3.0 * factor * np.exp(3500.0 * inverse), flow_index=0.5
        )

    line = Line(discharge=(COOLING, Equipment(0.0, 1.0, outlet_temperature=300.0), Pipe(5.0, 0.04)))
    flows = np.array([1e-4, 5e-4])
    together = walk(line, FAT, flows[:, np.newaxis], source=draws).friction_pressure
    alone = walk(line, FAT, flows).friction_pressure
    # In laminar flow of a power law the pressure goes with the consistency.
    np.testing.assert_allclose(together, alone[:, np.newaxis] * factor, rtol=1e-12)


def test_equipment_and_pipes_set_temperatures() -> None:
    line = Line(
        discharge=(
            Pipe(1.0, 0.05, name="a"),
            Equipment(0.0, 1.0, outlet_temperature=300.0),
            Pipe(1.0, 0.05, name="b"),
            Pipe(1.0, 0.05, temperature=290.0, name="c"),
            Pipe(1.0, 0.05, name="d"),
        )
    )
    found = [float(step.temperature) for step in walk(line, FAT, FLOW).steps]
    assert found == [333.15, 333.15, 300.0, 290.0, 290.0]


def test_outside_the_measured_temperatures_is_a_caution() -> None:
    found = rheo.solve_line(Line(discharge=(replace(COOLING, length=2000.0),)), FAT, 1e-4)
    caution = next(c for c in found.cautions if c.code == "outside-temperature-range")
    assert caution.place == "yard run"
    assert "10.0 to 70.0 °C of the readings" in caution.sentence


def test_one_temperature_only_is_a_caution() -> None:
    product = Product(_model(313.15), 950.0, temperature=313.15)
    found = rheo.solve_line(Line(discharge=(Pipe(1.0, 0.05, temperature=300.0),)), product, FLOW)
    assert "temperature-not-in-model" in {caution.code for caution in found.cautions}


@pytest.mark.parametrize(
    ("product", "sentence"),
    [
        (replace(FAT, heat_capacity=None), r"heat_capacity .* is missing; a line that cools"),
        (
            Product(_model(313.15), 950.0, heat_capacity=2500.0),
            "known at one temperature only; a line that cools or warms needs readings",
        ),
    ],
)
def test_what_a_cooling_line_needs(product: Product, sentence: str) -> None:
    with pytest.raises(rheo.InputError, match=sentence):
        walk(Line(discharge=(COOLING,)), product, FLOW)


def test_friction_that_warms_is_a_caution() -> None:
    line = Line(discharge=(Pipe(500.0, 0.02),))
    thick = Product(rheo.model("newtonian", viscosity=5.0), 1000.0, heat_capacity=2000.0)
    found = rheo.solve_line(line, thick, 2e-4)
    assert found.temperature_rise is not None
    assert float(found.temperature_rise) > 5.0
    assert "viscous-heating" in {caution.code for caution in found.cautions}
