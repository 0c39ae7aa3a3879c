"""Points of a flow curve from readings without a model."""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import KEYS, example
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo import InputError
from rheo.geometry import geometry_records, make_geometry
from rheo.geometry.smoothing import smooth_log

PLACES = {
    "concentric-cylinders": {"inner_radius": 0.01, "outer_radius": 0.02, "length": 0.05},
    "cone-plate": {"radius": 0.025, "angle": 0.035},
    "parallel-plate": {"radius": 0.025, "gap": 0.001},
    "six-speed": {},
    "slot": {"half_gap": 0.002, "width": 0.1, "length": 0.5},
    "spindle": {"stress_factor": 3e4},
    "tube": {"diameter": 0.004, "length": 0.4, "entrance_diameters": 2.0, "slip_coefficient": 3e-6},
    "vane": {"diameter": 0.02, "height": 0.04},
}
FORMS = [(key, form) for key, record in geometry_records().items() for form in record.inverse_forms]


@pytest.mark.parametrize(("key", "form"), FORMS)
def test_power_laws_are_found_exactly(key: str, form: str) -> None:
    model = rheo.model("power-law", consistency=5.0, flow_index=0.37)
    geometry = make_geometry(key, **PLACES[key])
    setting = geometry.setting_for_rate(model, np.geomspace(0.3, 300.0, 9))
    points = geometry.flow_points(setting, geometry.predict(model, setting), form)
    np.testing.assert_allclose(points.rate, np.geomspace(0.3, 300.0, 9), rtol=1e-9)
    np.testing.assert_allclose(points.stress, model.stress(points.rate), rtol=1e-9)
    if key != "cone-plate":
        np.testing.assert_allclose(points.local_index, 0.37, rtol=1e-9)
        assert points.degree == 1
        assert np.all(points.local_index_error < 1e-9)


@pytest.mark.parametrize("key", [key for key in PLACES if key != "cone-plate"])
@pytest.mark.parametrize("model_key", ["herschel-bulkley", "casson", "sisko", "ellis", "carreau"])
def test_curved_flow_curves_are_found_closely(key: str, model_key: str) -> None:
    """Stress within 0.5 % at the found rate, where the nominal points are off by far more."""
    model = example(model_key)
    geometry = make_geometry(key, **PLACES[key])
    rates = np.geomspace(1.0, 300.0, 20)
    setting = geometry.setting_for_rate(model, rates)
    reading = geometry.predict(model, setting)
    points = geometry.flow_points(setting, reading)
    # Without a model nothing is known below the slowest reading, which counts in a narrow gap.
    inside = slice(4, -1) if key in {"six-speed", "concentric-cylinders"} else slice(1, -1)
    error = np.abs(model.stress(points.rate) / points.stress - 1.0)[inside]
    nominal_rate, nominal_stress = geometry.nominal(setting, reading)
    nominal_error = np.abs(model.stress(nominal_rate) / nominal_stress - 1.0)[inside]
    assert np.max(error) < 0.005
    assert np.max(error) < 0.2 * np.max(nominal_error)


@pytest.mark.parametrize("ratio", [1.02, 1.0847, 1.5, 2.0, 4.0])
def test_the_exact_form_is_closer_than_the_power_law_form(ratio: float) -> None:
    model = example("sisko")
    geometry = make_geometry(
        "concentric-cylinders", inner_radius=0.01, outer_radius=0.01 * ratio, length=0.05
    )
    rates = np.geomspace(0.1, 1000.0, 30)
    setting = geometry.setting_for_rate(model, rates)
    reading = geometry.predict(model, setting)
    error = {
        form: np.max(np.abs(geometry.flow_points(setting, reading, form).rate / rates - 1.0))
        for form in ("exact", "power-law")
    }
    assert error["exact"] < 1e-3
    assert error["exact"] < 0.5 * error["power-law"]


def test_scatter_gives_an_error_that_covers_the_truth() -> None:
    model = rheo.model("power-law", consistency=5.0, flow_index=0.5)
    geometry = make_geometry("tube", diameter=0.004, length=0.4)
    setting = geometry.setting_for_rate(model, np.geomspace(1.0, 300.0, 15))
    exact = geometry.predict(model, setting)
    inside = 0
    for seed in range(60):
        noise = np.random.default_rng(seed).normal(0.0, 0.02, exact.shape)
        points = geometry.flow_points(setting, exact * np.exp(noise))
        off = np.abs(points.local_index - 0.5) / points.local_index_error
        inside += int(off[7] < 2.0)
        assert 1 <= points.degree <= 4
    assert 45 <= inside <= 60


@settings(deadline=None, max_examples=60, derandomize=True)
@given(
    slope=st.floats(0.1, 2.0),
    bend=st.floats(0.0, 0.05),
    count=st.integers(6, 30),
)
def test_smooth_log_recovers_a_parabola(slope: float, bend: float, count: int) -> None:
    x = np.linspace(-2.0, 5.0, count)
    curve = smooth_log(x, 1.0 + slope * x + 0.5 * bend * (x + 2.0) ** 2)
    np.testing.assert_allclose(curve.slope(x), slope + bend * (x + 2.0), rtol=1e-7)
    np.testing.assert_allclose(curve.inverse(curve.value(x)), x, atol=1e-9)
    # Outside, the end tangents.
    end = slope + bend * 7.0
    assert float(curve.slope(9.0)) == pytest.approx(end, rel=1e-7)
    assert float(curve.curvature(9.0)) == 0.0
    gained = float(curve.value(9.0) - curve.value(5.0))
    assert gained == pytest.approx(4.0 * end, rel=1e-7)
    assert float(curve.inverse(curve.value(9.0))) == pytest.approx(9.0, rel=1e-9)


def test_too_few_readings() -> None:
    tube = make_geometry("tube", diameter=0.004, length=0.4)
    with pytest.raises(InputError, match="there are 2 different settings; a local slope needs 3"):
        tube.flow_points([1e-6, 1e-6, 2e-6], [100.0, 100.0, 150.0])
    cone = make_geometry("cone-plate", radius=0.02, angle=0.02)
    assert cone.flow_points([1.0], [1e-3]).rate.shape == (1,)


def test_readings_that_do_not_rise_or_are_not_above_0() -> None:
    tube = make_geometry("tube", diameter=0.004, length=0.4)
    with pytest.raises(InputError, match="the readings do not rise with the setting"):
        tube.flow_points([1e-6, 2e-6, 3e-6, 4e-6], [400.0, 300.0, 200.0, 100.0])
    with pytest.raises(
        InputError, match=r"reading 2 gives a nominal shear rate of .* and a stress"
    ):
        tube.flow_points([1e-6, 2e-6, 3e-6], [100.0, -3.0, 200.0])


def test_cylinders_of_different_gaps_are_refused() -> None:
    mixed = make_geometry(
        "concentric-cylinders", inner_radius=0.01, outer_radius=[0.011, 0.012, 0.02], length=0.05
    )
    with pytest.raises(InputError, match="the readings come from cylinders of different gaps"):
        mixed.flow_points([1.0, 2.0, 3.0], [1e-3, 2e-3, 3e-3])


@pytest.mark.parametrize("key", KEYS)
def test_tubes_of_several_diameters_lie_on_one_curve(key: str) -> None:
    model = example(key)
    diameter = np.repeat([0.002, 0.004, 0.008], 12)
    geometry = make_geometry("tube", diameter=diameter, length=0.3)
    rates = np.tile(np.geomspace(3.0, 300.0, 12), 3)
    setting = geometry.setting_for_rate(model, rates)
    points = geometry.flow_points(setting, geometry.predict(model, setting))
    error = np.abs(model.stress(points.rate) / points.stress - 1.0)
    assert np.max(error) < 2e-3


def test_points_that_need_no_slope_say_so() -> None:
    """A cone and plate shears at one rate everywhere: nothing is smoothed."""
    cone = make_geometry("cone-plate", radius=0.025, angle=0.035)
    for setting, reading in (([1.0, 2.0, 3.0], 1e-3), (1.0, [1e-3, 2e-3, 3e-3])):
        points = cone.flow_points(setting, reading)
        assert points.degree == 0
        for values in (points.rate, points.stress):
            assert values.shape == (3,)
            assert np.all(values > 0)
        for values in (points.local_index, points.local_index_error):
            assert values.shape == (3,)
            assert values.dtype == float
            assert np.all(np.isnan(values))


@pytest.mark.parametrize("wrong", [0.0, -1.0, np.nan, np.inf])
def test_the_first_reading_without_a_logarithm_is_named(wrong: float) -> None:
    plates = make_geometry("parallel-plate", radius=0.025, gap=0.001)
    good = np.array([1.0, 2.0, 3.0, 4.0])
    bad = np.array([1.0, 2.0, wrong, wrong])
    for setting, reading in ((bad, good), (good, bad)):
        with pytest.raises(InputError) as caught:
            plates.flow_points(setting, reading)
        assert str(caught.value).startswith("reading 3 gives a nominal shear rate of ")
        assert str(caught.value).endswith("both must be above 0 for a local slope")
