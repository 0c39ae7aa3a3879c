"""What a line is made of, and the sentences for what cannot be one."""

from __future__ import annotations

import re

import numpy as np
import pytest

import rheo
from rheo.line import (
    Entrance,
    Equipment,
    Exit,
    Fitting,
    Line,
    Pipe,
    Product,
    Reducer,
    Vessel,
    water,
)
from rheo.line.route import route

WATER = rheo.model("newtonian", viscosity=1e-3)


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: Pipe(0.0, 0.05), "pipe: length [m] is 0; it must be above 0"),
        (lambda: Pipe(1.0, -0.05), "pipe: inside_diameter [m] is -0.05; it must be above 0"),
        (lambda: Pipe(np.nan, 0.05), "pipe: length [m] is nan; it must be above 0"),
        (lambda: Pipe(1.0), "pipe: give inside_diameter [m] or a catalogue size"),
        (lambda: Pipe(1.0, 0.05, rise=2.0), "rise [m] is more than the length"),
        (lambda: Pipe(1.0, 0.05, roughness=-1e-5), "roughness [m] is -10⁻⁵; it must be 0 or more"),
        (lambda: Pipe(1.0, 0.05, roughness=0.02), "less than a quarter of the inside diameter"),
        (lambda: Pipe(1.0, 0.05, temperature=-3.0), "temperature [K] is -3; it must be above 0"),
        (
            lambda: Pipe(1.0, 0.05, ambient_temperature=280.0),
            "give ambient_temperature and heat_transfer_coefficient together",
        ),
        (lambda: Pipe("far", 0.05), "length [m] is 'far'; it must be above 0"),
        (lambda: Fitting("bend", count=0), "bend: count is 0; it must be a whole number above 0"),
        (lambda: Fitting("bend", count=1.5), "count is 1.5"),
        (lambda: Fitting("bend", loss_coefficient=-1.0), "loss_coefficient [-] is -1"),
        (
            lambda: Fitting("elbow-90-lang", name="bend at the wall"),
            "bend at the wall: unknown fitting 'elbow-90-lang' (did you mean 'elbow-90-long'?)",
        ),
        (lambda: Fitting("bend"), "or give its loss_coefficient"),
        (lambda: Fitting("elbow-90", table="crane"), "unknown table 'crane'; there are darby-3k"),
        (lambda: Entrance(kind="hole"), "unknown entrance 'hole'; there are entrance, entrance-"),
        (lambda: Reducer(angle=4.0), "reducer: angle is 4 rad; it must be above 0 and at most π"),
        (lambda: Entrance(-0.5), "entrance: loss_coefficient [-] is -0.5"),
        (lambda: Exit(-0.5), "exit: loss_coefficient [-] is -0.5"),
        (lambda: Equipment(-1.0, 1e-3), "equipment: loss [Pa] is -1; it must be 0 or more"),
        (lambda: Equipment(1.0, 0.0), "equipment: at_flow [m3/s] is 0; it must be above 0"),
        (
            lambda: Equipment(1.0, 1e-3, passage_length=1.0),
            "give passage_length and passage_diameter together",
        ),
        (lambda: Vessel(np.inf), "vessel: level [m] is inf; it must be a finite number"),
        (lambda: Line(), "the line has no pipe"),
        (lambda: Line(discharge=(Fitting("bend", loss_coefficient=1.0),)), "the line has no pipe"),
        (lambda: Line(discharge=("pipe",)), "str is no part of a line; there are Vessel, Pipe"),
        (
            lambda: Line(discharge=(Vessel(name="middle"), Pipe(1.0, 0.05))),
            "vessel 'middle' stands between other parts on the discharge side",
        ),
        (
            lambda: Line(discharge=(Pipe(1.0, 0.05), Entrance(name="odd"))),
            "'odd' stands between other parts; an Entrance may only come first",
        ),
        (
            lambda: Line(discharge=(Pipe(1.0, 0.05),), atmospheric_pressure=0.0),
            "atmospheric_pressure [Pa] is 0; it must be above 0",
        ),
        (lambda: Product(WATER, 0.0), "product: density [kg/m3] is 0; it must be above 0"),
        (
            lambda: Product(WATER, 1000.0, measured_rates=(10.0, 1.0)),
            "measured_rates [1/s] is 10 to 1; both must be above 0 and rising",
        ),
        (lambda: water(200.0), "water temperature is 200 K; it must lie between 273 and 373 K"),
    ],
)
def test_what_cannot_be_is_refused_in_words(make: object, sentence: str) -> None:
    with pytest.raises(rheo.InputError, match=re.escape(sentence)):
        make()


@pytest.mark.parametrize("flow", [0.0, -1.0, np.nan])
def test_a_flow_must_be_above_zero(flow: float) -> None:
    line = Line(discharge=(Pipe(1.0, 0.05),))
    with pytest.raises(rheo.InputError, match=r"flow \[m3/s\] is .*; it must be above 0"):
        rheo.solve_line(line, Product(WATER, 1000.0), flow)


def test_an_efficiency_is_a_share() -> None:
    line = Line(discharge=(Pipe(1.0, 0.05),))
    with pytest.raises(
        rheo.InputError, match=r"efficiency .* is 60; it must be above 0 and at most"
    ):
        rheo.solve_line(line, Product(WATER, 1000.0), 1e-3, efficiency=60)


def _own(name: str) -> Fitting:
    return Fitting(name, loss_coefficient=1.0)


def test_a_fitting_takes_the_pipe_before_it_and_else_the_one_after() -> None:
    first, second = Pipe(1.0, 0.05, name="first"), Pipe(1.0, 0.08, name="second")
    line = Line(discharge=(_own("a"), first, _own("b"), second, _own("c")))
    found = {step.part.name: step.pipe for step in route(line)}
    assert found["a"] is first
    assert found["b"] is first
    assert found["c"] is second


def test_a_fitting_on_a_side_without_pipe_takes_the_other_side() -> None:
    pipe = Pipe(1.0, 0.05)
    line = Line(suction=(Vessel(), Entrance(), _own("foot valve")), discharge=(pipe,))
    assert {step.pipe for step in route(line)} == {pipe}


def test_a_reducer_at_the_pump_joins_both_sides() -> None:
    wide, narrow = Pipe(1.0, 0.08), Pipe(1.0, 0.05)
    line = Line(suction=(wide, Reducer()), discharge=(narrow,))
    step = next(step for step in route(line) if isinstance(step.part, Reducer))
    assert (step.before, step.after) == (wide, narrow)


def test_a_reducer_needs_two_pipes() -> None:
    line = Line(discharge=(Pipe(1.0, 0.05), Reducer(name="cone")))
    with pytest.raises(rheo.InputError, match="reducer 'cone' needs a pipe before it and a pipe"):
        route(line)


def test_an_exit_is_added_before_a_vessel_and_never_twice() -> None:
    pipe = Pipe(1.0, 0.05)
    added = route(Line(discharge=(pipe, Vessel(name="tank"))))
    assert [step.part.name for step in added] == ["pipe", "exit into tank"]
    given = route(Line(discharge=(pipe, Exit(1.0), Vessel(name="tank"))))
    assert [step.part.name for step in given] == ["pipe", "exit"]


def test_between_two_flanges_of_one_pipe_only_friction_and_height_count() -> None:
    line = Line(discharge=(Pipe(30.0, 0.05, rise=4.0),))
    found = rheo.solve_line(line, Product(WATER, 1000.0), 2e-3)
    by_hand = float(found.friction_pressure) + 1000.0 * 9.80665 * 4.0
    assert float(found.differential_pressure) == pytest.approx(by_hand, rel=1e-14)
    assert float(found.kinetic_pressure) == 0.0


def test_a_wider_end_gives_kinetic_energy_back() -> None:
    """Bernoulli: laminar, α = 2 in both, no loss in a cone whose coefficient is 0."""
    oil = Product(rheo.model("newtonian", viscosity=0.5), 900.0)
    flow = 1e-3
    line = Line(
        discharge=(Pipe(1.0, 0.04), Reducer(loss_coefficient=0.0), Pipe(1.0, 0.08, name="wide"))
    )
    found = rheo.solve_line(line, oil, flow)
    speed = 4 * flow / (np.pi * np.array([0.04, 0.08]) ** 2)
    by_hand = 2 * 0.5 * 900.0 * (speed[1] ** 2 - speed[0] ** 2)
    assert float(found.kinetic_pressure) == pytest.approx(by_hand, rel=1e-9)


def test_a_reducer_counts_in_the_smaller_pipe_either_way() -> None:
    oil = Product(rheo.model("newtonian", viscosity=0.5), 900.0)
    narrow, wide = Pipe(1.0, 0.04), Pipe(1.0, 0.08)
    speed = 4 * 1e-3 / (np.pi * 0.04**2)
    for pair in ((narrow, wide), (wide, narrow)):
        line = Line(discharge=(pair[0], Reducer(loss_coefficient=0.4), pair[1]))
        loss = rheo.solve_line(line, oil, 1e-3).parts[1].pressure_loss
        assert float(loss) == pytest.approx(0.4 * 0.5 * 900.0 * speed**2, rel=1e-12)


def test_water_at_twenty_degrees() -> None:
    """1.002 mPa.s, 998.2 kg/m3 and 2339 Pa at 20 °C (steam tables; from memory).

    The tolerances are those that the short forms are known for.
    """
    found = water(293.15)
    assert float(found.model_at(293.15).viscosity(1.0)) == pytest.approx(1.002e-3, rel=0.025)
    assert float(found.density) == pytest.approx(998.2, rel=5e-4)
    assert found.vapour_pressure == pytest.approx(2339.0, rel=1e-3)


OIL = Product(rheo.model("newtonian", viscosity=0.1), 900.0)


def _loss(part: Fitting | Entrance, flow: float) -> tuple[float, float, float]:
    """Loss over ρV²/2, Reynolds number and inside diameter [in] in a 50 mm pipe."""
    parts = (part, Pipe(1.0, 0.05)) if isinstance(part, Entrance) else (Pipe(1.0, 0.05), part)
    found = rheo.solve_line(Line(discharge=parts), OIL, flow)
    row = next(one for one in found.parts if one.kind != "pipe")
    head = 0.5 * 900.0 * float(row.velocity) ** 2
    return float(row.pressure_loss) / head, float(row.reynolds), 0.05 / 0.0254


@pytest.mark.parametrize("flow", [5e-4, 5e-2])
def test_published_fittings_by_their_forms(flow: float) -> None:
    """Long-radius elbow: Darby 800/Re + 0.071(1 + 4.2/D^0.3); Hooper 800/Re + 0.2(1 + 1/D).

    D in inches; constants from memory.
    """
    darby, reynolds, inches = _loss(Fitting("elbow-90-long", count=3), flow)
    by_hand = 3 * (800 / reynolds + 0.071 * (1 + 4.2 / inches**0.3))
    assert darby == pytest.approx(by_hand, rel=1e-9)
    hooper, reynolds, inches = _loss(Fitting("elbow-90-long", table="hooper-2k"), flow)
    assert hooper == pytest.approx(800 / reynolds + 0.2 * (1 + 1 / inches), rel=1e-9)


def test_what_only_hooper_lists_is_found() -> None:
    """Butterfly valve: 800/Re + 0.25(1 + 1/D), from memory."""
    found, reynolds, inches = _loss(Fitting("valve-butterfly"), 1e-3)
    assert found == pytest.approx(800 / reynolds + 0.25 * (1 + 1 / inches), rel=1e-9)


@pytest.mark.parametrize(
    ("kind", "constant"),
    [("entrance", 0.5), ("entrance-projecting", 1.0), ("entrance-rounded", 0.04)],
)
def test_entrances_by_their_form(kind: str, constant: float) -> None:
    """Hooper 1981, from memory: 160/Re and a constant."""
    found, reynolds, _ = _loss(Entrance(kind=kind), 1e-3)
    assert found == pytest.approx(160 / reynolds + constant, rel=1e-9)
    own, _, _ = _loss(Entrance(0.3), 1e-3)
    assert own == pytest.approx(0.3, rel=1e-12)


def test_a_reducer_without_coefficient_takes_the_published_loss() -> None:
    """Sudden narrowing in turbulent flow, Hooper 1988: (0.6 + 0.48 f)β²(β² - 1), Darcy's f."""
    thin = Product(rheo.model("newtonian", viscosity=1e-3), 1000.0)
    line = Line(discharge=(Pipe(1.0, 0.08), Reducer(), Pipe(1.0, 0.04)))
    found = rheo.solve_line(line, thin, 5e-3).parts
    wide = found[0]
    area = (0.08 / 0.04) ** 2
    k = (0.6 + 0.48 * 4 * float(wide.friction_factor)) * area * (area - 1)
    by_hand = k * 0.5 * 1000.0 * float(wide.velocity) ** 2
    assert float(found[1].pressure_loss) == pytest.approx(by_hand, rel=1e-9)


def test_no_vessel_is_below_a_full_vacuum() -> None:
    with pytest.raises(
        rheo.InputError, match=r"gauge_pressure is -2 bar; a full vacuum is -1\.013 bar"
    ):
        Line(suction=(Vessel(1.0, -2e5, name="still"),), discharge=(Pipe(3.0, 0.05),))
    Line(suction=(Vessel(1.0, -101_325.0),), discharge=(Pipe(3.0, 0.05),))
    Line(discharge=(Pipe(3.0, 0.05), Vessel(0.0, -1.5e5)), atmospheric_pressure=2e5)
