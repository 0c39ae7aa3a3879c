"""Many curves at once against `rheo.fit` one by one, and against themselves in other company."""

import numpy as np
import pytest
from flow_curves import EXAMPLES, KEYS

import rheo
from rheo.errors import FitError
from rheo.fitting.many_curves import fit_curves


def scattered(count, seed, points=(30, 30, 17, 45), scatter=0.02):
    random = np.random.default_rng(seed)
    curves = []
    for index in range(count):
        key = KEYS[index % len(KEYS)]
        model = rheo.model(key, **EXAMPLES[key])
        ends = 10.0 ** random.uniform(-2, 0.5), 10.0 ** random.uniform(1.3, 3.5)
        rate = np.geomspace(*ends, points[index % len(points)])
        noise = np.exp(scatter * random.standard_normal(rate.size))
        curves.append(rheo.FlowCurve(rate, model.stress(rate) * noise))
    return curves


@pytest.fixture(scope="module")
def curves():
    return scattered(22, seed=3)


@pytest.fixture(scope="module")
def together(curves):
    return fit_curves(curves)


def test_the_best_model_and_its_numbers_are_those_of_a_fit_alone(curves, together):
    for curve, found in zip(curves, together, strict=True):
        alone = rheo.fit(curve)
        assert found.best.key == alone.best.key
        assert found.best.aicc == pytest.approx(alone.best.aicc, abs=1e-7)
        assert found.best.rms_relative_error == pytest.approx(alone.best.rms_relative_error)
        for key, one in alone.best.parameters.items():
            mine = found.best.parameters[key]
            # A part of the standard error: what the readings themselves leave open.
            assert mine.value == pytest.approx(one.value, rel=1e-9, abs=1e-4 * one.stderr)
            assert mine.stderr == pytest.approx(one.stderr, rel=1e-3, nan_ok=True)


def test_no_model_is_far_from_its_minimum_where_readings_tell_its_parameters():
    # Casson to Cross fluids; in the scatter of a Newtonian one a model with five parameters has
    # many minima.
    for curve in scattered(12, seed=8, scatter=0.005)[1:]:
        (found,) = fit_curves([curve])
        alone = rheo.fit(curve)
        near = [key for key in alone.keys if alone[key].aicc < alone.best.aicc + 4.0]
        for key in near:
            assert found[key].aicc <= alone[key].aicc + 0.01, key


def test_company_changes_nothing_but_rounding(curves, together):
    backwards = fit_curves(curves[::-1])[::-1]
    for first, second in zip(together, backwards, strict=True):
        assert first.best.key == second.best.key
        assert first.best.aicc == pytest.approx(second.best.aicc, abs=1e-8)
        np.testing.assert_allclose(
            first.best.final.parameters, second.best.final.parameters, rtol=1e-7
        )


def test_exact_readings_give_the_parameters_back():
    rate = np.geomspace(0.1, 1000.0, 30)
    models = [rheo.model(key, **EXAMPLES[key]) for key in KEYS]
    together = fit_curves([rheo.FlowCurve(rate, model.stress(rate)) for model in models])
    for model, found in zip(models, together, strict=True):
        assert found[model.record.key].rms_relative_error < 1e-7
        assert found.best.rms_relative_error < 1e-7


def test_excluded_points_do_not_count():
    rate = np.geomspace(1.0, 100.0, 12)
    stress = 3.0 * rate**0.5
    stress[4] = 1e4
    curve = rheo.FlowCurve(rate, stress, excluded=np.arange(12) == 4)
    (found,) = fit_curves([curve], ["power-law"])
    assert found.best.parameters["consistency"].value == pytest.approx(3.0)
    assert found.best.points.tolist() == [0, 1, 2, 3, *range(5, 12)]


def test_what_cannot_be_fitted_says_why_and_stops_nothing():
    good = rheo.FlowCurve([1, 2, 4, 8, 16], [2, 4, 8, 16, 32])
    bad = rheo.FlowCurve([1, 2], [3, 4])
    none = rheo.FlowCurve([1.0], [2.0], excluded=[True])
    first, second, third = fit_curves([bad, good, none])
    assert isinstance(first, FitError)
    assert "at least 4" in str(first)
    assert second.best.key == "newtonian"
    assert isinstance(third, FitError)
    assert "excluded" in str(third)


@pytest.mark.parametrize("span", [1.0 + 1e-9, 1.01, 1.3, 1e12])
def test_narrow_and_wide_ranges(span):
    rate = np.geomspace(3.0, 3.0 * span, 20)
    (found,) = fit_curves([rheo.FlowCurve(rate, 2.0 * rate)])
    assert found.best.key == "newtonian"
    assert found.best.parameters["viscosity"].value == pytest.approx(2.0)


def test_an_unknown_model_or_weighting_is_refused():
    curve = rheo.FlowCurve([1, 2, 4], [1, 2, 4])
    with pytest.raises(rheo.InputError, match="syrup"):
        fit_curves([curve], ["syrup"])
    with pytest.raises(rheo.InputError, match="heavy"):
        fit_curves([curve], None, "heavy")
