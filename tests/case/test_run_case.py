"""From a case to its result."""

import json

import numpy as np
import pytest

import rheo
from rheo.case import case_from_text, changed
from rheo.case.result import sizes_to_compare
from rheo.case.run import fit_case
from rheo.errors import CaseError, InputError
from rheo.line import catalogue

RATES = np.geomspace(0.5, 300.0, 16)
WOBBLE = np.where(np.arange(16) % 2, 1.01, 0.99)
TRUTH = rheo.model("power-law", consistency=6.0, flow_index=0.4)


def table(temperature=None):
    heading = "Shear rate [1/s],Shear stress [Pa]"
    extra = "" if temperature is None else f",{temperature}"
    rows = [
        f"{rate!r},{stress!r}{extra}"
        for rate, stress in zip(
            RATES.tolist(), (TRUTH.stress(RATES) * WOBBLE).tolist(), strict=True
        )
    ]
    return "\n".join([heading + ("" if temperature is None else ",Temperature [°C]"), *rows])


CASE = case_from_text(
    f"""
schema = 1
title = "made up"
product = {{ name = "gel", density = "1050 kg/m3", temperature = "20 °C" }}
duty = {{ flow = "4 m3/h", hours_a_year = 5000 }}
fit = {{ models = ["newtonian", "power-law", "bingham"] }}
doubt = {{ draws = 200 }}
[[readings]]
text = '''
{table(20)}
'''
[line]
suction = [{{ part = "vessel", level = "1 m" }}, {{ part = "entrance" }}]
discharge = [
    {{ part = "pipe", name = "riser", length = "20 m", size = "ISO 2037 51", rise = "3 m" }},
    {{ part = "vessel" }},
]
[pump]
efficiency = "50 %"
rated_pressure = "6 bar"
"""
)


@pytest.fixture(scope="module")
def result():
    return rheo.run_case(CASE)


def test_the_walk_is_that_of_its_steps(result):
    readings = rheo.read_readings(table(20).encode(), name="table")
    fits = rheo.fit(readings, models=["newtonian", "power-law", "bingham"])
    assert result.chosen.key == fits.best.key == "power-law"
    for key, value in fits.best.model.parameters.items():
        assert float(result.model.parameters[key]) == pytest.approx(float(value), rel=1e-12)
    product = rheo.Product(
        fits.best.model, density=1050.0, temperature=293.15, draws=fits.draws(200, seed=1)
    )
    line = rheo.solve_line(CASE.line.build(), product, 4 / 3600, efficiency=0.5, rating=6e5)
    assert result.line.differential_pressure == pytest.approx(line.differential_pressure, rel=1e-12)
    np.testing.assert_allclose(
        result.line.differential_pressure_interval,
        line.differential_pressure_interval,
        rtol=1e-12,
    )
    assert result.line.shaft_power == pytest.approx(line.shaft_power, rel=1e-12)
    assert result.line.start_up.rating == 6e5


def test_wall_rates_against_the_measured_range(result):
    low, high = result.product.measured_rates
    assert (low, high) == pytest.approx((0.5, 300.0))
    assert result.wall_rates[0] == pytest.approx(float(result.pipes[0].wall_rate))
    assert result.inside_measured_range is True
    fast = rheo.run_case(changed(CASE, {"duty.flow": "40 m3/h"}))
    assert fast.inside_measured_range is False
    assert "outside-measured-range" in {one.code for one in fast.cautions}


def test_json_holds_plain_finite_numbers(result):
    text = json.dumps(result.as_dict(), allow_nan=False)
    data = json.loads(text)
    assert data["model"]["key"] == "power-law"
    assert data["pressure_drop"] == pytest.approx(float(result.line.friction_pressure))
    assert data["line"]["parts"][1]["name"] == "riser"
    assert data["pipes"][0]["local_flow_index"] == pytest.approx(0.4, abs=0.02)
    assert data["doubt"]["shares"][0]["share"] >= data["doubt"]["shares"][1]["share"]
    assert "operating" not in data


def test_a_model_that_the_case_names_is_used():
    named = rheo.run_case(changed(CASE, {"fit.model": "bingham"}))
    assert named.chosen.key == named.model.key == "bingham"
    assert named.fits.best.key == "power-law"
    assert {draw.key for draw in named.product.draws} == {"bingham"}


def test_half_of_the_walk_can_be_kept(result):
    fitted = fit_case(CASE)
    again = rheo.run_case(changed(CASE, {"duty.flow": "5 m3/h"}), fitted=fitted)
    assert again.chosen is fitted.chosen
    assert float(again.line.flow) == pytest.approx(5 / 3600)
    assert again.line.friction_pressure > result.line.friction_pressure


def test_readings_at_hand_are_not_read_again(result):
    given = rheo.run_case(CASE, readings=[result.readings[0].with_excluded([0])])
    assert given.product.measured_rates[0] > 0.5
    with pytest.raises(CaseError, match="2 sets of readings are given and the case has 1"):
        rheo.run_case(CASE, readings=[*result.readings, *result.readings])


def test_another_temperature_than_that_of_the_readings_is_said():
    warm = rheo.run_case(changed(CASE, {"product.temperature": "45 °C"}))
    found = next(one for one in warm.cautions if one.code == "temperature-of-readings")
    assert "20.0 °C" in found.sentence
    assert "45.0 °C" in found.sentence


def test_readings_that_do_not_say_their_temperature_are_doubted():
    bare = rheo.run_case(changed(CASE, {"readings.0.text": table()}))
    found = next(one for one in bare.cautions if one.code == "temperature-of-readings-unknown")
    assert "20.0 °C of the product" in found.sentence
    assert found.code not in {one.code for one in rheo.run_case(CASE).cautions}


def test_without_a_temperature_that_of_the_readings_is_taken():
    case = changed(CASE, {"product.temperature": None})
    assert rheo.run_case(case).product.temperature == pytest.approx(293.15)
    bare = changed(case, {"readings.0.text": table()})
    assert rheo.run_case(bare).product.temperature == pytest.approx(293.15)


def test_particles_that_settle_are_said():
    solids = {"diameter": "2 mm", "density": "2650 kg/m3", "volume_fraction": "10 %"}
    coarse = rheo.run_case(changed(CASE, {"product.solids": solids}))
    codes = {one.code for one in coarse.cautions}
    assert {"settles-at-rest", "laminar-settling"} <= codes
    assert next(one for one in coarse.cautions if one.code == "settles-at-rest").place == "riser"


POINTS = [
    {"flow": "0 m3/h", "head": "40 m", "efficiency": "0 %", "npsh_required": "1 m"},
    {"flow": "4 m3/h", "head": "30 m", "efficiency": "60 %", "npsh_required": "2 m"},
    {"flow": "8 m3/h", "head": "10 m", "efficiency": "30 %", "npsh_required": "4 m"},
]
CENTRIFUGAL = {"kind": "centrifugal", "points": POINTS, "for_water": False}


def test_a_centrifugal_pump_gives_efficiency_rating_and_npsh():
    vapour = {"product.vapour_pressure": "2.3 kPa"}
    found = rheo.run_case(changed(CASE, {"pump": CENTRIFUGAL, **vapour}))
    assert found.efficiency == pytest.approx(0.6)
    assert found.line.start_up.rating == pytest.approx(40 * 1050 * 9.80665)
    assert found.limits.pressure == found.line.start_up.rating
    assert found.limits.min_npsh == pytest.approx(2.0)
    assert found.operating is not None
    assert found.operating.pressure == pytest.approx(
        float(found.pump.pressure(found.operating.flow, 1050)), rel=1e-6
    )


def test_limits_of_the_case_go_before_those_of_the_pump(result):
    assert result.limits.pressure == 6e5
    assert result.limits.start_up_pressure == 6e5
    limited = rheo.run_case(
        changed(CASE, {"limits": {"pressure": "3 bar", "max_velocity": "1 m/s"}}),
    )
    assert limited.limits.pressure == pytest.approx(3e5)
    assert limited.limits.start_up_pressure == 6e5
    assert limited.limits.max_velocity == 1.0


def test_sizes_are_those_of_the_case_or_of_the_standard_of_its_pipe():
    assert sizes_to_compare(CASE) == catalogue("ISO 2037")
    steel = changed(CASE, {"line.discharge.0.size": "DN 50 schedule 40"})
    assert sizes_to_compare(steel) == catalogue("ASME B36.10M", "40")
    named = changed(
        CASE,
        {
            "sizes": {
                "names": ["ISO 2037 38"],
                "own": [{"label": "hose", "inside_diameter": "45 mm"}],
            }
        },
    )
    assert [size.label for size in sizes_to_compare(named)] == ["38", "hose"]
    with pytest.raises(CaseError, match="no size is left to compare"):
        changed(CASE, {"sizes": {"standard": "ISO 2037", "smallest": "2 m"}})
    with pytest.raises(InputError, match="unknown standard 'ISO 9'"):
        changed(CASE, {"sizes": {"standard": "ISO 9"}})


def test_costs_choose_the_size():
    cost = {"energy_price": 0.2, "capital_price": 80, "capital_at_diameter": "50 mm"}
    sizing = rheo.run_case(
        changed(CASE, {"cost": cost, "sizes": {"standard": "ISO 2037", "smallest": "25 mm"}})
    ).sizing
    costs = {one.annual_cost: one for one in sizing.candidates if one.passes}
    assert sizing.recommended is costs[min(costs)]
    with pytest.raises(CaseError, match=r"cost: it needs duty\.hours_a_year"):
        changed(CASE, {"cost": cost, "duty.hours_a_year": None})
    with pytest.raises(CaseError, match="cost: it needs the pump's efficiency"):
        changed(CASE, {"cost": cost, "pump": {"rated_pressure": "6 bar"}})
    with pytest.raises(CaseError, match=r"capital_by_size\.DN 7: unknown pipe size 'DN 7'"):
        changed(CASE, {"cost": {"energy_price": 1, "capital_by_size": {"DN 7": 3}}})


def test_holding_tube_and_cleaning_where_they_are_asked_for(result):
    assert result.holding is None
    assert result.cleaning is None
    asked = rheo.run_case(
        changed(
            CASE, {"holding_tube": {"hold_time": "30 s", "size": "ISO 2037 51"}, "cleaning": {}}
        )
    )
    assert float(asked.holding.length) == pytest.approx(
        float(result.pipes[0].velocity * result.pipes[0].velocity_ratio) * 30, rel=1e-9
    )
    assert asked.cleaning.velocity == 1.5
    assert {"holding", "cleaning"} <= set(asked.as_dict())
    with pytest.raises(CaseError, match="found both of 'size' and 'inside_diameter'"):
        changed(
            CASE,
            {"holding_tube": {"hold_time": "1 s", "size": "ISO 2037 51", "inside_diameter": "1 m"}},
        )


def test_the_system_curve_passes_through_the_duty(result):
    curve = result.system_curve
    at = np.interp(np.log(result.flow), np.log(curve.flow), curve.pressure)
    assert at == pytest.approx(float(result.line.differential_pressure), rel=2e-3)
    assert np.all(curve.low <= curve.high)


def test_two_sets_are_fitted_together(result):
    document = CASE.document()
    document["readings"].append({"text": table(20.5), "exclude": [1]})
    both = rheo.run_case(rheo.case.case_from_document(document))
    assert len(both.readings) == 2
    assert both.chosen.points.size == 31
    assert (
        both.chosen.parameters["flow_index"].stderr < result.chosen.parameters["flow_index"].stderr
    )


def warm_table():
    """Stresses of a power law whose consistency halves from 20 to 50 °C."""
    rows = ["Shear rate [1/s],Shear stress [Pa],Temperature [°C]"]
    for celsius, factor in ((20, 1.0), (50, 0.5)):
        stress = factor * TRUTH.stress(RATES) * WOBBLE
        rows += [
            f"{a!r},{b!r},{celsius}" for a, b in zip(RATES.tolist(), stress.tolist(), strict=True)
        ]
    return "\n".join(rows)


def test_readings_at_several_temperatures_give_the_curve_at_each_part():
    cooled = changed(
        CASE,
        {
            "readings.0.text": warm_table(),
            "product.temperature": "50 °C",
            "line.discharge.0.temperature": "20 °C",
        },
    )
    found = rheo.run_case(cooled)
    assert found.product.knows_temperature
    assert found.product.temperature_range == pytest.approx((293.15, 323.15))
    warm, cold = (found.product.model_at(kelvin) for kelvin in (323.15, 293.15))
    ratio = float(warm.parameters["consistency"] / cold.parameters["consistency"])
    assert ratio == pytest.approx(0.5, rel=0.02)
    one = rheo.run_case(CASE)
    riser = [next(p for p in r.line.parts if p.name == "riser") for r in (found, one)]
    assert riser[0].pressure_loss == pytest.approx(riser[1].pressure_loss, rel=0.02)
    state = found.as_dict()["fits"]["state"]
    assert state["reference"] == pytest.approx(323.15)
    assert state["range"] == pytest.approx([293.15, 323.15])


def test_entrance_loss_is_fitted_at_one_temperature_only():
    case = changed(CASE, {"readings.0.text": warm_table(), "fit.entrance": True})
    with pytest.raises(CaseError, match="fit: entrance loss and slip are fitted at one"):
        rheo.run_case(case)


def test_slip_that_is_fitted_is_no_longer_a_caution():
    tubes = [
        rheo.geometry("tube", diameter=size, length=1.5, slip_coefficient=2e-4)
        for size in (0.008, 0.014, 0.025)
    ]
    rows = ["Diameter [m],Length [m],Flow [m3/s],Pressure drop [Pa]"]
    for number, tube in enumerate(tubes):
        flows = tube.setting_for_rate(TRUTH, RATES[::2] * 1.1**number)
        drops = tube.predict(TRUTH, flows)
        size = float(tube.dimensions["diameter"])
        pairs = zip(flows.tolist(), drops.tolist(), strict=True)
        rows += [f"{size!r},1.5,{flow!r},{drop!r}" for flow, drop in pairs]
    ignored = changed(
        CASE, {"readings.0.text": "\n".join(rows), "readings.0.geometry": {"kind": "tube"}}
    )
    fitted = changed(ignored, {"fit.slip": True, "fit.models": ["power-law"]})
    assert "slip" in {one.code for one in rheo.run_case(ignored).cautions}
    found = rheo.run_case(fitted)
    assert "slip" not in {one.code for one in found.cautions}
    assert found.chosen.parameters["slip_coefficient"].value == pytest.approx(2e-4, rel=1e-3)
    assert found.chosen.parameters["flow_index"].value == pytest.approx(0.4, rel=1e-4)
