"""What models accept and how they refuse, for every registered model."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import EXAMPLES, KEYS, example

import rheo
from rheo import InputError
from rheo.errors import without_exponents


@pytest.mark.parametrize("key", KEYS)
def test_scalars_and_arrays_agree(key: str) -> None:
    model = example(key)
    rates = np.array([[0.1, 1.0, 10.0], [20.0, 200.0, 2000.0]])
    stress = model.stress(rates)
    assert stress.shape == rates.shape
    assert model.rate(stress).shape == rates.shape
    assert model.log_slope(rates).shape == rates.shape
    assert model.jacobian(rates).shape == (*rates.shape, len(EXAMPLES[key]))
    for index in np.ndindex(rates.shape):
        assert float(model.stress(rates[index])) == pytest.approx(stress[index], rel=1e-14)


@pytest.mark.parametrize("key", KEYS)
def test_arrays_of_parameters_broadcast(key: str) -> None:
    draws = {
        name: value * np.linspace(0.9, 1.0, 4)[:, np.newaxis]
        for name, value in EXAMPLES[key].items()
    }
    many = rheo.model(key, **draws)
    rates = np.geomspace(0.1, 100.0, 5)
    assert many.shape == (4, 1)
    assert many.stress(rates).shape == (4, 5)
    assert many.rate(many.stress(rates)).shape == (4, 5)
    assert many.jacobian(rates).shape == (4, 5, len(draws))
    assert many.yield_stress.shape == (4, 1)
    for row in range(4):
        one = rheo.model(key, **{name: float(value[row, 0]) for name, value in draws.items()})
        np.testing.assert_allclose(many.stress(rates)[row], one.stress(rates), rtol=1e-13)
        np.testing.assert_allclose(many.jacobian(rates)[row], one.jacobian(rates), rtol=1e-11)
        np.testing.assert_allclose(many.at((row, 0)).stress(rates), one.stress(rates), rtol=1e-13)


@pytest.mark.parametrize("key", KEYS)
def test_rest(key: str) -> None:
    model = example(key)
    at_rest = float(model.yield_stress)
    assert float(model.stress(0.0)) == pytest.approx(at_rest, rel=1e-14)
    assert float(model.rate(0.0)) == 0.0
    assert np.all(np.isfinite(model.jacobian(0.0)))
    with pytest.raises(InputError, match="shear rate is 0; a viscosity needs"):
        model.viscosity(0.0)


@pytest.mark.parametrize("key", KEYS)
def test_not_a_number_stays_so(key: str) -> None:
    model = example(key)
    values = np.array([1.0, np.nan, 3.0])
    for result in (model.stress(values), model.rate(values + 50.0)):
        np.testing.assert_array_equal(np.isnan(result), [False, True, False])


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("value", [-1.0, np.inf, [1.0, -2.0], [np.nan, np.inf]])
def test_impossible_rates_and_stresses_are_refused(key: str, value: float) -> None:
    worst = "inf" if np.any(np.isinf(value)) else f"{np.min(value):g}"
    for call, what in (("stress", "shear rate"), ("rate", "shear stress")):
        with pytest.raises(InputError, match=f"{what} is {worst}; it must be a finite number"):
            getattr(example(key), call)(value)


@pytest.mark.parametrize("key", KEYS)
def test_parameter_outside_its_range(key: str) -> None:
    for parameter in rheo.model_records()[key].parameters:
        for value in (parameter.lower - 1.0, 2.0 * parameter.upper, np.nan):
            with pytest.raises(InputError) as caught:
                rheo.model(key, **{**EXAMPLES[key], parameter.key: value})
            sentence = str(caught.value)
            found = without_exponents(f"model {key}: {parameter.key} is {value:g}; ")
            assert sentence.startswith(found)
            allowed = f"between {parameter.lower:g} and {parameter.upper:g}"
            assert without_exponents(allowed) in sentence


@pytest.mark.parametrize("key", KEYS)
def test_ends_of_the_ranges_are_flow_curves(key: str) -> None:
    rates = np.geomspace(1e-3, 1e4, 15)
    for parameter in rheo.model_records()[key].parameters:
        for value in (parameter.lower, parameter.upper):
            given = {**EXAMPLES[key], parameter.key: value}
            if value == parameter.upper and "zero_shear_viscosity" in given:
                # A plateau curve keeps its order.
                given["zero_shear_viscosity"] = max(value, given["zero_shear_viscosity"])
            model = rheo.model(key, **given)
            stress = model.stress(rates)
            assert np.all(np.isfinite(stress)), parameter.key
            assert np.all(np.diff(stress) >= 0), parameter.key
            assert not np.any(np.isnan(model.jacobian(rates))), parameter.key


def test_one_parameter_of_many_draws_outside() -> None:
    with pytest.raises(InputError, match=r"flow_index is -0\.2; it must lie between"):
        rheo.model("power-law", consistency=1.0, flow_index=[0.3, -0.2, 0.5])


def test_unknown_model() -> None:
    with pytest.raises(InputError, match=r"unknown model 'hershel-bulkley' \(did you mean 'her"):
        rheo.model("hershel-bulkley")
    with pytest.raises(InputError, match="unknown model 'x'; there are newtonian, "):
        rheo.model("x")


def test_unknown_missing_and_wordy_parameters() -> None:
    with pytest.raises(InputError, match="unknown parameter 'n'; it takes consistency, flow_in"):
        rheo.model("power-law", consistency=1.0, n=0.5)
    with pytest.raises(InputError, match="parameter 'flow_index' is missing; it takes consist"):
        rheo.model("power-law", consistency=1.0)
    with pytest.raises(InputError, match="consistency is 'thick'; it must be a number"):
        rheo.model("power-law", consistency="thick", flow_index=0.5)


@pytest.mark.parametrize("key", ["carreau", "carreau-yasuda"])
def test_a_plateau_curve_that_would_turn_negative(key: str) -> None:
    given = {**EXAMPLES[key], "flow_index": 1.5, "infinite_shear_viscosity": 50.0}
    with pytest.raises(InputError, match="infinite_shear_viscosity must not exceed"):
        rheo.model(key, **given)


@pytest.mark.parametrize("key", KEYS)
def test_records_are_complete(key: str) -> None:
    record = rheo.model_records()[key]
    for text in (record.key, record.name, record.equation, record.source, record.validity):
        assert text.strip()
    assert "γ̇" in record.equation or "τ" in record.equation
    for parameter in record.parameters:
        assert parameter.symbol
        assert parameter.unit
        assert parameter.description
        assert parameter.lower < parameter.upper
    assert record.has_yield_stress == (float(example(key).yield_stress) > 0)


@pytest.mark.parametrize("key", KEYS)
def test_the_split_for_the_global_fit_gives_the_same_curve(key: str) -> None:
    record = rheo.model_records()[key]
    rates = np.geomspace(0.01, 1000.0, 7)
    grid = record.separable.grid(rates)
    assert len(grid) == len(record.separable.shape)
    shape = tuple(float(axis[axis.size // 2]) for axis in grid)
    columns = record.separable.basis(rates, *shape)
    sizes = tuple(0.7 + index for index in range(len(columns)))[::-1]
    stress = sum(size * column for size, column in zip(sizes, columns, strict=True))
    values = record.separable.to_parameters(shape, sizes)
    direct = record.stress(rates, *(np.asarray(value) for value in values))
    np.testing.assert_allclose(direct, stress, rtol=1e-12)


def test_stress_above_every_rate() -> None:
    # With no second plateau and an index of 0 the stress tends to η_0/λ: nothing goes beyond.
    flat = rheo.model(
        "carreau", **{**EXAMPLES["carreau"], "infinite_shear_viscosity": 0.0, "flow_index": 0.0}
    )
    top = 40.0 / 3.0
    assert float(flat.rate(0.999 * top)) > 0
    assert np.isposinf(flat.rate(1.001 * top))
    assert float(flat.stress(1e9)) == pytest.approx(top, rel=1e-9)


@pytest.mark.parametrize("key", KEYS)
def test_how_a_model_is_shown(key: str) -> None:
    shown = repr(example(key))
    assert shown.startswith(f"model('{key}', ")
    assert all(f"{name}={value:.6g}" in shown for name, value in EXAMPLES[key].items())
    many = rheo.model("newtonian", viscosity=[1.0, 2.0])
    assert repr(many) == "model('newtonian', viscosity=array(2,))"
