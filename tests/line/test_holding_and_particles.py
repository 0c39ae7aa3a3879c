"""Holding tube, particles held at rest, deposition velocity."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

import rheo
from rheo.line import (
    Product,
    Solids,
    deposition_velocity,
    settling_cautions,
    suspended_particle,
    water,
)
from rheo.line.safety import FOOD_SAFETY

SAUCE = Product(rheo.model("power-law", consistency=4.0, flow_index=0.5), 1050.0, name="sauce")


@pytest.mark.parametrize("n", [0.3, 0.5, 1.0])
def test_the_fastest_particle_of_a_power_law_product(n: float) -> None:
    """u_max/V = (3n + 1)/(n + 1), from the laminar velocity profile."""
    product = replace(SAUCE, model=rheo.model("power-law", consistency=4.0, flow_index=n))
    found = rheo.holding_tube(product, 0.05, 5e-4, 30.0)
    velocity = 4 * 5e-4 / (np.pi * 0.05**2)
    ratio = (3 * n + 1) / (n + 1)
    assert float(found.velocity_ratio) == pytest.approx(ratio, rel=1e-10)
    assert float(found.length) == pytest.approx(ratio * velocity * 30.0, rel=1e-10)
    assert float(found.length_by_mean_velocity) == pytest.approx(velocity * 30.0, rel=1e-12)
    assert found.safety == FOOD_SAFETY
    assert "too short" in found.sentence


def test_turbulent_flow_takes_a_quarter_more_than_the_mean() -> None:
    found = rheo.holding_tube(water(350.0), 0.05, 5e-3, 15.0)
    assert float(found.velocity_ratio) == 1.25
    assert {caution.code for caution in found.cautions} == {"holding-tube-not-laminar"}


def test_never_less_in_transition_than_laminar_or_turbulent() -> None:
    thin = replace(SAUCE, model=rheo.model("newtonian", viscosity=0.01))
    velocity = 2500 * 0.01 / (1050.0 * 0.05)
    found = rheo.holding_tube(thin, 0.05, velocity * np.pi / 4 * 0.05**2, 15.0)
    assert float(found.velocity_ratio) >= 1.25


def test_the_band_of_the_product_gives_a_band_of_lengths() -> None:
    index = np.linspace(0.4, 0.6, 101)
    product = replace(SAUCE, draws=(rheo.model("power-law", consistency=4.0, flow_index=index),))
    found = rheo.holding_tube(product, 0.05, 5e-4, 30.0)
    assert found.length_interval is not None
    ends = np.percentile((3 * index + 1) / (index + 1), [2.5, 97.5])
    by_hand = ends * 4 * 5e-4 / (np.pi * 0.05**2) * 30.0
    np.testing.assert_allclose(found.length_interval, by_hand, rtol=1e-9)


def test_a_hold_time_is_above_zero() -> None:
    with pytest.raises(rheo.InputError, match=r"hold_time \[s\] is 0; it must be above 0"):
        rheo.holding_tube(SAUCE, 0.05, 5e-4, 0.0)


def test_particle_held_at_the_limit_of_beris() -> None:
    """Beris et al. 1985: 3τ_y/(gΔρd) = 0.143 at the limit, so τ_y = 0.0477 gΔρd."""
    weight = 9.80665 * 400.0 * 5e-3
    limit = 0.143 / 3.0 * weight
    held = suspended_particle([0.999 * limit, 1.001 * limit], 5e-3, 1500.0, 1100.0)
    assert held.held.tolist() == [False, True]
    np.testing.assert_allclose(held.yield_number, [0.143 * 0.999, 0.143 * 1.001], rtol=1e-12)
    np.testing.assert_allclose(held.largest_held, [5e-3 * 0.999, 5e-3 * 1.001], rtol=1e-12)
    assert limit / weight == pytest.approx(0.048, abs=5e-4)


def test_a_floating_particle_counts_alike_and_a_neutral_one_stays() -> None:
    up = suspended_particle(5.0, 5e-3, 900.0, 1100.0)
    down = suspended_particle(5.0, 5e-3, 1300.0, 1100.0)
    assert float(up.yield_number) == pytest.approx(float(down.yield_number), rel=1e-12)
    neutral = suspended_particle(0.0, 5e-3, 1100.0, 1100.0)
    assert bool(neutral.held)
    assert float(neutral.largest_held) == np.inf


SAND = Solids(diameter=2e-4, density=2650.0, volume_fraction=0.1)


def test_deposition_velocity_of_sand_in_water() -> None:
    """0.2 mm sand at 10 % in a 100 mm pipe of water, the formula worked out by hand.

    √(gd(s - 1)) = √(9.80665 · 2e-4 · 1.65) = 0.056889; N = 0.1 · 1000 · 0.056889/1e-3 = 5688.9;
    0.1^0.1536 = 0.70210; 0.9^0.3564 = 0.96315; (0.1/2e-4)^0.378 = 10.476; N^0.09 = 2.1775.
    """
    found = float(deposition_velocity(SAND, 0.1))
    by_hand = 0.056889 * 1.85 * 0.70210 * 0.96315 * 10.476 * 2.1775
    # Five digits are carried by hand.
    assert found == pytest.approx(by_hand, rel=1e-4)
    # Common practice: fine sand in a 100 mm line needs 1 to 2 m/s.
    assert 1.0 < found < 2.0


def test_deposition_velocity_rises_with_the_pipe() -> None:
    found = deposition_velocity(SAND, np.array([0.05, 0.1, 0.2]))
    np.testing.assert_allclose(found[1:] / found[:-1], 2.0 ** (0.378 + 0.09), rtol=1e-12)
    light = replace(SAND, density=900.0)
    assert float(deposition_velocity(light, 0.1)) == 0.0


@pytest.mark.parametrize(
    ("stress", "velocity", "laminar", "codes"),
    [
        (0.01, 3.0, False, {"settles-at-rest"}),
        (0.01, 0.5, False, {"settles-at-rest", "below-deposition-velocity"}),
        (50.0, 0.5, False, set()),
        (50.0, 0.5, True, {"laminar-settling"}),
    ],
)
def test_a_slurry_that_settles(
    stress: float, velocity: float, laminar: bool, codes: set[str]
) -> None:
    found = settling_cautions(SAND, stress, 1165.0, 0.1, velocity, laminar, "run")
    assert {caution.code for caution in found} == codes
    assert {caution.place for caution in found} <= {"run"}


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"diameter": 0.0}, "solids: diameter is 0; it must be above 0"),
        ({"volume_fraction": 0.8}, "volume_fraction is 0.8; it must lie between 0 and 0.7"),
    ],
)
def test_solids_that_cannot_be(change: dict[str, float], sentence: str) -> None:
    with pytest.raises(rheo.InputError, match=sentence):
        replace(SAND, **change)
