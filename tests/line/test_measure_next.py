"""Which readings to take next, checked by taking them."""

from __future__ import annotations

import math
from functools import cache

import numpy as np
import pytest

import rheo
from rheo.fitting import fit
from rheo.fitting.temperature import fit_temperatures
from rheo.line import Line, Pipe, Product, Vessel
from rheo.line.thickness import thicker
from rheo.line.walk import walk

TRUTH = rheo.model("herschel-bulkley", yield_stress=8.0, consistency=3.0, flow_index=0.45)
PRODUCT = Product(TRUTH, 1050.0)
LINE = Line(discharge=(Pipe(100.0, 0.05),))
RATES = np.geomspace(5.0, 300.0, 9)
CHOICES = np.geomspace(5.0, 300.0, 13)
NOISE = 0.03


def _readings(rates: np.ndarray, rng: np.random.Generator) -> np.ndarray:
    return TRUTH.stress(rates) * (1.0 + NOISE * rng.standard_normal(rates.size))


def _log_pressure_error(rates: np.ndarray, stresses: np.ndarray, flow: float) -> float:
    """Standard deviation of ln(ΔP) by the covariance of a fit with the true kind of model."""
    found = fit(rheo.FlowCurve(rates, stresses), models="herschel-bulkley").best
    free = [found.record.parameter_keys.index(key) for key in found.parameter_keys]
    centre = np.array([float(value) for value in found.model])
    step = 1e-3 * np.sqrt(np.diag(found.covariance))
    moved = np.repeat(centre[np.newaxis], 2 * len(free), axis=0)
    for row, index in enumerate(free):
        moved[2 * row, index] += step[row]
        moved[2 * row + 1, index] -= step[row]
    pressure = walk(LINE, PRODUCT, flow, source=found.model_of(moved)).differential_pressure
    slope = (np.log(pressure[::2]) - np.log(pressure[1::2])) / (2 * step)
    # The scatter is put at its true value, so that its own chance does not blur the comparison.
    scale = NOISE / found.scatter
    return float(np.sqrt(slope @ found.covariance @ slope)) * scale


@cache
def _simulate(flow: float) -> tuple[float, np.ndarray]:
    """Mean error with two readings at the first choice, and with two at each speed."""
    rng = np.random.default_rng(2024)
    chosen, others = [], []
    for _ in range(12):
        stresses = _readings(RATES, rng)
        fits = fit(rheo.FlowCurve(RATES, stresses), models="herschel-bulkley")
        best = rheo.measure_next(fits, LINE, PRODUCT, flow, settings=CHOICES).best.setting
        errors = []
        for rate in (best, *CHOICES):
            more = np.full(2, rate)
            rates = np.concatenate([RATES, more])
            values = np.concatenate([stresses, _readings(more, rng)])
            errors.append(_log_pressure_error(rates, values, flow))
        chosen.append(errors[0])
        others.append(errors[1:])
    return float(np.mean(chosen)), np.mean(others, axis=0)


@pytest.mark.parametrize("flow", [1e-4, 2e-3])
def test_the_first_choice_narrows_more_than_the_median_of_the_others(flow: float) -> None:
    chosen, others = _simulate(flow)
    assert chosen < np.median(others)


@pytest.mark.parametrize("flow", [1e-4, 2e-3])
def test_the_first_choice_is_close_to_the_best_there_is(flow: float) -> None:
    chosen, others = _simulate(flow)
    # Twelve sets of readings leave a few percent of chance in each mean.
    assert chosen < 1.05 * others.min()


def test_the_forecast_of_one_model_is_what_its_covariance_becomes() -> None:
    """For one model the expected interval is that of the fit with two exact readings more.

    Readings that lie on the fitted curve leave the fit as it is, so that the covariance grows by
    the design alone; the scatter estimate is put back to that of the first fit.
    """
    rng = np.random.default_rng(8)
    stresses = _readings(RATES, rng)
    flow = 1e-3
    before = fit(rheo.FlowCurve(RATES, stresses), models="herschel-bulkley")
    for one in rheo.measure_next(before, LINE, PRODUCT, flow, settings=CHOICES).ranking[::4]:
        more = np.full(2, one.setting)
        rates = np.concatenate([RATES, more])
        values = np.concatenate([stresses, before.best.model.stress(more)])
        error = _log_pressure_error(rates, values, flow) * before.best.scatter / NOISE
        # The fit weights by the measured, the forecast by the fitted stress: second order.
        assert one.half_width == pytest.approx(1.959964 * error, rel=1e-3)


def test_rival_models_are_told_apart_where_they_part() -> None:
    """Two models that agree on the readings but not in the pipe: read where the pipe works."""
    rng = np.random.default_rng(1)
    rates = np.geomspace(20.0, 300.0, 9)
    fits = fit(
        rheo.FlowCurve(rates, _readings(rates, rng)), models=["herschel-bulkley", "power-law"]
    )
    flow = 2e-6
    found = rheo.measure_next(fits, LINE, PRODUCT, flow, settings=np.geomspace(0.1, 300.0, 25))
    assert found.best.setting < 5.0
    assert found.best.half_width < found.half_width


def test_more_readings_tell_more() -> None:
    rng = np.random.default_rng(4)
    fits = fit(rheo.FlowCurve(RATES, _readings(RATES, rng)))
    widths = [
        rheo.measure_next(fits, LINE, PRODUCT, 1e-3, count=count).best.half_width
        for count in (1, 2, 5, 20)
    ]
    assert widths == sorted(widths, reverse=True)
    assert widths[0] < rheo.measure_next(fits, LINE, PRODUCT, 1e-3).half_width


def test_an_instrument_is_spoken_of_in_its_own_speeds() -> None:
    rng = np.random.default_rng(4)
    cup = rheo.geometry(
        "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375
    )
    fits = fit(rheo.FlowCurve(RATES, _readings(RATES, rng)), models="herschel-bulkley")
    speeds = np.array([3.0, 6.0, 30.0, 60.0, 100.0, 200.0, 300.0]) * math.pi / 30.0
    found = rheo.measure_next(fits, LINE, PRODUCT, 1e-4, geometry=cup, settings=speeds)
    assert found.kind == "angular_speed"
    assert len(found.ranking) == 7
    rpm = found.best.setting * 30.0 / math.pi
    assert f"near {rpm:.3g} rpm" in found.sentence
    assert found.sentence.startswith("Two more readings near ")
    rate, _ = cup.sheared(fits.best.model, found.best.setting)
    assert found.best.rate == pytest.approx(float(rate), rel=1e-12)


def test_a_plateau_never_reached_does_no_harm() -> None:
    """Carreau's plateaus cannot be found from a power law; its pressure drop is known as well."""
    rng = np.random.default_rng(9)
    thinning = rheo.model("power-law", consistency=5.0, flow_index=0.4)
    stresses = thinning.stress(RATES) * (1.0 + NOISE * rng.standard_normal(RATES.size))
    curve = rheo.FlowCurve(RATES, stresses)
    alone = rheo.measure_next(fit(curve, models="power-law"), LINE, PRODUCT, 2e-4)
    mixed = rheo.measure_next(fit(curve, models=["power-law", "carreau"]), LINE, PRODUCT, 2e-4)
    assert alone.half_width < 0.1
    assert mixed.half_width < 2.0 * alone.half_width


def test_readings_that_leave_the_pressure_open_are_said_to() -> None:
    """The wall rate of the pipe lies on a plateau that the readings never reach."""
    rng = np.random.default_rng(9)
    thinning = rheo.model("power-law", consistency=5.0, flow_index=0.4)
    stresses = thinning.stress(RATES) * (1.0 + NOISE * rng.standard_normal(RATES.size))
    fits = fit(rheo.FlowCurve(RATES, stresses), models="cross")
    found = rheo.measure_next(fits, LINE, PRODUCT, 2e-4)
    far = Line(discharge=(Pipe(100.0, 1.5),))
    slow = rheo.measure_next(fits, far, PRODUCT, 1e-6)
    assert found.half_width < 0.2
    assert slow.half_width > 1.0
    assert "more than 100 %" in slow.sentence


def test_several_tubes_are_told_apart() -> None:
    rng = np.random.default_rng(4)
    diameter = np.repeat([0.005, 0.01], 8)
    flow = np.tile(np.geomspace(2e-7, 2e-5, 8), 2)
    tubes = rheo.geometry("tube", diameter=diameter, length=1.0)
    drop = tubes.predict(TRUTH, flow) * (1.0 + NOISE * rng.standard_normal(16))
    readings = rheo.Readings(geometry=tubes, flow=flow, pressure_drop=drop)
    found = rheo.measure_next(
        fit(readings, models="herschel-bulkley"), LINE, PRODUCT, 1e-3, settings=[1e-6, 1e-5]
    )
    assert found.kind == "flow"
    assert {one.place for one in found.ranking} == {"diameter 5 mm", "diameter 10 mm"}
    assert len(found.ranking) == 4
    assert found.best.place in found.sentence
    # The same flow shears faster in the narrower tube.
    rates = {(one.setting, one.place): one.rate for one in found.ranking}
    assert rates[1e-5, "diameter 5 mm"] > rates[1e-5, "diameter 10 mm"]


def test_readings_with_a_geometry_speak_of_it_by_themselves() -> None:
    rng = np.random.default_rng(4)
    cup = rheo.geometry(
        "concentric-cylinders", inner_radius=0.0125, outer_radius=0.01356, length=0.0375
    )
    speed = np.geomspace(0.5, 30.0, 9)
    torque = cup.predict(TRUTH, speed) * (1.0 + NOISE * rng.standard_normal(9))
    readings = rheo.Readings(geometry=cup, angular_speed=speed, torque=torque)
    fits = fit(readings, models="herschel-bulkley")
    found = rheo.measure_next(fits, LINE, PRODUCT, 1e-4)
    assert found.kind == "angular_speed"
    settings = [one.setting for one in found.ranking]
    assert min(settings) == pytest.approx(0.5, rel=1e-6)
    assert max(settings) == pytest.approx(30.0, rel=1e-6)


def test_fits_over_temperatures_are_taken_at_that_of_the_product() -> None:
    """Readings at 20 and 60 °C, a line at 60 °C: the parameters there decide, slopes included."""
    rng = np.random.default_rng(12)
    temperature = np.repeat([293.15, 333.15], RATES.size)
    rates = np.tile(RATES, 2)
    consistency = 6.0 * np.exp(2000.0 * (1.0 / temperature - 1.0 / 293.15))
    stress = consistency * rates**0.5 * (1.0 + NOISE * rng.standard_normal(rates.size))
    curve = rheo.FlowCurve(rates, stress, temperature=temperature)
    fits = fit_temperatures(curve, models="power-law", reference=293.15)
    warm = Product(TRUTH, 1050.0, temperature=333.15)
    found = rheo.measure_next(fits, LINE, warm, 1e-3, settings=CHOICES)
    assert " at 60 °C would cut" in found.sentence
    # The same by draws from the covariance of the fit.
    draws = fits.draws(4000, seed=3)
    product = Product(fits.source(), 1050.0, temperature=333.15, draws=draws)
    pressures = rheo.solve_line(LINE, product, 1e-3).draws
    assert pressures is not None
    # A standard deviation of 4,000 draws is known to about 1.1 %.
    by_draws = 1.959964 * float(np.log(pressures).std())
    assert found.half_width == pytest.approx(by_draws, rel=0.05)
    cold = rheo.measure_next(fits, LINE, PRODUCT, 1e-3, settings=CHOICES)
    assert cold.half_width != found.half_width


def test_speeds_are_found_from_the_readings_when_none_are_given() -> None:
    rng = np.random.default_rng(4)
    fits = fit(rheo.FlowCurve(RATES, _readings(RATES, rng)), models="power-law")
    found = rheo.measure_next(fits, LINE, PRODUCT, 1e-3)
    settings = sorted(one.setting for one in found.ranking)
    assert settings[0] == pytest.approx(RATES[0])
    assert settings[-1] == pytest.approx(RATES[-1])


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        ({"count": 0}, "count is 0; it must be a whole number above 0"),
        ({"settings": [1.0, -1.0]}, "settings is -1; it must be above 0"),
        ({"settings": []}, "settings is empty; give at least one speed"),
    ],
)
def test_what_cannot_be_asked(arguments: dict[str, object], sentence: str) -> None:
    fits = fit(rheo.FlowCurve(RATES, TRUTH.stress(RATES) * (1 + 0.01 * np.sin(RATES))))
    with pytest.raises(rheo.InputError, match=sentence):
        rheo.measure_next(fits, LINE, PRODUCT, 1e-3, **arguments)


def test_a_line_that_runs_by_itself_has_nothing_to_narrow() -> None:
    fits = fit(rheo.FlowCurve(RATES, TRUTH.stress(RATES) * (1 + 0.01 * np.sin(RATES))))
    falling = Line(discharge=(Pipe(10.0, 0.2, rise=-10.0),))
    with pytest.raises(rheo.InputError, match="the line needs no pressure at this flow"):
        rheo.measure_next(fits, falling, PRODUCT, 1e-4)


def test_the_pressure_is_that_of_the_product_as_pumped() -> None:
    """With a height in it, more stress makes the part of the pressure that is in doubt larger."""
    rates = np.geomspace(1.0, 100.0, 9)
    wobble = np.where(np.arange(9) % 2, 1.02, 0.98)
    fits = rheo.fit(rheo.FlowCurve(rates, 8.0 * rates**0.4 * wobble), "power-law")
    line = Line(discharge=(Pipe(20.0, 0.05, rise=10.0),))
    product = Product(fits.best.model, 1100.0)
    flow = 1e-3
    halves = []
    for factor in (1.0, 3.0):
        found = rheo.measure_next(fits, line, product, flow, thickness=factor)
        solved = rheo.solve_line(line, thicker(product, factor), flow)
        share = float(solved.friction_pressure / solved.differential_pressure)
        halves.append(found.half_width / share)
    # In laminar flow the doubt of the friction itself does not change with the factor.
    assert halves[1] == pytest.approx(halves[0], rel=1e-6)


def test_the_factors_of_a_spindle_are_counted_in() -> None:
    """A spindle that twists harder for the same stress tells the same, at the same speeds."""
    speeds = np.geomspace(0.1, 20.0, 9)
    wobble = np.where(np.arange(9) % 2, 1.02, 0.98)
    truth = rheo.model("power-law", consistency=5.0, flow_index=0.5)
    line = Line(discharge=(Pipe(20.0, 0.05, rise=2.0), Vessel()))
    found = []
    for factor in (1e4, 1e6):
        spindle = rheo.geometry("spindle", rate_factor=2.3, stress_factor=factor)
        torque = spindle.predict(truth, speeds) * wobble
        readings = rheo.Readings(geometry=spindle, angular_speed=speeds, torque=torque)
        fits = rheo.fit(readings, ["power-law", "bingham"], weighting="absolute")
        found.append(rheo.measure_next(fits, line, Product(fits.best.model, 1100.0), 1e-3))
    assert found[1].half_width == pytest.approx(found[0].half_width, rel=1e-5)
    assert found[1].best.setting == pytest.approx(found[0].best.setting)
    assert found[1].best.half_width == pytest.approx(found[0].best.half_width, rel=1e-5)
