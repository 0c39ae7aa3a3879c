"""Conversion factors that standards print."""

from __future__ import annotations

import numpy as np
import pytest

import rheo
from rheo.geometry import make_geometry, six_speed, vane
from rheo.geometry.concentric_cylinders import standard_dimensions

RPM = np.pi / 30.0


@pytest.mark.parametrize("radius", [0.0125, 0.02])
def test_iso_3219_factors(radius: float) -> None:
    """ISO 3219: τ = 0.0446 M/R_i³ and γ̇ = 1.291 n (n in 1/min) for the standard geometry."""
    geometry = make_geometry("concentric-cylinders", **standard_dimensions(radius))
    rate, stress = geometry.nominal(RPM, 1.0)
    assert float(rate) == pytest.approx(1.291, abs=0.0005)
    assert float(stress) * radius**3 == pytest.approx(0.0446, abs=0.00005)


def test_at_the_bob_the_values_are_eight_percent_higher_than_iso_3219() -> None:
    geometry = make_geometry("concentric-cylinders", **standard_dimensions(0.0125))
    representative, bob = geometry.nominal(1.0, 1.0), geometry.nominal(1.0, 1.0, "bob")
    assert float(bob[0] / representative[0]) == pytest.approx(1.081, abs=0.0005)
    assert float(bob[1] / representative[1]) == pytest.approx(1.081, abs=0.0005)


def test_api_13b_1_rates_and_dial() -> None:
    """API RP 13B-1: 1.7023 1/s per rpm (so 1022 1/s at 600 rpm), 0.511 Pa per degree."""
    geometry = make_geometry("six-speed")
    rate, stress = geometry.nominal(RPM, six_speed.torque_from_dial(1.0))
    assert float(rate) == pytest.approx(1.7023, abs=0.00005)
    assert float(stress) == pytest.approx(0.511, rel=1e-14)
    rates, _ = geometry.nominal(np.asarray(six_speed.SPEEDS), 0.0)
    # 5.11, 10.2, 170, 340, 511 and 1022 1/s: common practice in mud reports.
    np.testing.assert_allclose(rates, [5.11, 10.2, 170.0, 340.0, 511.0, 1022.0], rtol=0.003)
    torque = six_speed.torque_from_dial([10.0, 300.0])
    np.testing.assert_allclose(six_speed.dial_from_torque(torque), [10.0, 300.0], rtol=1e-14)


def test_dial_with_other_ends_gives_the_same_stress() -> None:
    geometry = make_geometry("six-speed", end_factor=1.064)
    torque = six_speed.torque_from_dial(100.0, end_factor=1.064)
    assert float(geometry.nominal(1.0, torque)[1]) == pytest.approx(51.1, rel=1e-14)
    dial = six_speed.dial_from_torque(torque, end_factor=1.064)
    assert float(dial) == pytest.approx(100.0, rel=1e-14)
    # A bob of other radius and length takes another torque for the same stress.
    torque = six_speed.torque_from_dial(100.0, 0.01, 0.05)
    assert float(torque) == pytest.approx(51.1 * 2.0 * np.pi * 0.01**2 * 0.05, rel=1e-14)
    assert float(six_speed.dial_from_torque(torque, 0.01, 0.05)) == pytest.approx(100.0, rel=1e-14)


def test_plastic_viscosity_from_two_dials() -> None:
    """PV = θ600 - θ300 in cP, the field's rule, comes from 0.511 Pa and 1.7023 1/s a rpm."""
    viscosity = (0.511 * 20.0) / (1.7023 * 300.0)
    assert viscosity == pytest.approx(20e-3, rel=1e-3)
    # In this 6 % gap the whole of a Bingham mud flows; the reading at 600 less that at 300 is
    # the plastic viscosity, whatever the yield stress.
    mud = rheo.model("bingham", yield_stress=8.0, plastic_viscosity=viscosity)
    geometry = make_geometry("six-speed")
    dial = six_speed.dial_from_torque(geometry.predict(mud, np.array([300.0, 600.0]) * RPM))
    assert float(np.diff(dial)[0]) == pytest.approx(20.0, rel=1e-3)


def test_vane_torque_factor() -> None:
    """Nguyen & Boger 1983: for H = 2D, M = (7π/6) D³ τ_y (3.67 D³ τ_y in wide use)."""
    assert float(vane.peak_torque(1.0, 0.05, 0.1)) == pytest.approx(7 * np.pi / 6 * 0.05**3)
    assert float(vane.peak_torque(1.0, 1.0, 2.0)) == pytest.approx(3.67, abs=0.005)
    torque = vane.peak_torque([10.0, 200.0], 0.02, 0.04)
    np.testing.assert_allclose(vane.static_yield_stress(torque, 0.02, 0.04), [10.0, 200.0])
    geometry = make_geometry("vane", diameter=0.02, height=0.04)
    at_rest = rheo.model("herschel-bulkley", yield_stress=200.0, consistency=9.0, flow_index=0.4)
    assert float(geometry.predict(at_rest, 0.0)) == pytest.approx(float(torque[1]), rel=1e-14)


def test_cone_angle() -> None:
    """ω/θ and ω/tan θ differ by 0.16 % at 4°."""
    angle = np.radians(4.0)
    geometry = make_geometry("cone-plate", radius=0.025, angle=angle)
    rate, stress = geometry.nominal(1.0, 1.0)
    assert float(rate * np.tan(angle)) - 1.0 == pytest.approx(0.0016, abs=0.00005)
    assert float(stress) == pytest.approx(3.0 / (2.0 * np.pi * 0.025**3), rel=1e-14)


def test_newtonian_walls() -> None:
    """Poiseuille: ΔP = 8ηLQ/(πR⁴); slot: ΔP = 12ηLQ/(w(2h)³); plates: M = πηωR⁴/(2h)."""
    oil = rheo.model("newtonian", viscosity=0.3)
    tube = make_geometry("tube", diameter=0.02, length=1.5)
    assert float(tube.predict(oil, 1e-4)) == pytest.approx(
        8 * 0.3 * 1.5 * 1e-4 / (np.pi * 0.01**4), rel=1e-14
    )
    slot = make_geometry("slot", half_gap=0.002, width=0.1, length=1.5)
    assert float(slot.predict(oil, 1e-4)) == pytest.approx(
        12 * 0.3 * 1.5 * 1e-4 / (0.1 * 0.004**3), rel=1e-14
    )
    plates = make_geometry("parallel-plate", radius=0.02, gap=0.001)
    assert float(plates.predict(oil, 3.0)) == pytest.approx(
        np.pi * 0.3 * 3.0 * 0.02**4 / 0.002, rel=1e-13
    )
    cylinders = make_geometry(
        "concentric-cylinders", inner_radius=0.01, outer_radius=0.03, length=0.05
    )
    # Margules: M = 4πηLω R_i²R_o²/(R_o² - R_i²).
    assert float(cylinders.predict(oil, 3.0)) == pytest.approx(
        4 * np.pi * 0.3 * 0.05 * 3.0 * (0.01 * 0.03) ** 2 / (0.03**2 - 0.01**2), rel=1e-13
    )
