"""Whole numbers, object columns, lists: models take them all; and give arrays of one shape."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import EXAMPLES, KEYS, example
from plain_words import odd_words

import rheo
from rheo import InputError, Model
from rheo.models.common import flow_index_grid, reciprocal_rate_grid
from rheo.models.inverse import rate_from_stress
from rheo.models.monotone import LARGEST_RATE, solve_log
from rheo.models.scaled import scaled

METHODS = ("stress", "rate", "viscosity", "log_slope", "jacobian")


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("kind", [int, object])
def test_any_column_of_numbers_will_do(key: str, method: str, kind: type) -> None:
    call = getattr(example(key), method)
    column = np.array([20.0, 40.0, 80.0])
    expected = call(column)
    for found in (call(column.astype(kind)), call(column.astype(kind).tolist())):
        assert found.dtype == float
        np.testing.assert_array_equal(found, expected)


@pytest.mark.parametrize("key", KEYS)
def test_parameters_of_any_kind(key: str) -> None:
    draws = {name: [value, 0.99 * value] for name, value in EXAMPLES[key].items()}
    plain = rheo.model(key, **draws)
    objects = {name: np.array(value, dtype=object) for name, value in draws.items()}
    mixed = rheo.model(key, **objects)
    assert all(value.dtype == float for value in mixed.parameters.values())
    np.testing.assert_array_equal(mixed.stress(3.0), plain.stress(3.0))
    times = scaled(plain, np.array([1, 2], dtype=object))
    np.testing.assert_allclose(times.stress(3.0), plain.stress(3.0) * [1, 2], rtol=1e-12)


@pytest.mark.parametrize("key", KEYS)
def test_one_array_among_the_parameters_gives_every_result_its_shape(key: str) -> None:
    """Whichever parameter it is: jacobian, slope, rate and yield stress too."""
    for name, value in EXAMPLES[key].items():
        varied = rheo.model(key, **{**EXAMPLES[key], name: [value, 0.99 * value, 0.98 * value]})
        assert varied.shape == (3,)
        assert varied.yield_stress.shape == (3,)
        for method in METHODS:
            found = getattr(varied, method)(30.0)
            width = (len(EXAMPLES[key]),) if method == "jacobian" else ()
            assert np.shape(found) == (3, *width), (name, method)
            one = getattr(rheo.model(key, **{**EXAMPLES[key], name: 0.98 * value}), method)(30.0)
            np.testing.assert_allclose(found[2], one, rtol=1e-12)
        tall = varied.with_new_axis()
        assert tall.shape == (3, 1) or len(EXAMPLES[key]) == 1
        assert tall.stress([20.0, 30.0]).shape == (3, 2)


@pytest.mark.parametrize("key", KEYS)
def test_how_a_model_shows_itself(key: str) -> None:
    model = example(key)
    assert repr(model).startswith(f"model({key!r}, ")
    for name, value in EXAMPLES[key].items():
        assert f"{name}={value:.6g}" in repr(model)
    first = next(iter(EXAMPLES[key]))
    many = rheo.model(key, **{**EXAMPLES[key], first: np.full((2, 3), EXAMPLES[key][first])})
    assert f"{first}=array(2, 3)" in repr(many)
    assert model.key == key


def test_two_parameters_show_with_a_comma() -> None:
    model = rheo.model("power-law", consistency=1234567.0, flow_index=0.5)
    assert repr(model) == "model('power-law', consistency=1.23457e+06, flow_index=0.5)"


@pytest.mark.parametrize("key", KEYS)
def test_refusals_name_the_model(key: str) -> None:
    place = f"model {key}"
    first = next(iter(EXAMPLES[key]))
    allowed = ", ".join(EXAMPLES[key])
    rest = {name: value for name, value in EXAMPLES[key].items() if name != first}
    for given, sentence in (
        ({**EXAMPLES[key], "q": 1.0}, f"unknown parameter 'q'; it takes {allowed}"),
        (rest, f"parameter '{first}' is missing; it takes {allowed}"),
        ({**EXAMPLES[key], first: "thick"}, f"{first} is 'thick'; it must be a number"),
        ({**EXAMPLES[key], first: None}, f"{first} is nan; it must lie between"),
        ({**EXAMPLES[key], first: [EXAMPLES[key][first], -5.0]}, f"{first} is -5; it must lie"),
    ):
        with pytest.raises(InputError) as caught:
            rheo.model(key, **given)
        assert caught.value.place == place
        assert caught.value.sentence.startswith(sentence)
        assert odd_words(caught.value.sentence) == []


@pytest.mark.parametrize("key", ["carreau", "carreau-yasuda"])
def test_a_curve_that_turns_negative_is_refused_in_full(key: str) -> None:
    given = {**EXAMPLES[key], "flow_index": 1.5, "infinite_shear_viscosity": 50.0}
    with pytest.raises(InputError) as caught:
        rheo.model(key, **given)
    assert caught.value.sentence == (
        "with a flow_index above 1 the infinite_shear_viscosity must not exceed the "
        "zero_shear_viscosity, or the stress turns negative"
    )
    level = {**given, "infinite_shear_viscosity": EXAMPLES[key]["zero_shear_viscosity"]}
    assert float(rheo.model(key, **level).viscosity(7.0)) == pytest.approx(
        EXAMPLES[key]["zero_shear_viscosity"], rel=1e-12
    )
    # Up to an index of 1 the order of the plateaus is free.
    assert np.all(rheo.model(key, **{**given, "flow_index": 1.0}).stress([0.1, 9.0]) > 0)


def _power(index: float):
    def relation(_: Model, rate: np.ndarray, *extra: np.ndarray):
        factor = extra[0] if extra else 1.0
        return factor * rate**index, np.full(rate.shape, index)

    return relation


ANY = rheo.model("newtonian", viscosity=1.0)


def test_the_search_over_its_whole_range() -> None:
    """Rates from 1e-250 to 1e19 1/s, from any start, to the last digits."""
    wanted = np.array([1e-250, 1e-100, 1e-9, 1.0, 1e5, 1e19])
    for start in (None, np.asarray(1e-200), np.asarray(1.0), np.asarray(1e18)):
        found = solve_log(_power(1.0), ANY, wanted, start)
        np.testing.assert_allclose(found, wanted, rtol=1e-12)
        found = solve_log(_power(0.5), ANY, np.sqrt(wanted), start)
        np.testing.assert_allclose(found, wanted, rtol=1e-12)


def test_the_search_ends_at_the_largest_rate() -> None:
    found = solve_log(_power(1.0), ANY, np.array([1.0, 1e25, np.nan]))
    assert found[0] == pytest.approx(1.0, rel=1e-14)
    assert found[1] == pytest.approx(LARGEST_RATE, rel=1e-12)
    assert np.isnan(found[2])


def test_the_search_broadcasts_all_it_is_given() -> None:
    draws = rheo.model("newtonian", viscosity=[[1.0], [2.0]])
    factor = np.array([1.0, 4.0, 9.0])
    found = solve_log(_power(2.0), draws, np.asarray(36.0), extra=(factor,))
    assert found.shape == (2, 3)
    np.testing.assert_allclose(found, np.broadcast_to([6.0, 3.0, 2.0], (2, 3)), rtol=1e-13)
    found = solve_log(_power(2.0), ANY, np.asarray(36.0), start=np.ones((4, 1)))
    assert found.shape == (4, 1)


@pytest.mark.parametrize("misleading", [1e-3, 0.2, 3.0])
def test_a_slope_that_misleads_is_bisected(misleading: float) -> None:
    """A step in the relation, and a slope that is wrong everywhere."""

    def relation(_: Model, rate: np.ndarray):
        step = np.where(rate < 3.0, 0.1 * rate, 10.0 * rate)
        return step, np.full(rate.shape, misleading)

    found = solve_log(relation, ANY, np.array([0.01, 1.0, 50.0]))
    np.testing.assert_allclose(found, [0.1, 3.0, 5.0], rtol=1e-7)


@pytest.mark.parametrize("key", KEYS)
def test_the_rate_at_a_stress_whatever_the_start(key: str) -> None:
    model = example(key)
    rates = np.geomspace(1e-3, 1e4, 8)
    stress = model.stress(rates)
    for start in (None, np.full(8, 1e-6), np.full(8, 1e6), rates):
        found = rate_from_stress(model, stress, start)
        assert np.all(np.abs(found / rates - 1) <= 1e-11 + 1e-14 / model.log_slope(rates))
    still = rate_from_stress(model, np.array([0.0, np.nan, float(stress[3])]))
    assert still[0] == 0.0
    assert np.isnan(still[1])
    assert still[2] == pytest.approx(rates[3], rel=1e-11)


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("method", METHODS)
@pytest.mark.parametrize("value", [-1.0, np.inf, [3.0, -2.0]])
def test_every_method_refuses_by_the_name_of_its_argument(
    key: str, method: str, value: float
) -> None:
    what = "shear stress" if method == "rate" else "shear rate"
    shown = "inf" if np.isinf(np.max(value)) else f"{np.min(value):g}"
    with pytest.raises(InputError) as caught:
        getattr(example(key), method)(value)
    assert str(caught.value) == f"{what} is {shown}; it must be a finite number of 0 or more"


@pytest.mark.parametrize("key", [key for key in KEYS if rheo.model_records()[key].moment_ratio])
@pytest.mark.parametrize("k", [0, 1, 2])
def test_closed_moment_ratios_have_the_shape_of_all_arguments(key: str, k: int) -> None:
    record = rheo.model_records()[key]
    rates = np.array([0.1, 3.0, 90.0])
    plain = record.moment_ratio(k, rates, *example(key))
    assert np.shape(plain) == (3,)
    for name, value in EXAMPLES[key].items():
        draws = rheo.model(key, **{**EXAMPLES[key], name: [[value], [0.99 * value]]})
        table = record.moment_ratio(k, rates, *draws)
        assert np.shape(table) == (2, 3)
        np.testing.assert_allclose(table[0], plain, rtol=1e-13)
        assert np.shape(record.moment_ratio(k, np.asarray(3.0), *draws)) == (2, 1)


@pytest.mark.parametrize("key", KEYS)
def test_what_the_parameters_do_at_rest(key: str) -> None:
    """Only what makes the yield stress moves it: Casson's and Bingham's as they stand, K γ̇_0^n."""
    expected = {
        "bingham": [1.0, 0.0],
        "herschel-bulkley": [1.0, 0.0, 0.0],
        "casson": [1.0, 0.0],
        # K = 3, γ̇_0 = 4, n = 0.5: 2, 3·0.5/2, 3·2·ln 4.
        "robertson-stiff": [2.0, 0.75, 6.0 * np.log(4.0)],
    }.get(key, [0.0] * len(EXAMPLES[key]))
    np.testing.assert_allclose(example(key).jacobian(0.0), expected, atol=1e-13)


def test_the_grids_of_the_search_cover_what_data_can_tell_apart() -> None:
    index = flow_index_grid()
    assert (index[0], index[-1]) == (pytest.approx(0.01), pytest.approx(2.0))
    assert flow_index_grid(7, 1.0)[-1] == pytest.approx(1.0)
    assert flow_index_grid(7).size == 7
    assert np.all(np.diff(index) > 0)
    # Denser where indices are small.
    assert np.all(np.diff(index, 2) > 0)
    times = reciprocal_rate_grid(np.array([0.0, 0.5, 200.0]))
    assert times[0] == pytest.approx(1.0 / (200.0 * 1e3))
    assert times[-1] == pytest.approx(1e3 / 0.5)
    assert reciprocal_rate_grid(np.array([1.0]), 5, 10.0).tolist() == pytest.approx(
        [0.1, 0.1**0.5, 1.0, 10.0**0.5, 10.0]
    )
