"""Formulas of every registered model: derivatives, limits, order of the curve."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import EXAMPLES, KEYS, any_model, example, powers_of_ten
from hypothesis import given, settings

import rheo
from rheo import Model

RATES = np.geomspace(1e-3, 1e4, 29)


def test_every_model_has_an_example() -> None:
    assert set(EXAMPLES) == set(KEYS)
    assert len(KEYS) == 11


@settings(deadline=None, max_examples=150, derandomize=True)
@given(model=any_model())
def test_jacobian_against_central_differences(model: Model) -> None:
    analytic = model.jacobian(RATES)
    assert analytic.shape == (RATES.size, len(model.record.parameters))
    stress = model.stress(RATES)
    for column, (key, value) in enumerate(model.parameters.items()):
        step = 1e-5 * value
        beside = [
            rheo.model(model.key, **{**model.parameters, key: value + sign * step}).stress(RATES)
            if _allowed(model, key, float(value + sign * step))
            else None
            for sign in (-1.0, 1.0)
        ]
        if beside[0] is None or beside[1] is None:
            continue
        numeric = (beside[1] - beside[0]) / (2.0 * step)
        # Rounding of the stress leaves 1e-16/1e-5 of it in the difference; the rest is h².
        allowed = 1e-7 * np.abs(analytic[:, column]) + 3e-10 * stress / value
        assert np.all(np.abs(numeric - analytic[:, column]) <= allowed), key


def _allowed(model: Model, key: str, value: float) -> bool:
    parameter = next(entry for entry in model.record.parameters if entry.key == key)
    return parameter.lower <= value <= parameter.upper


@settings(deadline=None, max_examples=150, derandomize=True)
@given(model=any_model())
def test_log_slope_against_central_differences(model: Model) -> None:
    step = 1e-4
    above, below = model.stress(RATES * np.exp(step)), model.stress(RATES * np.exp(-step))
    numeric = np.log(above / below) / (2.0 * step)
    np.testing.assert_allclose(model.log_slope(RATES), numeric, rtol=1e-6, atol=1e-11)


@settings(deadline=None, max_examples=200, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-6, 7))
def test_rate_gives_stress_gives_rate(model: Model, rate: float) -> None:
    stress = model.stress(rate)
    back = float(model.rate(stress))
    # A stress holds the rate only as finely as the curve is steep: one rounding of the stress
    # moves the rate by 1/slope of it.
    slope = float(model.log_slope(rate))
    assert back == pytest.approx(rate, rel=1e-12 + 1e-15 / slope)
    again = float(model.stress(back)) if back > 0 else float(model.yield_stress)
    assert again == pytest.approx(float(stress), rel=1e-12)


@pytest.mark.parametrize("key", KEYS)
def test_round_trip_over_thirteen_decades(key: str) -> None:
    model = example(key)
    rate = np.geomspace(1e-6, 1e7, 131)
    back = model.rate(model.stress(rate))
    allowed = 1e-12 + 1e-15 / model.log_slope(rate)
    assert np.all(np.abs(back / rate - 1.0) <= allowed)


@settings(deadline=None, max_examples=100, derandomize=True)
@given(model=any_model())
def test_the_curve_rises(model: Model) -> None:
    stress = model.stress(np.concatenate([[0.0], np.geomspace(1e-6, 1e7, 400)]))
    assert np.all(np.diff(stress) >= 0)
    assert stress[0] == pytest.approx(float(model.yield_stress), rel=1e-12)
    assert np.all(model.log_slope(RATES) > 0)


@settings(deadline=None, max_examples=50, derandomize=True)
@given(model=any_model())
def test_nothing_flows_at_or_below_the_yield_stress(model: Model) -> None:
    at_rest = float(model.yield_stress)
    assert float(model.rate(0.999 * at_rest)) == 0.0
    assert float(model.rate(at_rest * 1.01 + 1e-3)) > 0.0


LIMITS = [
    ("power-law", {"consistency": 2.0, "flow_index": 1.0}, "newtonian", {"viscosity": 2.0}),
    (
        "bingham",
        {"yield_stress": 0.0, "plastic_viscosity": 2.0},
        "newtonian",
        {"viscosity": 2.0},
    ),
    (
        "casson",
        {"yield_stress": 0.0, "casson_viscosity": 2.0},
        "newtonian",
        {"viscosity": 2.0},
    ),
    (
        "herschel-bulkley",
        {"yield_stress": 0.0, "consistency": 2.0, "flow_index": 0.4},
        "power-law",
        {"consistency": 2.0, "flow_index": 0.4},
    ),
    (
        "herschel-bulkley",
        {"yield_stress": 7.0, "consistency": 2.0, "flow_index": 1.0},
        "bingham",
        {"yield_stress": 7.0, "plastic_viscosity": 2.0},
    ),
    (
        "sisko",
        {"infinite_shear_viscosity": 0.0, "consistency": 2.0, "flow_index": 0.4},
        "power-law",
        {"consistency": 2.0, "flow_index": 0.4},
    ),
    (
        "robertson-stiff",
        {"consistency": 2.0, "rate_offset": 0.0, "flow_index": 0.4},
        "power-law",
        {"consistency": 2.0, "flow_index": 0.4},
    ),
    (
        "robertson-stiff",
        {"consistency": 2.0, "rate_offset": 3.5, "flow_index": 1.0},
        "bingham",
        {"yield_stress": 7.0, "plastic_viscosity": 2.0},
    ),
    (
        "carreau-yasuda",
        {**EXAMPLES["carreau"], "yasuda_exponent": 2.0},
        "carreau",
        EXAMPLES["carreau"],
    ),
    (
        "carreau",
        {**EXAMPLES["carreau"], "flow_index": 1.0},
        "newtonian",
        {"viscosity": 40.0},
    ),
    # With m = 1 - n and a = m the Carreau-Yasuda curve is the Cross curve.
    (
        "carreau-yasuda",
        {
            "zero_shear_viscosity": 30.0,
            "infinite_shear_viscosity": 0.01,
            "time_constant": 1.5,
            "flow_index": 0.2,
            "yasuda_exponent": 0.8,
        },
        "cross",
        EXAMPLES["cross"],
    ),
    # Ellis with an index of 1 halves the zero-shear viscosity.
    (
        "ellis",
        {"zero_shear_viscosity": 4.0, "half_stress": 12.0, "stress_index": 1.0},
        "newtonian",
        {"viscosity": 2.0},
    ),
]


@pytest.mark.parametrize(
    ("key", "parameters", "simpler", "its_parameters"),
    LIMITS,
    ids=[f"{row[0]}-{row[2]}" for row in LIMITS],
)
def test_limits_to_simpler_models(
    key: str, parameters: dict[str, float], simpler: str, its_parameters: dict[str, float]
) -> None:
    general, special = rheo.model(key, **parameters), rheo.model(simpler, **its_parameters)
    np.testing.assert_allclose(general.stress(RATES), special.stress(RATES), rtol=1e-13)
    np.testing.assert_allclose(general.log_slope(RATES), special.log_slope(RATES), rtol=1e-13)
    stress = special.stress(RATES)
    np.testing.assert_allclose(general.rate(stress), special.rate(stress), rtol=1e-12)


def test_defining_points() -> None:
    ellis = example("ellis")
    # At the half stress the viscosity is half the zero-shear viscosity: its definition.
    assert float(ellis.viscosity(ellis.rate(12.0))) == pytest.approx(4.0, rel=1e-14)
    cross = example("cross")
    middle = 0.5 * (30.0 + 0.01)
    assert float(cross.viscosity(1.0 / 1.5)) == pytest.approx(middle, rel=1e-14)
    casson = example("casson")
    assert float(casson.stress(8.0)) == pytest.approx(32.0, rel=1e-14)


@pytest.mark.parametrize("key", ["carreau", "carreau-yasuda", "cross"])
def test_plateaus(key: str) -> None:
    model = example(key)
    low = float(model.parameters["zero_shear_viscosity"])
    high = float(model.parameters["infinite_shear_viscosity"])
    assert float(model.viscosity(1e-12)) == pytest.approx(low, rel=1e-6)
    assert float(model.viscosity(1e12)) == pytest.approx(high, rel=1e-3)
