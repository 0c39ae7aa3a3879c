"""Taylor vortices around a rotating bob."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import KEYS, example
from hypothesis import given, settings
from hypothesis import strategies as st
from plain_words import check_caution

import rheo
from rheo.geometry import make_geometry
from rheo.geometry.concentric_cylinders import standard_dimensions
from rheo.geometry.taylor import critical_reynolds, critical_speed, taylor_cautions, taylor_ratio

# Linear stability theory for the inner cylinder rotating alone, Re = ωR_i(R_o - R_i)/ν, as
# tabulated by R. C. DiPrima, P. M. Eagles & B. S. Ng, Phys. Fluids 27 (1984) 2403 (from memory).
LINEAR_STABILITY = {0.5: 68.19, 0.9: 131.6, 0.95: 185.0, 0.975: 260.9}


@pytest.mark.parametrize(("radius_ratio", "reynolds"), sorted(LINEAR_STABILITY.items()))
def test_against_linear_stability(radius_ratio: float, reynolds: float) -> None:
    assert float(critical_reynolds(radius_ratio)) == pytest.approx(reynolds, rel=0.035)


def test_narrow_gap_is_taylors() -> None:
    """G. I. Taylor, Phil. Trans. A 223 (1923) 289: Ta = Re² d/R_i = 1708 (41.3²)."""
    gap = 1e-5
    radius_ratio = 1.0 / (1.0 + gap)
    taylor_number = float(critical_reynolds(radius_ratio)) ** 2 * gap
    assert taylor_number == pytest.approx(1708.0, rel=0.003)


CUP = make_geometry("concentric-cylinders", **standard_dimensions(0.0125))


def test_water_in_the_standard_cylinders() -> None:
    water = rheo.model("newtonian", viscosity=1e-3)
    speed = float(critical_speed(CUP, water, 998.0))
    gap = 0.0847 * 0.0125
    expected = float(critical_reynolds(1.0 / 1.0847)) * 1e-3 / (998.0 * 0.0125 * gap)
    assert speed == pytest.approx(expected, rel=1e-12)
    assert 90.0 < speed * 30.0 / np.pi < 130.0  # about 100 rpm, common practice


@pytest.mark.parametrize("key", KEYS)
def test_at_the_critical_speed_the_ratio_is_one(key: str) -> None:
    model = example(key)
    speed = critical_speed(CUP, model, np.array([900.0, 1500.0]))
    rate, stress = CUP.sheared(model, speed)
    ratio = taylor_ratio(CUP, stress / rate, speed, np.array([900.0, 1500.0]))
    np.testing.assert_allclose(ratio, 1.0, rtol=1e-10)


@settings(deadline=None, max_examples=40, derandomize=True)
@given(radius_ratio=st.floats(0.2, 0.999), viscosity=st.floats(1e-3, 10.0))
def test_thicker_is_more_stable(radius_ratio: float, viscosity: float) -> None:
    cup = make_geometry(
        "concentric-cylinders", inner_radius=0.02, outer_radius=0.02 / radius_ratio, length=0.06
    )
    thin, thick = (
        critical_speed(cup, rheo.model("newtonian", viscosity=factor * viscosity), 1000.0)
        for factor in (1.0, 3.0)
    )
    assert float(thick / thin) == pytest.approx(3.0, rel=1e-9)


def test_cautions_name_the_readings() -> None:
    speeds = np.array([1.0, 5.0, 20.0, 40.0])
    (caution,) = taylor_cautions(CUP, 1e-3, speeds, 998.0)
    assert caution.code == "taylor-vortices"
    assert caution.points == (2, 3)
    assert "2 of 4 readings" in caution.sentence
    check_caution(caution, CUP.record.name)
    assert taylor_cautions(CUP, 1.0, speeds, 998.0) == ()


def test_an_outer_cylinder_that_turns_is_stable() -> None:
    mud = make_geometry("six-speed")
    water = rheo.model("newtonian", viscosity=1e-3)
    assert np.isposinf(critical_speed(mud, water, 998.0))
    assert taylor_cautions(mud, 1e-3, [60.0], 998.0) == ()
    np.testing.assert_array_equal(taylor_ratio(mud, 1e-3, [60.0, 70.0], 998.0), [0.0, 0.0])


@pytest.mark.parametrize("place", [CUP, make_geometry("six-speed")])
def test_arrays_of_fluids_speeds_and_cups_broadcast(place: rheo.Geometry) -> None:
    draws = rheo.model("power-law", consistency=[[4.0], [5.0]], flow_index=0.5)
    assert critical_speed(place, draws, 1000.0).shape == (2, 1)
    assert critical_speed(place, draws, [900.0, 1000.0, 1100.0]).shape == (2, 3)
    many = place.replaced(length=[0.03, 0.04, 0.05])
    assert critical_speed(many, example("newtonian"), 1000.0).shape == (3,)
    assert critical_speed(many, draws, 1000.0).shape == (2, 3)
    assert taylor_ratio(place, [[1e-3], [2e-3]], [1.0, 2.0, 3.0], 1000.0).shape == (2, 3)
    assert taylor_ratio(place, 1e-3, [1.0, 2.0, 3.0], 1000.0).shape == (3,)
    assert taylor_ratio(place, [1e-3, 2e-3], 1.0, 1000.0).shape == (2,)
    assert np.shape(taylor_ratio(many, 1e-3, [[1.0], [2.0]], 1000.0))[:1] == (2,)


def test_outer_rotor_of_many_lengths_has_one_ratio_each() -> None:
    mud = make_geometry("six-speed", length=[0.03, 0.038])
    assert taylor_ratio(mud, 1e-3, 60.0, 998.0).shape == (2,)
