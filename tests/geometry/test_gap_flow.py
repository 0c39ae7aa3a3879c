"""Flow between cylinders: 30 digits, closed forms, the narrowest and the widest gap."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from flow_curves import KEYS, any_model, example, powers_of_ten, precise_stress
from hypothesis import given, settings

import rheo
from rheo import Model
from rheo.geometry import gap_flow


def _precise_speed(model: Model, bob_rate: float, log_ratio: float) -> float:
    """Return ω = ½[γ̇ ln τ - ∫ln τ dγ̇] between cup and bob, the integral by parts, in mpmath."""
    stress = precise_stress(model)
    with mpmath.workdps(40):
        top = stress(mpmath.mpf(bob_rate))
        cup = top * mpmath.exp(-2 * mpmath.mpf(log_ratio))
        at_rest = mpmath.mpf(float(model.yield_stress))
        low = mpmath.mpf(0)
        if cup > at_rest:
            start = mpmath.log(mpmath.mpf(float(model.rate(float(cup)))))
            low = mpmath.exp(
                mpmath.findroot(lambda y: mpmath.log(stress(mpmath.exp(y)) / cup), start)
            )
        else:
            cup = at_rest
        octaves = max(1, min(90, int(mpmath.log(bob_rate / max(low, 1e-27 * bob_rate), 2)) + 1))
        split = [
            low,
            *(mpmath.mpf(bob_rate) * mpmath.mpf(2) ** -j for j in range(octaves - 1, -1, -1)),
        ]
        # ln(τ/τ_cup) for ln τ: the bracket then has no term at the cup, resting or not.
        inner = mpmath.quad(lambda rate: mpmath.log(stress(rate) / cup), split)
        return float((bob_rate * mpmath.log(top / cup) - inner) / 2)


@pytest.mark.parametrize("key", [key for key in KEYS if key != "ellis"])
@pytest.mark.parametrize("log_ratio", [1e-7, 1e-3, 0.0813, 0.7])
def test_against_forty_digits(key: str, log_ratio: float) -> None:
    model = example(key)
    expected = _precise_speed(model, 23.0, log_ratio)
    found = float(gap_flow.angular_speed(model, np.asarray(23.0), np.asarray(log_ratio)))
    assert found == pytest.approx(expected, rel=1e-10)


@pytest.mark.parametrize("rate", [0.01, 1.0, 300.0])
@pytest.mark.parametrize("log_ratio", [1e-6, 0.0813, 0.7, 3.0])
def test_ellis_closed_form(rate: float, log_ratio: float) -> None:
    """∫γ̇ d ln τ of an Ellis fluid: [τ/η0 + (τ/τ½)^(α-1) τ/(αη0)] between cup and bob."""
    zero, half, index = 8.0, 12.0, 2.2
    model = rheo.model("ellis", zero_shear_viscosity=zero, half_stress=half, stress_index=index)
    top = float(model.stress(rate))
    linear = -top / zero * np.expm1(-2.0 * log_ratio)
    power = -top / zero * (top / half) ** (index - 1) / index * np.expm1(-2.0 * index * log_ratio)
    found = float(gap_flow.angular_speed(model, np.asarray(rate), np.asarray(log_ratio)))
    assert found == pytest.approx(0.5 * (linear + power), rel=1e-11)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(
    consistency=powers_of_ten(-2, 2),
    index=powers_of_ten(-1.5, 0.6),
    log_ratio=powers_of_ten(-8, 1),
    speed=powers_of_ten(-4, 3),
)
def test_power_law_closed_form(
    consistency: float, index: float, log_ratio: float, speed: float
) -> None:
    model = rheo.model("power-law", consistency=consistency, flow_index=index)
    expected = gap_flow.power_law_bob_rate(
        np.asarray(speed), np.asarray(log_ratio), np.asarray(index)
    )
    found = gap_flow.bob_rate(model, np.asarray(speed), np.asarray(log_ratio))
    assert float(found) == pytest.approx(float(expected), rel=1e-11)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(
    yield_stress=powers_of_ten(-1, 2),
    viscosity=powers_of_ten(-2, 1),
    log_ratio=powers_of_ten(-3, 0.5),
    rate=powers_of_ten(-3, 3),
)
def test_reiner_and_riwlin(
    yield_stress: float, viscosity: float, log_ratio: float, rate: float
) -> None:
    """Bingham between cylinders (Reiner & Riwlin 1927), the gap wholly or partly in flow."""
    model = rheo.model("bingham", yield_stress=yield_stress, plastic_viscosity=viscosity)
    excess = viscosity * rate / yield_stress  # bob stress over yield stress, less 1
    depth = min(2.0 * log_ratio, np.log1p(excess))
    # ½∫(τ - τ_y)/η d ln τ; the bracket cancels near yield, so the test keeps away from there.
    bracket = (1.0 + excess) * -np.expm1(-depth) - depth
    expected = 0.5 * yield_stress / viscosity * bracket
    found = float(gap_flow.angular_speed(model, np.asarray(rate), np.asarray(log_ratio)))
    lost = 1e-15 * (1.0 + excess) * depth / bracket
    assert found == pytest.approx(expected, rel=1e-10 + 4.0 * lost)


@settings(deadline=None, max_examples=100, derandomize=True)
@given(model=any_model(), speed=powers_of_ten(-4, 3), log_ratio=powers_of_ten(-6, 1))
def test_the_speed_is_found_again(model: Model, speed: float, log_ratio: float) -> None:
    rate = gap_flow.bob_rate(model, np.asarray(speed), np.asarray(log_ratio))
    back = gap_flow.angular_speed(model, rate, np.asarray(log_ratio))
    assert float(back) == pytest.approx(speed, rel=1e-12)


@settings(deadline=None, max_examples=100, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-2, 3))
def test_narrow_gap(model: Model, rate: float) -> None:
    """In a gap that is narrow also beside the yield stress, ω tends to γ̇ ln(R_o/R_i)."""
    flowing = 1.0 - float(model.yield_stress / model.stress(rate))
    slope = float(model.log_slope(rate))
    log_ratio = 1e-7 * min(flowing, slope)
    speed = float(gap_flow.angular_speed(model, np.asarray(rate), np.asarray(log_ratio)))
    assert speed / (rate * log_ratio) == pytest.approx(1.0, rel=1e-6)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-2, 3))
def test_a_vessel_without_end_is_the_limit_of_wide_ones(model: Model, rate: float) -> None:
    endless = float(gap_flow.angular_speed(model, np.asarray(rate), np.asarray(np.inf)))
    wide = float(gap_flow.angular_speed(model, np.asarray(rate), np.asarray(14.0)))
    assert endless == pytest.approx(wide, rel=1e-7)
    assert endless >= wide * (1.0 - 1e-12)


def test_the_rate_is_smooth_where_the_cup_begins_to_flow() -> None:
    model = example("herschel-bulkley")
    log_ratio = np.asarray(0.2)
    onset = float(model.rate(model.yield_stress * np.exp(0.4)))
    rates = onset * np.exp(np.linspace(-1e-3, 1e-3, 41))
    speed = gap_flow.angular_speed(model, rates, log_ratio)
    slope = np.diff(np.log(speed)) / np.diff(np.log(rates))
    assert np.all(np.abs(np.diff(slope)) < 2e-5 * slope[:-1])


def test_large_arrays_are_taken_in_blocks() -> None:
    rng = np.random.default_rng(7)
    model = rheo.model(
        "herschel-bulkley",
        yield_stress=rng.uniform(1.0, 30.0, (300, 1)),
        consistency=rng.uniform(1.0, 9.0, (300, 1)),
        flow_index=rng.uniform(0.2, 0.9, (300, 1)),
    )
    speeds = np.geomspace(0.01, 100.0, 40)
    rate = gap_flow.bob_rate(model, speeds, np.asarray(0.7))
    assert rate.shape == (300, 40)
    one = gap_flow.bob_rate(model.at((123, 0)), speeds, np.asarray(0.7))
    np.testing.assert_allclose(rate[123], one, rtol=1e-12)


def test_gaps_of_every_shape_broadcast() -> None:
    model = example("casson")
    ratios = np.array([1e-4, 0.08, 0.7])
    speed = gap_flow.angular_speed(model, np.asarray(20.0), ratios)
    assert speed.shape == (3,)
    table = gap_flow.angular_speed(model, np.array([[20.0], [30.0]]), ratios)
    assert table.shape == (2, 3)
    np.testing.assert_allclose(table[0], speed, rtol=1e-14)
    for index, ratio in enumerate(ratios):
        alone = gap_flow.angular_speed(model, np.asarray(20.0), np.asarray(ratio))
        assert float(alone) == pytest.approx(speed[index], rel=1e-14)
    draws = rheo.model("casson", yield_stress=[[8.0], [9.0]], casson_viscosity=1.0)
    assert gap_flow.angular_speed(draws, np.asarray(20.0), ratios).shape == (2, 3)
    assert gap_flow.bob_rate(draws, np.asarray(2.0), ratios).shape == (2, 3)
