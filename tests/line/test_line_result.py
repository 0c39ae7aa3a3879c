"""The result of a line as data, its intervals, Cautions and safety sentences."""

from __future__ import annotations

import json
from dataclasses import replace

import numpy as np
import pytest

import rheo
from rheo.line import SAFETY_SENTENCES, Entrance, Equipment, Line, Pipe, Product, Vessel
from rheo.line.product import interval
from rheo.line.result import plain

MODEL = rheo.model("power-law", consistency=4.0, flow_index=0.5)
SAUCE = Product(MODEL, 1050.0, heat_capacity=3500.0, vapour_pressure=2300.0)
LINE = Line(
    suction=(Vessel(2.0), Entrance(), Pipe(3.0, 0.07, name="suction")),
    discharge=(Pipe(30.0, 0.05, rise=3.0, name="riser"), Equipment(1e4, 1e-3), Vessel()),
)
FLOW = 1e-3


def _draws(count: int) -> rheo.Model:
    return rheo.model("power-law", consistency=np.linspace(3.0, 5.0, count), flow_index=0.5)


def test_as_data_for_json() -> None:
    found = rheo.solve_line(LINE, SAUCE, FLOW, efficiency=0.6, rating=5e5)
    text = json.dumps(found.as_dict(), allow_nan=False)
    data = json.loads(text)
    assert data["differential_pressure"] == float(found.differential_pressure)
    assert [part["name"] for part in data["parts"]] == [part.name for part in found.parts]
    equipment = next(part for part in data["parts"] if part["kind"] == "equipment")
    assert equipment["wall_rate"] is None
    assert data["start_up"]["restarts"] is True
    assert {caution["code"] for caution in data["cautions"]} == {c.code for c in found.cautions}


def test_as_data_for_many_flows() -> None:
    found = rheo.solve_line(LINE, SAUCE, np.array([1e-3, 2e-3]))
    data = json.loads(json.dumps(found.as_dict(), allow_nan=False))
    assert len(data["differential_pressure"]) == 2
    assert found.profile is None
    alone = [float(rheo.solve_line(LINE, SAUCE, q).differential_pressure) for q in (1e-3, 2e-3)]
    np.testing.assert_allclose(found.differential_pressure, alone, rtol=1e-13)


def test_plain_data() -> None:
    assert plain(None) is None
    assert plain(np.nan) is None
    assert plain((1.0, np.array([1.0, np.inf]))) == [1.0, [1.0, None]]
    assert plain(np.array([True, False])) == [True, False]
    assert plain("text") == "text"


def test_the_interval_is_that_of_the_draws() -> None:
    product = replace(
        SAUCE, draws=(_draws(101), rheo.model("newtonian", viscosity=np.full(50, 0.3)))
    )
    found = rheo.solve_line(LINE, product, FLOW)
    assert product.draw_count == 151
    assert found.draws is not None
    assert found.draws.shape == (151,)
    one = replace(SAUCE, model=rheo.model("power-law", consistency=5.0, flow_index=0.5))
    alone = float(rheo.solve_line(LINE, one, FLOW).differential_pressure)
    assert found.draws[100] == pytest.approx(alone, rel=1e-12)
    assert found.differential_pressure_interval == interval(found.draws)
    low, high = found.differential_pressure_interval
    assert low == pytest.approx(np.percentile(found.draws, 2.5))
    assert high == pytest.approx(np.percentile(found.draws, 97.5))


def test_intervals_for_many_flows() -> None:
    product = replace(SAUCE, draws=(_draws(21),))
    found = rheo.solve_line(LINE, product, np.array([1e-3, 2e-3]))
    assert found.draws is not None
    assert found.draws.shape == (2, 21)
    assert found.differential_pressure_interval is not None
    low, high = found.differential_pressure_interval
    assert np.all((low < found.differential_pressure) & (found.differential_pressure < high))


def test_a_result_that_does_not_hang_on_the_draws_is_still_one_a_draw() -> None:
    product = replace(SAUCE, draws=(_draws(7),))
    assert product.over_draws(lambda _: 3.0).tolist() == [3.0] * 7
    with pytest.raises(rheo.InputError, match="the product has no draws"):
        SAUCE.over_draws(lambda _: 3.0)


@pytest.mark.parametrize(
    ("line", "product", "flow", "code"),
    [
        (LINE, SAUCE, FLOW, "measured-range-unknown"),
        (LINE, replace(SAUCE, measured_rates=(0.1, 1.0)), FLOW, "outside-measured-range"),
        (LINE, replace(SAUCE, vapour_pressure=None), FLOW, "npsh-unknown"),
        (
            Line((Vessel(0.0), Pipe(300.0, 0.03)), (Pipe(1.0, 0.05),)),
            SAUCE,
            FLOW,
            "npsh-negative",
        ),
        (
            Line((Vessel(0.0), Pipe(300.0, 0.03)), (Pipe(1.0, 0.05),)),
            SAUCE,
            FLOW,
            "below-vapour-pressure",
        ),
        (Line(discharge=(Pipe(20.0, 0.2, rise=-20.0),)), SAUCE, FLOW, "runs-by-itself"),
    ],
)
def test_cautions_of_a_duty(line: Line, product: Product, flow: float, code: str) -> None:
    assert code in {caution.code for caution in rheo.solve_line(line, product, flow).cautions}


def test_no_caution_where_nothing_is_wrong() -> None:
    product = replace(SAUCE, measured_rates=(0.1, 1000.0))
    assert rheo.solve_line(LINE, product, FLOW).cautions == ()


def test_safety_sentences_are_one_wording() -> None:
    found = rheo.solve_line(LINE, SAUCE, FLOW)
    assert set(found.safety) <= set(SAFETY_SENTENCES.values())
    assert found.start_up.safety == SAFETY_SENTENCES["start-up"]
    for key, sentence in SAFETY_SENTENCES.items():
        assert "licensed engineer" in sentence, key
        assert "local" in sentence.lower(), key
    assert "process authority" in SAFETY_SENTENCES["food-safety"]


def test_pipes_of_one_name_have_cautions_of_their_own() -> None:
    pipe = Pipe(10.0, 0.05, roughness=0.004, name="pipe")
    product = Product(rheo.model("newtonian", viscosity=0.001), 1000.0)
    found = rheo.line.solve_line(Line(discharge=(pipe, pipe)), product, 4e-3)
    places = {one.place for one in found.cautions if one.code == "very-rough"}
    assert places == {"pipe (pipe 1)", "pipe (pipe 2)"}
