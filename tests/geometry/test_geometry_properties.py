"""What holds for every geometry and every flow curve."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from flow_curves import KEYS, any_model, example, models_of, powers_of_ten
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo import Geometry, Model
from rheo.geometry import geometry_records, make_geometry

PLACES: dict[str, dict[str, Any]] = {
    "concentric-cylinders": {"inner_radius": 0.0125, "outer_radius": 0.0180, "length": 0.0375},
    "cone-plate": {"radius": 0.025, "angle": 0.035},
    "parallel-plate": {"radius": 0.025, "gap": 0.001},
    "six-speed": {},
    "slot": {"half_gap": 0.002, "width": 0.1, "length": 0.5},
    "spindle": {"rate_factor": 1.8, "stress_factor": 3e4},
    "tube": {"diameter": 0.02, "length": 1.5},
    "vane": {"diameter": 0.02, "height": 0.04},
}
SLIDING = {"diameter": 0.004, "length": 0.2, "entrance_diameters": 1.2, "slip_coefficient": 4e-5}


def any_geometry() -> st.SearchStrategy[Geometry]:
    plain = st.sampled_from([make_geometry(key, **given) for key, given in PLACES.items()])
    return plain | st.just(make_geometry("tube", **SLIDING))


def test_every_geometry_is_here() -> None:
    assert set(PLACES) == set(geometry_records())


@settings(deadline=None, max_examples=200, derandomize=True)
@given(geometry=any_geometry(), model=any_model(), rate=powers_of_ten(-3, 3.5))
def test_the_setting_for_a_rate_gives_the_rate(
    geometry: Geometry, model: Model, rate: float
) -> None:
    setting = geometry.setting_for_rate(model, rate)
    assert float(setting) > 0
    found, stress = geometry.sheared(model, setting)
    # A wall that mostly slides tells little of the rate: it is a small part of the flow.
    allowed = 1e-11
    if geometry.key == "tube" and float(geometry.dimensions["slip_coefficient"]) > 0:
        own = geometry.replaced(slip_coefficient=0.0).setting_for_rate(model, rate)
        allowed *= float(setting / own)
    assert float(found) == pytest.approx(rate, rel=allowed)
    assert float(stress) == pytest.approx(float(model.stress(found)), rel=1e-13)


@settings(deadline=None, max_examples=150, derandomize=True)
@given(geometry=any_geometry(), model=any_model())
def test_the_reading_rises_with_the_setting(geometry: Geometry, model: Model) -> None:
    low, high = geometry.setting_for_rate(model, np.array([0.01, 1000.0]))
    setting = np.concatenate([[0.0], np.geomspace(low, high, 25)])
    reading = geometry.predict(model, setting)
    rate, stress = geometry.sheared(model, setting)
    assert np.all(np.diff(rate) > 0)
    assert np.all(np.diff(stress) >= 0)
    assert np.all(np.diff(reading) >= 0)
    assert np.all(np.diff(reading)[np.diff(stress) > 1e-9 * stress[1:]] > 0)


@settings(deadline=None, max_examples=150, derandomize=True)
@given(geometry=any_geometry(), model=any_model(), rate=powers_of_ten(-2, 3))
def test_the_reading_comes_from_what_is_sheared(
    geometry: Geometry, model: Model, rate: float
) -> None:
    setting = geometry.setting_for_rate(model, rate)
    reading = geometry.predict(model, setting)
    rate_there, stress = geometry.sheared(model, setting)
    again = geometry.record.reading_at(model, rate_there, stress, *geometry.dimensions.values())
    assert float(reading) == pytest.approx(float(again), rel=1e-15)
    form = "bob" if "bob" in geometry.record.nominal_forms else None
    nominal_rate, nominal_stress = geometry.nominal(setting, reading, form)
    if geometry.key == "parallel-plate":
        assert float(nominal_rate) == pytest.approx(rate, rel=1e-13)
    else:
        # The Newtonian conversion is right in the stress everywhere but on parallel plates.
        assert float(nominal_stress) == pytest.approx(float(stress), rel=1e-13)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(geometry=any_geometry(), model=models_of("newtonian"), rate=powers_of_ten(-2, 3))
def test_newtonian_fluids_are_what_the_nominal_conversion_takes_them_for(
    geometry: Geometry, model: Model, rate: float
) -> None:
    setting = geometry.setting_for_rate(model, rate)
    reading = geometry.predict(model, setting)
    for form in geometry.record.nominal_forms:
        nominal_rate, nominal_stress = geometry.nominal(setting, reading, form)
        viscosity = float(nominal_stress / nominal_rate)
        assert viscosity == pytest.approx(float(model.parameters["viscosity"]), rel=1e-11)
    if geometry.key in {"tube", "slot", "vane", "spindle", "cone-plate", "parallel-plate"}:
        assert float(nominal_rate) == pytest.approx(rate, rel=1e-10)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-1, 3), narrow=powers_of_ten(-6, -4))
def test_narrow_cylinders_agree_with_nominal(model: Model, rate: float, narrow: float) -> None:
    """Both nominal forms tend to what is sheared, in a gap that is narrow beside the curve."""
    share = 1.0 - float(model.yield_stress / model.stress(rate))
    narrow *= min(share, float(model.log_slope(rate)))
    geometry = make_geometry(
        "concentric-cylinders", inner_radius=0.02, outer_radius=0.02 * (1.0 + narrow), length=0.06
    )
    setting = geometry.setting_for_rate(model, rate)
    reading = geometry.predict(model, setting)
    for form in geometry.record.nominal_forms:
        nominal_rate, nominal_stress = geometry.nominal(setting, reading, form)
        assert float(nominal_rate) == pytest.approx(rate, rel=5e-4)
        assert float(nominal_stress) == pytest.approx(float(model.stress(rate)), rel=5e-4)


@settings(deadline=None, max_examples=60, derandomize=True)
@given(geometry=any_geometry(), index=st.floats(0.1, 1.6), rate=powers_of_ten(-2, 3))
def test_power_law_closed_forms(geometry: Geometry, index: float, rate: float) -> None:
    model = rheo.model("power-law", consistency=3.0, flow_index=index)
    setting = geometry.setting_for_rate(model, rate)
    form = "bob" if "bob" in geometry.record.nominal_forms else None
    nominal_rate = float(geometry.nominal(setting, geometry.predict(model, setting), form)[0])
    n = index
    factor = {
        "tube": (3 * n + 1) / (4 * n),
        "slot": (2 * n + 1) / (3 * n),
        "spindle": 1 / n,
        "vane": 1 / n,
        "cone-plate": 1.0,
        "parallel-plate": 1.0,
    }.get(geometry.key)
    if factor is None:
        inner, outer = (geometry.dimensions[key] for key in ("inner_radius", "outer_radius"))
        kappa = float(inner / outer)
        factor = (1 - kappa**2) / (n * (1 - kappa ** (2 / n)))
    assert rate / nominal_rate == pytest.approx(factor, rel=1e-9)


@pytest.mark.parametrize("key", sorted(PLACES))
def test_draws_broadcast_against_settings(key: str) -> None:
    geometry = make_geometry(key, **PLACES[key])
    many = rheo.model(
        "herschel-bulkley",
        yield_stress=np.array([[0.0], [5.0], [20.0]]),
        consistency=4.0,
        flow_index=np.array([[0.9], [0.5], [0.3]]),
    )
    setting = geometry.setting_for_rate(_middle(), [0.1, 3.0, 90.0, 500.0])
    table = geometry.predict(many, setting)
    assert table.shape == (3, 4)
    assert geometry.setting_for_rate(many, np.ones(4)).shape == (3, 4)
    for row, (at_rest, index) in enumerate([(0.0, 0.9), (5.0, 0.5), (20.0, 0.3)]):
        one = rheo.model(
            "herschel-bulkley", yield_stress=at_rest, consistency=4.0, flow_index=index
        )
        np.testing.assert_allclose(table[row], geometry.predict(one, setting), rtol=1e-12)


def _middle() -> Model:
    return rheo.model("herschel-bulkley", yield_stress=5.0, consistency=4.0, flow_index=0.5)


@pytest.mark.parametrize("key", sorted(PLACES))
def test_a_dimension_for_every_reading(key: str) -> None:
    plain = make_geometry(key, **PLACES[key])
    first = plain.record.dimension_keys[0]
    sizes = float(plain.dimensions[first]) * np.array([1.0, 0.97, 0.94])
    varied = plain.replaced(**{first: sizes})
    assert varied.shape == (3,)
    model = _middle()
    setting = np.broadcast_to(plain.setting_for_rate(model, 20.0), (3,))
    table = varied.predict(model, setting)
    assert table.shape == (3,)
    for index, size in enumerate(sizes):
        one = plain.replaced(**{first: size})
        assert float(one.predict(model, setting[0])) == pytest.approx(table[index], rel=1e-12)
        picked = varied.map(lambda value, i=index: value[i] if value.ndim else value)
        assert float(picked.predict(model, setting[0])) == pytest.approx(table[index], rel=1e-12)


@pytest.mark.parametrize("key", sorted(PLACES))
@pytest.mark.parametrize("model_key", KEYS)
def test_rest_and_not_a_number(key: str, model_key: str) -> None:
    geometry, model = make_geometry(key, **PLACES[key]), example(model_key)
    tiny = float(geometry.setting_for_rate(model, 1e-9))
    setting = np.array([0.0, np.nan, tiny, 100.0 * tiny])
    reading = geometry.predict(model, setting)
    rate, stress = geometry.sheared(model, setting)
    for values in (reading, rate, stress):
        np.testing.assert_array_equal(np.isnan(values), [False, True, False, False])
    assert rate[0] == 0.0
    assert stress[0] == pytest.approx(float(model.yield_stress), rel=1e-14)
    # The reading at rest is the limit from above; by 1e-9 1/s little is left of the way there.
    assert reading[0] <= reading[2]
    if model.record.has_yield_stress:
        assert reading[0] == pytest.approx(reading[2], rel=1e-3)
    else:
        assert reading[0] == 0.0


def test_a_block_that_slides() -> None:
    """Below the flow at which slip alone brings the wall to yield, only the wall moves."""
    paste = rheo.model("herschel-bulkley", yield_stress=50.0, consistency=9.0, flow_index=0.4)
    geometry = make_geometry("tube", **SLIDING)
    radius, beta = 0.002, SLIDING["slip_coefficient"]
    onset = np.pi * radius**2 * beta * 50.0
    flow = onset * np.array([0.0, 0.5, 0.999999, 1.000001, 2.0])
    rate, stress = geometry.sheared(paste, flow)
    np.testing.assert_allclose(stress[:3], flow[:3] / (np.pi * radius**2 * beta), rtol=1e-12)
    np.testing.assert_array_equal(rate > 0, [False, False, False, True, True])
    assert stress[3] == pytest.approx(50.0, rel=1e-3)
    assert np.all(np.diff(geometry.predict(paste, flow)) > 0)


WHOLE_RANGE = [
    make_geometry("tube", diameter=0.02, length=1.0),
    make_geometry("tube", diameter=0.02, length=1.0, slip_coefficient=1e-5),
    make_geometry("slot", half_gap=0.002, width=0.1, length=1.0),
    make_geometry("parallel-plate", radius=0.02, gap=0.001),
    make_geometry("vane", diameter=0.02, height=0.04),
    make_geometry(
        "concentric-cylinders",
        inner_radius=0.01,
        outer_radius=0.01 + np.geomspace(1e-6, 0.1, 300),
        length=0.05,
    ),
]


@pytest.mark.parametrize("key", KEYS)
def test_parameters_over_their_whole_ranges(key: str) -> None:
    """No warning, no NaN, and the stress returned, for every curve that the bounds allow."""
    rng, count = np.random.default_rng(11), 300
    drawn = {}
    for parameter in rheo.model_records()[key].parameters:
        low, high = max(parameter.lower, 1e-6), min(parameter.upper, 1e6)
        drawn[parameter.key] = np.exp(rng.uniform(np.log(low), np.log(high), count))
        if parameter.lower == 0.0:
            drawn[parameter.key][::7] = 0.0
    if "zero_shear_viscosity" in drawn and "infinite_shear_viscosity" in drawn:
        ceiling = 0.5 * drawn["zero_shear_viscosity"]
        drawn["infinite_shear_viscosity"] = np.minimum(drawn["infinite_shear_viscosity"], ceiling)
    model = rheo.model(key, **drawn)
    rate = np.exp(rng.uniform(np.log(1e-4), np.log(1e5), count))
    for geometry in WHOLE_RANGE:
        setting = geometry.setting_for_rate(model, rate)
        _, stress = geometry.sheared(model, setting)
        np.testing.assert_allclose(stress, model.stress(rate), rtol=1e-9, err_msg=geometry.key)
        assert np.all(np.isfinite(geometry.predict(model, setting)))


def test_a_flow_that_a_levelling_curve_cannot_carry() -> None:
    """With an index of 0 and no second plateau the stress ends at η_0/λ and the flow is bounded."""
    flat = rheo.model(
        "carreau",
        zero_shear_viscosity=40.0,
        infinite_shear_viscosity=0.0,
        time_constant=2.0,
        flow_index=0.0,
    )
    tube = make_geometry("tube", diameter=0.02, length=1.0)
    bound = float(tube.setting_for_rate(flat, 1e12))
    rate, stress = tube.sheared(flat, [0.5 * bound, 1.5 * bound])
    np.testing.assert_array_equal(np.isinf(rate), [False, True])
    assert stress[1] == pytest.approx(20.0, rel=1e-9)
    assert np.all(np.isfinite(tube.predict(flat, [0.5 * bound, 1.5 * bound])))


@pytest.mark.parametrize("geometry", WHOLE_RANGE[:5], ids=lambda geometry: geometry.key)
def test_no_rate_has_no_setting_and_an_unknown_one_an_unknown(geometry: Geometry) -> None:
    model = example("herschel-bulkley")
    setting = geometry.setting_for_rate(model, [0.0, np.nan, 2.0])
    assert setting.dtype == float
    assert setting[0] == 0.0
    assert np.isnan(setting[1])
    alone = float(geometry.setting_for_rate(model, 2.0))
    assert setting[2] == pytest.approx(alone, rel=1e-14)
    assert float(geometry.setting_for_rate(model, 0.0)) == 0.0


@pytest.mark.parametrize("key", sorted(PLACES))
def test_whatever_is_an_array_gives_the_shape(key: str) -> None:
    """Dimensions alone, the setting alone, the model alone; in every method."""
    plain = make_geometry(key, **PLACES[key])
    last = plain.record.dimension_keys[-1]
    size = float(plain.dimensions[last])
    varied = plain.replaced(**{last: [size, 1.01 * size + 1e-9, 1.02 * size + 2e-9]})
    first = plain.record.dimension_keys[0]
    size = float(plain.dimensions[first])
    tall = plain.replaced(**{first: [[size], [0.99 * size]]})
    model = _middle()
    for geometry, shape in ((plain, ()), (varied, (3,)), (tall, (2, 1))):
        setting = geometry.setting_for_rate(model, 20.0)
        assert setting.shape == shape
        one = float(plain.setting_for_rate(model, 20.0))
        rate, stress = geometry.sheared(model, one)
        assert rate.shape == stress.shape == shape
        assert np.shape(geometry.predict(model, one)) == shape
        rate, stress = geometry.sheared(model, np.full(3, one))
        assert rate.shape == stress.shape == np.broadcast_shapes(shape, (3,))
