"""A flow curve that follows a state: two slopes, one for what is viscous, one for what yields."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import EXAMPLES, KEYS, example

import rheo
from rheo.models.record import Parameter
from rheo.models.state_curve import ScaledCurve, ScalingLaw

LAW = ScalingLaw(
    state="solids",
    unit="-",
    reference=0.3,
    exponent=lambda state, reference: state - reference,
    slope=Parameter("slope", "b", "-", "slope of the viscosity", -50.0, 50.0),
    yield_slope=Parameter("yield_slope", "b_y", "-", "slope of the yield stress", -50.0, 50.0),
    equation="value at the reference * exp(b (x - x_ref))",
    source="invented",
)
# What each parameter follows: the thickness of the liquid, the stress at yield, or nothing.
FOLLOWS = {
    "viscosity": "slope",
    "consistency": "slope",
    "plastic_viscosity": "slope",
    "casson_viscosity": "slope",
    "zero_shear_viscosity": "slope",
    "infinite_shear_viscosity": "slope",
    "time_constant": "slope",
    "yield_stress": "yield_slope",
    "half_stress": "yield_slope",
    "rate_offset": "yield_slope",
    "flow_index": None,
    "rate_index": None,
    "yasuda_exponent": None,
    "stress_index": None,
}
SLOPES = {"slope": 4.0, "yield_slope": 9.0}


def _curve(key: str) -> ScaledCurve:
    record = rheo.model_records()[key]
    slopes = [SLOPES[one.key] for one in LAW.extra(record)]
    values = [EXAMPLES[key][name] for name in record.parameter_keys]
    return ScaledCurve(record, LAW, tuple(np.asarray(value) for value in (*values, *slopes)))


@pytest.mark.parametrize("key", KEYS)
def test_every_parameter_follows_its_slope(key: str) -> None:
    curve = _curve(key)
    wanted = {FOLLOWS[name] for name in EXAMPLES[key]} - {None}
    assert {one.key for one in LAW.extra(curve.record)} == wanted
    order = [one.key for one in LAW.extra(curve.record)]
    assert order == sorted(order)  # "slope" before "yield_slope"
    for name, index in zip(EXAMPLES[key], LAW.slope_of(curve.record), strict=True):
        assert (None if index is None else order[index]) == FOLLOWS[name]
    for state in (0.3, 0.25, 0.4):
        found = curve(state)
        assert found.key == key
        for name, value in EXAMPLES[key].items():
            slope = SLOPES.get(FOLLOWS[name] or "", 0.0)
            expected = value * np.exp(slope * (state - 0.3))
            assert float(found.parameters[name]) == pytest.approx(expected, rel=1e-13)


def test_states_broadcast_against_draws() -> None:
    record = rheo.model_records()["herschel-bulkley"]
    values = ([10.0, 20.0], [1.0, 2.0], [0.5, 0.6], [4.0, 5.0], [9.0, 8.0])
    curve = ScaledCurve(record, LAW, tuple(np.asarray(value) for value in values))
    found = curve([[0.2], [0.3], [0.4]])
    assert found.shape == (3, 2)
    np.testing.assert_allclose(found.parameters["yield_stress"][1], [10.0, 20.0])
    np.testing.assert_allclose(
        found.parameters["consistency"][2], [np.exp(0.4), 2.0 * np.exp(0.5)], rtol=1e-13
    )
    second = curve.map(lambda value: value[1])
    assert second(0.2).shape == ()
    np.testing.assert_allclose(
        float(second(0.2).parameters["yield_stress"]), found.parameters["yield_stress"][0, 1]
    )
    mixed = curve(np.array([0.2, 0.3], dtype=object))
    assert all(value.dtype == float for value in mixed.parameters.values())


def test_parameters_end_at_the_ends_of_their_ranges() -> None:
    """Far from the reference the law would leave what a flow curve may be."""
    curve = _curve("herschel-bulkley")
    thick, thin = curve(30.0), curve(-30.0)
    for parameter in curve.record.parameters:
        if FOLLOWS[parameter.key]:
            assert float(thick.parameters[parameter.key]) == parameter.upper
            assert float(thin.parameters[parameter.key]) == pytest.approx(
                parameter.lower, abs=1e-100
            )


@pytest.mark.parametrize("key", KEYS)
def test_thicker_at_every_rate_and_state(key: str) -> None:
    curve = _curve(key)
    rates = np.geomspace(1e-2, 1e3, 9)
    for state in (0.3, 0.35):
        np.testing.assert_allclose(
            curve.thicker(1.7)(state).stress(rates), 1.7 * curve(state).stress(rates), rtol=1e-10
        )
    assert curve.thicker(1.7).values[len(EXAMPLES[key]) :] == curve.values[len(EXAMPLES[key]) :]
    assert curve.thicker(1.7).law is LAW


def test_models_of_one_slope_have_one() -> None:
    oil = example("newtonian").record
    assert [one.key for one in LAW.extra(oil)] == ["slope"]
    assert LAW.slope_of(oil) == (0,)
    assert LAW.slope_of(example("power-law").record) == (0, None)
    assert LAW.slope_of(example("bingham").record) == (1, 0)
    np.testing.assert_allclose(LAW.x([0.3, 0.5]), [0.0, 0.2])
    assert LAW.x(np.array([0, 1], dtype=object)).dtype == float
