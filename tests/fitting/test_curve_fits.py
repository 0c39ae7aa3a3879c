"""Fits of flow curves: independent values, intervals, words and errors."""

from __future__ import annotations

import json
from pathlib import Path

import lmfit
import numpy as np
import pytest
from flow_curves import example

import rheo
from rheo.errors import FitError, InputError

DATA = Path(__file__).parent.parent / "data" / "check_values.json"
ROWS = {row["id"]: row for row in json.loads(DATA.read_text("utf-8"))["cases"]}
EXACT = [key for key in ROWS if key.startswith("H-exact")]


def curve_of(row):
    return rheo.FlowCurve(row["inputs"]["shear_rate"], row["inputs"]["shear_stress"])


def noisy(key, low, high, count=24, noise=0.02, seed=1):
    rate = np.geomspace(low, high, count)
    random = np.random.default_rng(seed)
    stress = example(key).stress(rate) * (1.0 + noise * random.standard_normal(count))
    return rheo.FlowCurve(rate, stress)


def codes(cautions):
    return {caution.code for caution in cautions}


@pytest.mark.parametrize("name", EXACT)
@pytest.mark.parametrize("weighting", ["relative", "absolute"])
def test_rows_of_exact_curves(name, weighting):
    row = ROWS[name]
    fits = rheo.fit(curve_of(row), weighting=weighting)
    assert fits.best.key == row["model"]
    for key, value in row["expected"].items():
        assert fits.best.parameters[key].value == pytest.approx(value, rel=row["rel_tol"])


def test_the_row_of_a_noisy_curve():
    """Computed in high precision: tests/data/check_values.json, H-noisy-1."""
    row = ROWS["H-noisy-1"]
    expected = row["expected"]
    found = rheo.fit(curve_of(row)).best
    assert found.key == "herschel-bulkley"
    assert found.weighted_ss == pytest.approx(expected["weighted_ss"], rel=1e-10)
    for key, error in (("yield_stress", "ty"), ("consistency", "K"), ("flow_index", "n")):
        assert found.parameters[key].value == pytest.approx(expected[key], rel=1e-8)
        assert found.parameters[key].stderr == pytest.approx(expected[f"se_{error}"], rel=1e-8)


def test_the_covariance_is_lmfit_s():
    """Against a plain lmfit fit with bounds and its own differences (good to some 1e-5)."""
    curve = noisy("carreau", 1e-3, 1e4)
    found = rheo.fit(curve, "carreau").best
    start = lmfit.Parameters()
    for key, one in found.parameters.items():
        start.add(key, value=one.value * 1.1, min=0.0)

    def residual(values):
        model = rheo.model("carreau", **values.valuesdict())
        return model.stress(curve.rate) / curve.stress - 1.0

    plain = lmfit.minimize(residual, start)
    assert found.weighted_ss <= plain.chisqr * (1.0 + 1e-10)
    np.testing.assert_allclose(found.covariance, plain.covar, rtol=1e-3)
    assert found.parameter_keys == tuple(found.parameters)


def test_intervals_are_student_s():
    """0.975 quantile of Student's t with 17 degrees of freedom: 2.110 (printed tables)."""
    found = rheo.fit(curve_of(ROWS["H-noisy-1"])).best
    assert found.freedom == 17
    for one in found.parameters.values():
        assert one.high - one.value == pytest.approx(2.110 * one.stderr, rel=1e-3)
        assert one.value - one.low == pytest.approx(one.high - one.value)
        assert one.note == ""


def test_absolute_and_instrument_weights_move_the_fit():
    curve = noisy("herschel-bulkley", 0.1, 500.0)
    relative = rheo.fit(curve, "herschel-bulkley").best
    absolute = rheo.fit(curve, "herschel-bulkley", weighting="absolute").best
    assert absolute.parameters["yield_stress"].value != relative.parameters["yield_stress"].value

    def of(percent_of_reading, percent_of_full_scale):
        accuracy = rheo.Instrument(percent_of_reading, percent_of_full_scale, full_scale=100.0)
        return rheo.fit(curve, "herschel-bulkley", weighting=accuracy).best.final.parameters

    # The limits of the instrument's weighting are the two others.
    np.testing.assert_allclose(of(2.0, 0.0), relative.final.parameters, rtol=1e-8)
    np.testing.assert_allclose(of(0.0, 1.0), absolute.final.parameters, rtol=1e-8)
    between = of(2.0, 1.0)[0]
    ends = sorted((relative.final.parameters[0], absolute.final.parameters[0]))
    assert ends[0] < between < ends[1]


def test_a_yield_stress_that_is_not_there_is_said_to_be_at_its_bound():
    curve = noisy("power-law", 1.0, 500.0, seed=4)
    found = rheo.fit(curve, "herschel-bulkley").best
    one = found.parameters["yield_stress"]
    assert (one.value, one.bound) == (0.0, "lower")
    assert np.isnan(one.stderr)
    assert one.low == 0.0
    assert 0.0 < one.high < curve.stress.min()
    assert "one-sided" in one.note
    assert found.parameter_keys == ("consistency", "flow_index")
    assert found.covariance.shape == (2, 2)
    # What is left is the power law, with its standard errors.
    plain = rheo.fit(curve, "power-law").best
    assert found.weighted_ss == pytest.approx(plain.weighted_ss, rel=1e-12)
    assert found.parameters["flow_index"].value == pytest.approx(
        plain.parameters["flow_index"].value
    )
    [caution] = [one for one in found.cautions if one.code == "parameter-at-bound"]
    assert "yield_stress is at its lower bound, 0 Pa." in caution.sentence


def test_the_one_sided_limit_is_where_the_sum_of_squares_has_risen():
    """To 15 %: the limit takes the sum of squares as quadratic."""
    curve = noisy("power-law", 1.0, 500.0, seed=4)
    found = rheo.fit(curve, "herschel-bulkley").best
    held = found.parameters["yield_stress"].high
    # The best power law on top of the yield stress held, by a fine grid over the flow index.
    column = curve.rate ** np.linspace(0.2, 0.4, 4001)[:, np.newaxis] / curve.stress
    target = (curve.stress - held) / curve.stress
    size = column @ target / np.sum(column**2, axis=-1)
    lowest = np.min(np.sum((size[:, np.newaxis] * column - target) ** 2, axis=-1))
    rise = (lowest - found.weighted_ss) / (found.weighted_ss / found.freedom)
    # 0.95 quantile of Student's t with 22 degrees of freedom: 1.717 (printed tables).
    assert found.freedom == 22
    assert rise == pytest.approx(1.717**2, rel=0.15)


def test_a_plateau_never_reached_is_said():
    """A Carreau curve measured above its bend only."""
    rate = np.geomspace(5.0, 500.0, 20)
    random = np.random.default_rng(3)
    stress = example("carreau").stress(rate) * (1.0 + 0.02 * random.standard_normal(20))
    found = rheo.fit(rheo.FlowCurve(rate, stress), "carreau").best
    [caution] = [
        one
        for one in found.cautions
        if one.code == "plateau-not-reached" and "zero_shear_viscosity" in one.sentence
    ]
    assert "the plateau at low rates was never reached" in caution.sentence
    assert "parameter-not-identified" in codes(found.cautions)


def test_an_extrapolated_yield_stress_is_said():
    found = rheo.fit(noisy("herschel-bulkley", 50.0, 500.0), "herschel-bulkley").best
    assert "yield-stress-extrapolated" in codes(found.cautions)
    inside = rheo.fit(noisy("herschel-bulkley", 0.01, 500.0), "herschel-bulkley").best
    assert codes(inside.cautions) == set()


def test_a_misfit_is_said_with_its_points():
    """A straight line through a curve with a plateau at low rates."""
    found = rheo.fit(noisy("carreau", 1e-2, 1e3), "newtonian").best
    assert {"misfit", "systematic-residuals"} <= codes(found.cautions)
    [misfit] = [one for one in found.cautions if one.code == "misfit"]
    assert found.worst_point in misfit.points
    large = np.flatnonzero(np.abs(found.relative_errors) > 0.1)
    assert misfit.points == tuple(large)


def test_scatter_beyond_the_instrument_is_said():
    curve = noisy("power-law", 1.0, 500.0, noise=0.05)
    good = rheo.fit(curve, "power-law", rheo.Instrument(5.0, 0.0, 100.0)).best
    bad = rheo.fit(curve, "power-law", rheo.Instrument(0.5, 0.0, 100.0)).best
    assert "scatter-beyond-instrument" not in codes(good.cautions)
    assert "scatter-beyond-instrument" in codes(bad.cautions)


def test_excluded_points_are_left_out_and_numbers_stay_the_user_s():
    curve = noisy("power-law", 1.0, 500.0)
    stress = curve.stress.copy()
    stress[3] *= 5.0
    mask = np.zeros(24, dtype=bool)
    mask[3] = True
    left = rheo.fit(rheo.FlowCurve(curve.rate, stress, excluded=mask), "power-law").best
    kept = rheo.fit(curve.select(~mask), "power-law").best
    assert left.weighted_ss == pytest.approx(kept.weighted_ss, rel=1e-12)
    assert 3 not in left.points
    with_it = rheo.fit(rheo.FlowCurve(curve.rate, stress), "power-law").best
    assert with_it.worst_point == 3


def test_the_reason_names_model_and_rivals():
    fits = rheo.fit(curve_of(ROWS["H-noisy-1"]))
    assert fits.reason.startswith("Herschel-Bulkley has the lowest AICc of 11 models, 19.8 below")
    assert "RMS error of 1.66 %" in fits.reason
    alone = rheo.fit(curve_of(ROWS["H-noisy-1"]), "casson")
    assert alone.reason.startswith("Casson is the only model fitted")


def test_parsimony_is_said():
    """Readings of a power law in which a third parameter buys less than two units of AICc."""
    for seed in range(200):
        fits = rheo.fit(noisy("power-law", 1.0, 500.0, seed=seed), ["power-law", "sisko"])
        lowest = min(fits, key=lambda one: one.aicc)
        if lowest.key == "sisko" and fits.best.key == "power-law":
            break
    assert fits["sisko"].aicc < fits["power-law"].aicc <= fits["sisko"].aicc + 2.0
    assert "Power law lies within 2 units of AICc of Sisko" in fits.reason
    assert "2 parameters instead of 3" in fits.reason


def test_weights_add_up_and_ranking_is_in_order():
    fits = rheo.fit(noisy("casson", 0.1, 300.0))
    assert sum(one.weight for one in fits) == pytest.approx(1.0)
    rest = [one.aicc for one in fits.ranking[1:]]
    assert rest == sorted(rest)
    assert len(fits) == 11
    assert "casson" in fits
    assert fits.keys[0] == fits.best.key


def test_models_with_too_many_parameters_are_skipped_with_the_reason():
    fits = rheo.fit(noisy("power-law", 1.0, 100.0, count=6))
    assert "5 parameters need at least 8 readings; there are 6" in fits.skipped["carreau-yasuda"]
    [caution] = [one for one in fits.cautions if one.code == "models-skipped"]
    assert "carreau-yasuda" in caution.sentence
    with pytest.raises(InputError, match=r"'carreau' was not fitted \(4 parameters need"):
        fits["carreau"]
    with pytest.raises(InputError, match="'no-such' was not fitted; there are"):
        fits["no-such"]


def test_one_rate_decides_one_parameter():
    curve = rheo.FlowCurve([10.0] * 6, [5.0, 5.1, 4.9, 5.0, 5.2, 4.8])
    fits = rheo.fit(curve)
    assert fits.keys == ("newtonian",)
    assert "2 different settings or more; there are 1" in fits.skipped["power-law"]


@pytest.mark.parametrize(
    ("count", "models", "sentence"),
    [
        (2, None, "there are 2 readings to fit; at least 4 at different shear rates"),
        (1, None, "there is 1 reading to fit; at least 4"),
        (3, "herschel-bulkley", "cannot be fitted: 3 parameters need at least 4 readings"),
    ],
)
def test_too_few_readings(count, models, sentence):
    curve = rheo.FlowCurve(np.arange(1.0, 1.0 + count), np.arange(2.0, 2.0 + count))
    with pytest.raises(FitError, match=sentence):
        rheo.fit(curve, models)


def test_a_model_named_alone_needs_one_reading_to_spare():
    curve = noisy("herschel-bulkley", 0.1, 100.0, count=4)
    found = rheo.fit(curve, "herschel-bulkley").best
    assert found.aicc == np.inf
    assert found.weight == 1.0
    assert found.freedom == 1


def test_words_that_are_not_known():
    curve = noisy("power-law", 1.0, 100.0)
    with pytest.raises(InputError, match="unknown weighting 'log'; use relative, absolute or"):
        rheo.fit(curve, weighting="log")
    with pytest.raises(InputError, match=r"unknown model 'casso'.*did you mean 'casson'"):
        rheo.fit(curve, "casso")
    with pytest.raises(FitError, match="no model was named"):
        rheo.fit(curve, [])
    with pytest.raises(InputError, match="need tube readings"):
        rheo.fit(curve, entrance=True)
    mask = np.ones(24, dtype=bool)
    with pytest.raises(FitError, match="all points are excluded"):
        rheo.fit(rheo.FlowCurve(curve.rate, curve.stress, excluded=mask))


@pytest.mark.parametrize(
    ("values", "sentence"),
    [
        ((-1.0, 1.0, 10.0), "percent_of_reading is -1; it must lie between 0 and 100 %"),
        ((1.0, 200.0, 10.0), "percent_of_full_scale is 200"),
        ((1.0, 1.0, 0.0), "full_scale is 0; it must be above 0"),
        ((0.0, 0.0, 10.0), "both 0; one must be above 0"),
    ],
)
def test_an_instrument_that_cannot_be(values, sentence):
    with pytest.raises(InputError, match=sentence):
        rheo.Instrument(*values)


def test_the_jacobian_is_by_free_parameters():
    curve = noisy("power-law", 1.0, 500.0, seed=4)
    found = rheo.fit(curve, "herschel-bulkley").best
    rate = np.array([1.0, 10.0])
    np.testing.assert_array_equal(found.jacobian(rate), found.model.jacobian(rate)[:, 1:])


def test_a_correlation_is_between_its_ends():
    found = rheo.fit(noisy("herschel-bulkley", 0.1, 300.0), "herschel-bulkley").best
    pairs = found.correlation
    assert set(pairs) == {
        ("yield_stress", "consistency"),
        ("yield_stress", "flow_index"),
        ("consistency", "flow_index"),
    }
    assert pairs["consistency", "flow_index"] < -0.9
    assert all(-1.0 <= value <= 1.0 for value in pairs.values())
