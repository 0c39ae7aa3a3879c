"""Geankoplis, "Transport Processes and Unit Operations", examples 3.5-1 and 3.5-2.

Statements and answers are from memory. The book gives K' of tau_w = K'(8V/D)^n', not the
consistency of the flow curve.
"""

from __future__ import annotations

import pytest

import rheo


def _from_tube_constants(local_consistency: float, flow_index: float) -> rheo.Model:
    shape = ((3.0 * flow_index + 1.0) / (4.0 * flow_index)) ** flow_index
    return rheo.model("power-law", consistency=local_consistency / shape, flow_index=flow_index)


def test_laminar_example() -> None:
    """Example 3.5-1: printed 45 390 Pa, a generalised Reynolds number of 1.106 and f = 14.44."""
    fluid = _from_tube_constants(15.23, 0.400)
    flow = rheo.pipe_flow(fluid, diameter=0.0524, velocity=0.0728, density=1041.0)
    assert float(flow.pressure_gradient) * 14.9 == pytest.approx(45390.0, abs=5.0)
    assert float(flow.reynolds) == pytest.approx(1.106, abs=5e-4)
    # The printed f is 16/1.108: 0.2 % off the f of the printed Reynolds number, 16/1.106 = 14.47.
    assert float(flow.friction_factor) == pytest.approx(14.44, rel=2.5e-3)
    assert float(flow.friction_factor) == pytest.approx(16.0 / 1.106, rel=5e-4)


def test_constants_of_the_tube_are_not_those_of_the_flow_curve() -> None:
    """Taken as a consistency, the printed K' would overstate the pressure drop by 14 %."""
    wrong = rheo.model("power-law", consistency=15.23, flow_index=0.400)
    flow = rheo.pipe_flow(wrong, diameter=0.0524, velocity=0.0728, density=1041.0)
    assert float(flow.pressure_gradient) * 14.9 == pytest.approx(51557.5, abs=1.0)


def test_turbulent_example() -> None:
    """Example 3.5-2: printed Re 1.328e4, f = 0.0032 read from the chart, 134.4 kPa."""
    fluid = _from_tube_constants(2.744, 0.300)
    given = {"diameter": 0.0508, "velocity": 6.10, "density": 961.0}
    laminar = rheo.pipe_flow(fluid, **given, regime="laminar")
    assert float(laminar.reynolds) == pytest.approx(1.328e4, abs=5.0)
    factor = float(rheo.friction_factor(fluid, **given, method="dodge-metzner"))
    # Dodge and Metzner's equation, of which the chart is a drawing; the eye read 3 % more.
    assert factor == pytest.approx(0.0031, abs=5e-5)
    assert factor == pytest.approx(0.0032, rel=0.035)
    pressure_drop = 2.0 * factor * 961.0 * 6.10**2 * 30.5 / 0.0508
    assert pressure_drop == pytest.approx(133.2e3, abs=50.0)


def test_printed_turbulent_pressure_drop_does_not_follow_from_its_factor() -> None:
    """The printed 134.4 kPa needs f = 0.00313; f = 0.0032 gives 137.4, so digits were swapped."""
    with_printed_factor = 2.0 * 0.0032 * 961.0 * 6.10**2 * 30.5 / 0.0508
    assert with_printed_factor == pytest.approx(137.4e3, abs=50.0)
    assert abs(with_printed_factor / 134.4e3 - 1.0) > 0.02
