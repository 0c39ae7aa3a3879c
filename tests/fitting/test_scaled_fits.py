"""Fits over several temperatures or solids fractions."""

from __future__ import annotations

import numpy as np
import pytest

import rheo
from rheo.errors import InputError
from rheo.fitting.final import global_minima
from rheo.fitting.reading_problem import ReadingProblem
from rheo.fitting.residuals import weighted
from rheo.fitting.scaling import ScaledProblem
from rheo.fitting.temperature import arrhenius
from rheo.fitting.weighting import WEIGHTINGS
from rheo.geometry import make_geometry
from rheo.models import model_records
from rheo.models.state_curve import AT_YIELD, VISCOUS

R = 8.314462618
CELSIUS = 273.15
TEMPERATURES = np.repeat(np.array([20.0, 40.0, 60.0]) + CELSIUS, 14)
REFERENCE = 40.0 + CELSIUS
ENERGY, YIELD_ENERGY = 25e3, 8e3
TRUE = {
    "viscosity": 2.0,
    "consistency": 4.0,
    "flow_index": 0.45,
    "yield_stress": 9.0,
    "plastic_viscosity": 0.3,
    "casson_viscosity": 0.7,
    "zero_shear_viscosity": 30.0,
    "infinite_shear_viscosity": 0.02,
    "time_constant": 2.0,
    "yasuda_exponent": 1.3,
    "rate_index": 0.7,
    "rate_offset": 3.0,
    "half_stress": 8.0,
    "stress_index": 2.5,
}


def truth(key, temperature):
    lag = (1.0 / temperature - 1.0 / REFERENCE) / R
    energy = {
        name: ENERGY if name in VISCOUS else YIELD_ENERGY if name in AT_YIELD else 0.0
        for name in model_records()[key].parameter_keys
    }
    return rheo.model(key, **{name: TRUE[name] * np.exp(one * lag) for name, one in energy.items()})


def exact_curve(key):
    rate = np.tile(np.geomspace(0.02, 2000.0, 14), 3)
    return rheo.FlowCurve(rate, truth(key, TEMPERATURES).stress(rate), temperature=TEMPERATURES)


@pytest.mark.parametrize("key", list(model_records()))
def test_exact_readings_give_the_parameters_and_energies_back(key):
    found = rheo.fit_temperatures(exact_curve(key), models=key, reference=REFERENCE).best
    for name in model_records()[key].parameter_keys:
        assert found.parameters[name].value == pytest.approx(TRUE[name], rel=1e-6)
    energies = {"activation_energy": ENERGY, "yield_activation_energy": YIELD_ENERGY}
    for name, energy in energies.items():
        if name in found.parameters:
            assert found.parameters[name].value == pytest.approx(energy, rel=1e-6)


@pytest.mark.parametrize(
    ("kind", "dimensions", "setting"),
    [
        ("concentric-cylinders", {"inner_radius": 0.01, "outer_radius": 0.02, "length": 0.05},
         np.geomspace(0.1, 40.0, 14)),
        ("spindle", {"rate_factor": 2.0, "stress_factor": 1e4}, np.geomspace(0.1, 40.0, 14)),
    ],
)  # fmt: skip
def test_readings_are_fitted_in_their_geometry(kind, dimensions, setting):
    geometry = rheo.geometry(kind, **dimensions)
    speed = np.tile(setting, 3)
    torque = geometry.predict(truth("herschel-bulkley", TEMPERATURES), speed)
    readings = rheo.Readings(geometry, angular_speed=speed, torque=torque, temperature=TEMPERATURES)
    fits = rheo.fit_temperatures(readings, "herschel-bulkley", reference=REFERENCE)
    values = fits.best.parameters
    assert values["yield_stress"].value == pytest.approx(TRUE["yield_stress"], rel=1e-5)
    assert values["consistency"].value == pytest.approx(TRUE["consistency"], rel=1e-5)
    assert values["activation_energy"].value == pytest.approx(ENERGY, rel=1e-5)


def test_the_right_family_is_found_and_evaluated_between_the_temperatures():
    fits = rheo.fit_temperatures(exact_curve("herschel-bulkley"))
    assert fits.best.key == "herschel-bulkley"
    rate = np.geomspace(0.1, 1000.0, 9)
    for celsius in (20.0, 33.0, 60.0):
        expected = truth("herschel-bulkley", celsius + CELSIUS).stress(rate)
        np.testing.assert_allclose(fits.at(celsius + CELSIUS).stress(rate), expected, rtol=1e-6)


def test_draws_are_functions_of_temperature_that_cover_the_truth():
    curve = exact_curve("herschel-bulkley")
    noise = 1.0 + 0.02 * np.random.default_rng(7).standard_normal(curve.rate.size)
    fits = rheo.fit_temperatures(
        rheo.FlowCurve(curve.rate, curve.stress * noise, temperature=TEMPERATURES),
        "herschel-bulkley",
    )
    (draws,) = fits.draws(2000, seed=3)
    stress = draws(np.asarray(303.15)).stress(50.0)
    assert stress.shape == (2000,)
    low, high = np.percentile(stress, [0.5, 99.5])
    assert low < float(truth("herschel-bulkley", 303.15).stress(50.0)) < high
    assert high / low < 1.1


def test_draws_of_several_models_add_up():
    curve = exact_curve("carreau")
    noise = 1.0 + 0.05 * np.random.default_rng(1).standard_normal(curve.rate.size)
    noisy = rheo.FlowCurve(curve.rate, curve.stress * noise, temperature=TEMPERATURES)
    fits = rheo.fit_temperatures(noisy, ["carreau", "cross", "ellis"])
    assert sum(one(np.asarray(300.0)).shape[0] for one in fits.draws(500, seed=1)) == 500


def test_a_temperature_outside_the_readings_has_a_caution():
    fits = rheo.fit_temperatures(exact_curve("power-law"), "power-law")
    assert fits.cautions_at(30.0 + CELSIUS) == ()
    (caution,) = fits.cautions_at(75.0 + CELSIUS, "hot end")
    assert caution.code == "outside-measured-temperature"
    assert "75.0 °C" in caution.sentence
    assert "between 20.0 °C and 60.0 °C" in caution.sentence
    assert caution.place == "hot end"


def test_misfit_is_told_by_temperature():
    curve = exact_curve("power-law")
    stress = np.where(TEMPERATURES > 330.0, curve.stress * 1.2, curve.stress)
    jitter = np.tile([-0.1, 0.1], TEMPERATURES.size // 2)
    fits = rheo.fit_temperatures(
        rheo.FlowCurve(curve.rate, stress, temperature=TEMPERATURES + jitter), "power-law"
    )
    assert [round(one - CELSIUS) for one in fits.misfit_by_state()] == [20, 40, 60]
    assert max(fits.misfit_by_state().values()) > 0.02


def test_water_follows_arrhenius_over_a_short_range():
    """Viscosity of water, mPa.s: IAPWS 2008 values as in the CRC Handbook (from memory).

    Arrhenius's law is an approximation for water: the energy falls as it warms. Between 20 and
    40 °C the handbook values give 16.2 kJ/mol.
    """
    celsius = np.array([20.0, 25.0, 30.0, 40.0])
    viscosity = np.array([1.0016e-3, 0.8900e-3, 0.7972e-3, 0.6527e-3])
    rate = np.tile(np.array([10.0, 100.0, 1000.0]), 4)
    curve = rheo.FlowCurve(
        rate, np.repeat(viscosity, 3) * rate, temperature=np.repeat(celsius, 3) + CELSIUS
    )
    fits = rheo.fit_temperatures(curve, "newtonian")
    ends = R * np.log(viscosity[0] / viscosity[-1]) / (1 / 293.15 - 1 / 313.15)
    assert fits.best.parameters["activation_energy"].value == pytest.approx(ends, rel=0.01)
    assert fits.at(298.15).parameters["viscosity"] == pytest.approx(0.8900e-3, rel=0.005)


@pytest.mark.parametrize("form", ["exponential", "power"])
def test_solids_fractions_give_their_slopes_back(form):
    fraction = np.repeat([0.25, 0.30, 0.35], 12)
    x = fraction - 0.30 if form == "exponential" else np.log(fraction / 0.30)
    slope, yield_slope = (18.0, 26.0) if form == "exponential" else (4.0, 3.0)
    rate = np.tile(np.geomspace(1.0, 600.0, 12), 3)
    stress = 12.0 * np.exp(yield_slope * x) + 0.05 * np.exp(slope * x) * rate
    fits = rheo.fit_concentrations(rheo.FlowCurve(rate, stress), fraction, "bingham", form=form)
    values = fits.best.parameters
    assert values["yield_stress"].value == pytest.approx(12.0, rel=1e-6)
    assert values["solids_slope"].value == pytest.approx(slope, rel=1e-6)
    assert values["yield_solids_slope"].value == pytest.approx(yield_slope, rel=1e-6)
    thick = fits.at(0.35)
    assert thick.yield_stress == pytest.approx(stress[-12:].min() - 0.05 * np.exp(slope * x[-1]))
    assert fits.cautions_at(0.40)[0].code == "outside-measured-fraction"


def test_what_is_missing_is_named():
    curve = exact_curve("power-law")
    bare = rheo.FlowCurve(curve.rate, curve.stress)
    with pytest.raises(InputError, match="no temperatures; give one for each"):
        rheo.fit_temperatures(bare)
    level = rheo.FlowCurve(curve.rate, curve.stress, temperature=np.full(curve.rate.size, 300.0))
    with pytest.raises(InputError, match="all readings have the same temperature"):
        rheo.fit_temperatures(level)
    with pytest.raises(InputError, match=r"80\.0 °C; it must lie between 20\.0 and 60\.0 °C"):
        rheo.fit_temperatures(curve, reference=353.15)
    with pytest.raises(InputError, match="35; it must lie between 0 and 1"):
        rheo.fit_concentrations(bare, np.full(curve.rate.size, 35.0))
    with pytest.raises(InputError, match="unknown form 'cubic'; there are exponential, power"):
        rheo.fit_concentrations(bare, np.linspace(0.1, 0.2, curve.rate.size), form="cubic")
    with pytest.raises(InputError, match="give one for each reading"):
        rheo.fit_concentrations(bare, [0.1, 0.2])


@pytest.mark.parametrize("key", list(model_records()))
def test_searches_in_a_gap_see_what_each_problem_sees_alone(key):
    """All models in one call, from the rates of the call before: the same readings and slopes."""
    cup = make_geometry(
        "concentric-cylinders", inner_radius=0.014, outer_radius=0.0185, length=0.046
    )
    speed = np.tile(np.geomspace(0.05, 30.0, 8), 2)
    celsius = np.repeat([20.0, 60.0], 8)
    torque = np.concatenate(
        [cup.predict(truth(key, one + CELSIUS), speed[:8]) for one in (20.0, 60.0)]
    )
    law = arrhenius(REFERENCE)
    records = [model_records()[key], model_records()["bingham"]]
    rates = cup.nominal(speed, torque)[0]
    problems = [
        ScaledProblem(
            ReadingProblem(record, cup, speed, torque, WEIGHTINGS["relative"], rates),
            law,
            celsius + CELSIUS,
        )
        for record in records
    ]
    widths = [len(one.record.parameters) + len(one.extra) for one in problems]
    values = np.zeros((4, max(widths)))
    for row, (problem, width) in enumerate(
        zip(np.repeat(np.array(problems, dtype=object), 2), np.repeat(widths, 2), strict=True)
    ):
        own = [TRUE[name] for name in problem.record.parameter_keys]
        values[row, :width] = np.array([*own, *[ENERGY, YIELD_ENERGY][: len(problem.extra)]])
        values[row, 0] *= 1.0 + 0.1 * row
    evaluate = weighted(problems, [2, 2])
    rows = np.arange(4)
    evaluate(values * 1.05, rows)
    residuals, slopes = evaluate(values, rows)
    for row, (problem, width) in enumerate(
        zip(np.repeat(np.array(problems, dtype=object), 2), np.repeat(widths, 2), strict=True)
    ):
        alone, its = problem.sensitivity(values[row : row + 1, :width])
        sigma = problem.weighting.sigma(torque)
        np.testing.assert_allclose(residuals[row] * sigma + torque, alone[0], rtol=1e-8)
        largest = np.abs(its[0]).max(axis=-1, keepdims=True)
        largest[largest == 0] = 1.0
        # Slopes are taken where the solution stands before its last step, within 1e-4 of the end.
        np.testing.assert_allclose(
            slopes[row, :width] * sigma / largest, its[0] / largest, atol=1e-4
        )
        assert np.all(slopes[row, width:] == 0)


def noisy_curve():
    rate = np.tile(np.geomspace(0.5, 500.0, 14), 3)
    noise = np.exp(0.02 * np.random.default_rng(5).standard_normal(rate.size))
    stress = truth("herschel-bulkley", TEMPERATURES).stress(rate) * noise
    return rheo.FlowCurve(rate, stress, temperature=TEMPERATURES)


@pytest.mark.parametrize("key", ["herschel-bulkley", "casson", "carreau"])
def test_another_reference_gives_the_same_curve_with_other_parameters(key):
    """Parameters about 25 °C are the values at 25 °C, their errors those of a fit made there."""
    curve = noisy_curve()
    middle = rheo.fit_temperatures(curve, ("herschel-bulkley", "casson", "carreau", "power-law"))
    moved = middle.about(25.0 + CELSIUS)
    rates = np.geomspace(0.5, 500.0, 7)
    for temperature in (20.0 + CELSIUS, 47.0 + CELSIUS):
        np.testing.assert_allclose(
            moved.at(temperature, key).stress(rates),
            middle.at(temperature, key).stress(rates),
            rtol=1e-9,
        )
    at_25 = middle.at(25.0 + CELSIUS, key)
    for name, value in at_25.parameters.items():
        assert float(moved[key].model.parameters[name]) == pytest.approx(float(value), rel=1e-8)
    for one in moved[key].parameters.values():
        assert one.low <= one.value <= one.high
    assert moved.keys == middle.keys
    assert moved[key].weighted_ss == pytest.approx(middle[key].weighted_ss, rel=1e-9)
    if key == "carreau":
        # Such readings drive its time constant to its bound; given at 25 °C it lies beyond.
        assert "cut off" in moved[key].parameters["time_constant"].note
        return
    problem = moved[key].problem
    slopes = weighted([problem], [1])(moved[key].final.parameters[None], np.zeros(1, dtype=int))
    jacobian = slopes[1][0, moved[key].final.free]
    # Scaled, as energies and indices are many orders of magnitude apart.
    size = np.linalg.norm(jacobian, axis=-1)
    inverse = np.linalg.inv((jacobian @ jacobian.T) / np.outer(size, size))
    by_hand = moved[key].scatter ** 2 * inverse / np.outer(size, size)
    np.testing.assert_allclose(moved[key].covariance, by_hand, rtol=1e-4)


def test_draws_do_not_follow_the_reference():
    middle = rheo.fit_temperatures(noisy_curve(), ("herschel-bulkley", "casson"))
    moved = middle.about(25.0 + CELSIUS)
    assert moved.draws(50, 3) is middle.draws(50, 3)
    assert moved.about(middle.law.reference) is middle
    assert moved.about(25.0 + CELSIUS) is moved
    again = rheo.fit_temperatures(
        noisy_curve(), ("herschel-bulkley", "casson"), reference=25.0 + CELSIUS
    )
    for one, other in zip(again.draws(50, 3), middle.draws(50, 3), strict=True):
        warm = 33.0 + CELSIUS
        np.testing.assert_array_equal(one(warm).stress(10.0), other(warm).stress(10.0))


@pytest.mark.parametrize("key", ["power-law", "sisko", "casson"])
def test_models_that_are_not_the_truth_are_fitted_as_well_as_from_many_starts(key):
    """Against the best of 200 random starts of the same least squares."""
    rate = np.tile(np.geomspace(0.02, 2000.0, 14), 3)
    noise = np.exp(0.02 * np.random.default_rng(8).standard_normal(rate.size))
    stress = truth(key, TEMPERATURES).stress(rate) * noise
    fits = rheo.fit_temperatures(rheo.FlowCurve(rate, stress, temperature=TEMPERATURES))
    random = np.random.default_rng(2)
    for other in ("ellis", "cross", "carreau"):
        problem = fits[other].problem
        starts = 10.0 ** random.uniform(-3.0, 4.0, size=(200, len(problem.record.parameters)))
        starts[:, -1] = random.uniform(0.1, 4.0 if other == "ellis" else 1.0, 200)
        energies = ENERGY * random.uniform(0.0, 2.0, size=(200, len(problem.extra)))
        ((_, best),) = global_minima([problem], [np.concatenate([starts, energies], axis=-1)])
        assert fits[other].minimum_sum_of_squares <= 1.01 * best, other
