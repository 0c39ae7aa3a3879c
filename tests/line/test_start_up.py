"""A full line at rest."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

import rheo
from rheo.line import Equipment, Line, Pipe, Product, Vessel
from rheo.line.safety import START_UP

MODEL = rheo.model("herschel-bulkley", yield_stress=20.0, consistency=5.0, flow_index=0.5)
PASTE = Product(MODEL, 1200.0, static_yield_stress=60.0, name="paste")
LINE = Line(
    suction=(Vessel(2.0), Pipe(3.0, 0.1, name="suction")),
    discharge=(
        Pipe(40.0, 0.08, rise=5.0, name="riser"),
        Equipment(1e4, 1e-3, passage_length=2.0, passage_diameter=0.02, name="cooler"),
        Pipe(30.0, 0.05, name="branch"),
        Vessel(0.0, 5e4),
    ),
)
YIELD = {
    "suction": 4 * 60.0 * 3.0 / 0.1,
    "riser": 4 * 60.0 * 40.0 / 0.08,
    "cooler": 4 * 60.0 * 2.0 / 0.02,
    "branch": 4 * 60.0 * 30.0 / 0.05,
}
STATIC = 1200.0 * 9.80665 * (5.0 - 2.0) + 5e4


def test_the_sum_of_four_tau_l_over_d() -> None:
    found = rheo.start_up(LINE, PASTE)
    assert float(found.yield_pressure) == pytest.approx(sum(YIELD.values()), rel=1e-12)
    assert float(found.static_pressure) == pytest.approx(STATIC, rel=1e-12)
    assert float(found.pressure) == pytest.approx(sum(YIELD.values()) + STATIC, rel=1e-12)
    assert found.restarts is None
    assert "upper estimate" in found.method
    assert found.safety == START_UP


def test_without_one_section() -> None:
    found = dict(rheo.start_up(LINE, PASTE).without)
    assert found.keys() == YIELD.keys()
    for name, pressure in found.items():
        rest = sum(value for other, value in YIELD.items() if other != name)
        assert float(pressure) == pytest.approx(rest + STATIC, rel=1e-12)


def test_against_a_rating_that_is_enough() -> None:
    found = rheo.start_up(LINE, PASTE, rating=8e5)
    assert found.restarts
    assert found.flush_length is None
    assert "within the 8 bar allowed" in found.sentence


def test_against_a_rating_that_is_not_enough() -> None:
    rating = 3e5
    found = rheo.start_up(LINE, PASTE, rating=rating)
    assert not found.restarts
    ratio = sum(YIELD.values()) / 60.0
    assert float(found.allowed_yield_stress) == pytest.approx((rating - STATIC) / ratio, rel=1e-12)
    # With that yield stress the line starts just at the rating.
    just = rheo.start_up(
        LINE, replace(PASTE, static_yield_stress=found.allowed_yield_stress), rating
    )
    assert float(just.pressure) == pytest.approx(rating, rel=1e-12)
    for word in ("more than the 3 bar allowed", "flushed from the pump onwards"):
        assert word in found.sentence


def test_the_flush_is_just_enough() -> None:
    rating = 3e5
    found = rheo.start_up(LINE, PASTE, rating=rating)
    excess = sum(YIELD.values()) + STATIC - rating
    # The riser comes first after the pump.
    length = excess / (4 * 60.0 / 0.08)
    assert length < 40.0
    assert found.flush_length == pytest.approx(length, rel=1e-9)
    assert found.flush_volume == pytest.approx(np.pi / 4 * 0.08**2 * length, rel=1e-9)


def test_no_flush_helps_against_height_alone() -> None:
    found = rheo.start_up(LINE, PASTE, rating=1e4)
    assert found.flush_length is None
    assert float(found.allowed_yield_stress) == 0.0


def test_heat_that_is_needed() -> None:
    def model(temperature: object) -> rheo.Model:
        fall = np.exp(-0.02 * (np.asarray(temperature) - 293.15))
        return rheo.model(
            "herschel-bulkley", yield_stress=20.0 * fall, consistency=5.0, flow_index=0.5
        )

    product = replace(PASTE, model=model, temperature_range=(293.15, 343.15))
    found = rheo.start_up(LINE, product, rating=3e5)
    needed = (3e5 - STATIC) / sum(YIELD.values())
    assert found.heat_to is not None
    # Found on a grid of 201 temperatures, the first that is warm enough.
    exact = 293.15 - np.log(needed) / 0.02
    assert exact <= found.heat_to <= exact + 50.0 / 200.0
    assert "or warmed to" in found.sentence


def test_without_a_static_yield_stress_the_dynamic_one_stands_in() -> None:
    found = rheo.start_up(LINE, replace(PASTE, static_yield_stress=None))
    assert float(found.yield_pressure) == pytest.approx(sum(YIELD.values()) / 3.0, rel=1e-12)
    assert "static-yield-stress-missing" in {caution.code for caution in found.cautions}


def test_equipment_with_unknown_passages_is_named() -> None:
    line = Line(discharge=(Pipe(10.0, 0.05), Equipment(1e4, 1e-3, name="filter")))
    cautions = rheo.start_up(line, PASTE).cautions
    assert any("filter" in caution.sentence for caution in cautions)


def test_a_suction_side_that_no_pump_can_start() -> None:
    line = Line(suction=(Vessel(0.0), Pipe(60.0, 0.05)), discharge=(Pipe(1.0, 0.05),))
    codes = {caution.code for caution in rheo.start_up(line, PASTE).cautions}
    assert "suction-will-not-start" in codes


def test_a_thin_product_needs_nothing_but_height() -> None:
    found = rheo.start_up(LINE, Product(rheo.model("newtonian", viscosity=1e-3), 1000.0), 2e5)
    assert float(found.yield_pressure) == 0.0
    assert found.restarts


def test_sizes_at_once() -> None:
    sizes = np.array([[0.05], [0.1]])
    found = rheo.start_up(Line(discharge=(Pipe(10.0, sizes),)), PASTE, rating=1e5)
    np.testing.assert_allclose(found.pressure, 4 * 60.0 * 10.0 / sizes, rtol=1e-12)
    assert np.array_equal(found.restarts, [[True], [True]])


def test_a_line_that_runs_downhill_needs_no_pressure_to_start() -> None:
    line = Line(suction=(Vessel(2.0),), discharge=(Pipe(10.0, 0.1, rise=-8.0), Vessel(0.0)))
    found = rheo.start_up(line, PASTE)
    push, need = 1200.0 * 9.80665 * 10.0, 4 * 60.0 * 10.0 / 0.1
    assert float(found.pressure) == pytest.approx(need - push, rel=1e-12)
    assert found.sentence.startswith("A full line at rest should start by itself")
    assert "push with 1.18 bar, and it needs up to 0.24 bar to yield" in found.sentence


def test_a_static_yield_stress_below_the_flowing_one_is_doubted() -> None:
    code = "static-below-flowing-yield-stress"
    low = rheo.start_up(LINE, replace(PASTE, static_yield_stress=8.0)).cautions
    (one,) = [one for one in low if one.code == code]
    assert "8 Pa is below the 20 Pa" in one.sentence
    for static in (17.0, 60.0, None):
        near = rheo.start_up(LINE, replace(PASTE, static_yield_stress=static)).cautions
        assert code not in {one.code for one in near}
