"""Every size against the limits, and the least annual cost."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

import rheo
from rheo.line import (
    CapitalLaw,
    Costs,
    Entrance,
    Fitting,
    Limits,
    Line,
    Pipe,
    PipeSize,
    Product,
    Vessel,
    catalogue,
    cleaning,
    size_survey,
    water,
)
from rheo.line.size_survey import SizeSurvey, in_order
from rheo.line.size_values import with_diameters
from rheo.line.sizing import judge_sizes

SAUCE = Product(
    rheo.model("power-law", consistency=8.0, flow_index=0.4),
    1050.0,
    vapour_pressure=2300.0,
    measured_rates=(0.5, 150.0),
    name="sauce",
)
LINE = Line(
    suction=(Vessel(2.0), Entrance(), Pipe(3.0, 0.08, fixed_size=True, name="suction")),
    discharge=(Pipe(60.0, 0.05, rise=3.0), Fitting("bends", 4, loss_coefficient=0.9), Vessel()),
)
FLOW = 1.5e-3
COSTS = Costs(hours=5000.0, energy_price=0.2, efficiency=0.5, annual_charge=0.15)


def _draws(count: int = 80) -> tuple[rheo.Model, ...]:
    rng = np.random.default_rng(11)
    return (
        rheo.model(
            "power-law",
            consistency=8.0 * np.exp(0.15 * rng.standard_normal(count)),
            flow_index=0.4 + 0.02 * rng.standard_normal(count),
        ),
    )


def _one_by_one(size: PipeSize, product: Product = SAUCE, flow: float = FLOW) -> object:
    line = with_diameters(LINE, np.asarray(size.inside_diameter))
    return rheo.solve_line(line, product, flow)


@pytest.mark.parametrize("n", [0.3, 0.6, 1.0])
@pytest.mark.parametrize("price", [0.05, 0.3])
def test_least_cost_agrees_with_trying_each_size(n: float, price: float) -> None:
    product = replace(SAUCE, model=rheo.model("power-law", consistency=8.0, flow_index=n))
    costs = replace(COSTS, energy_price=price)
    sizes = catalogue("ISO 2037")
    found = rheo.size_line(LINE, product, FLOW, sizes, costs=costs)
    totals = {}
    for size in sizes:
        pressure = float(_one_by_one(size, product).differential_pressure)
        kilowatts = pressure * FLOW / 0.5 / 1000.0
        capital = 60.0 * 120.0 * (size.inside_diameter / 0.05) ** 1.5
        totals[size.name] = 0.15 * capital + kilowatts * 5000.0 * price
    assert found.recommended is not None
    assert found.recommended.size.name == min(totals, key=lambda name: totals[name])
    for candidate in found.candidates:
        assert candidate.annual_cost == pytest.approx(totals[candidate.size.name], rel=1e-10)


@pytest.mark.parametrize("n", [0.4, 0.8])
def test_least_cost_lies_beside_the_optimum_of_a_continuous_search(n: float) -> None:
    """For laminar flow of a power law the optimum is known in closed form.

    Energy goes with D^-(3n + 1), capital with D^1.5, so that the least total lies where
    (3n + 1) energy = 1.5 · charge · capital.
    """
    product = replace(SAUCE, model=rheo.model("power-law", consistency=8.0, flow_index=n))
    line = Line(discharge=(Pipe(60.0, 0.05),))
    at = 0.1
    found = rheo.solve_line(with_diameters(line, np.asarray(at)), product, FLOW)
    energy = float(COSTS.energy(found.differential_pressure, FLOW))
    capital = 0.15 * 60.0 * float(COSTS.law.per_metre(at))
    best = at * ((3 * n + 1) * energy / (1.5 * capital)) ** (1 / (3 * n + 1 + 1.5))
    fine = tuple(PipeSize("own", f"{d:.6f}", float(d)) for d in best * np.geomspace(0.9, 1.1, 2001))
    chosen = rheo.size_line(line, product, FLOW, fine, costs=COSTS).recommended
    assert chosen is not None
    assert chosen.regime == "laminar"
    # To the step of the fine list.
    assert chosen.size.inside_diameter == pytest.approx(best, rel=2e-4)
    steps = catalogue("ISO 2037")
    coarse = rheo.size_line(line, product, FLOW, steps, costs=COSTS).recommended
    assert coarse is not None
    inside = [size.inside_diameter for size in steps]
    place = inside.index(coarse.size.inside_diameter)
    assert inside[max(place - 1, 0)] < best < inside[min(place + 1, len(inside) - 1)]


def test_every_value_is_that_of_the_line_by_itself() -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("DIN 11866 A"))
    for candidate in found.candidates[::3]:
        alone = _one_by_one(candidate.size)
        pipe = next(part for part in alone.parts if part.name == "pipe")
        assert candidate.pressure == pytest.approx(float(alone.differential_pressure), rel=1e-12)
        assert candidate.velocity == pytest.approx(float(pipe.velocity), rel=1e-12)
        assert candidate.wall_rate == pytest.approx(float(pipe.wall_rate), rel=1e-12)
        assert candidate.residence_time == pytest.approx(float(alone.residence_time), rel=1e-12)
        assert candidate.npsh == pytest.approx(float(alone.npsh_available), rel=1e-12)
        if pipe.regime == "laminar":
            fastest = (3 * 0.4 + 1) / (0.4 + 1)
            held = 60.0 / (fastest * float(pipe.velocity))
            assert candidate.hold_time == pytest.approx(held, rel=1e-9)


@pytest.mark.parametrize(
    ("limits", "reason"),
    [
        (Limits(pressure=3e5), "(at most 3 bar allowed)"),
        (Limits(max_velocity=1.0), "velocity"),
        (Limits(max_wall_rate=100.0), "wall shear rate"),
        (Limits(keep_to_measured_rates=True), "1/s (measured 0.5 to 150)"),
        (Limits(min_hold_time=40.0), "shortest hold time"),
        (Limits(regime="turbulent"), "flow is laminar (turbulent wanted)"),
        (Limits(min_npsh=200.0), "NPSH available"),
    ],
)
def test_a_size_that_fails_says_why(limits: Limits, reason: str) -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), limits=limits)
    failed = [candidate for candidate in found.candidates if not candidate.passes]
    assert failed
    assert any(reason in one for candidate in failed for one in candidate.reasons)
    assert all(candidate.reasons for candidate in failed)
    assert not any(candidate.reasons for candidate in found.candidates if candidate.passes)


@pytest.mark.parametrize(
    ("limits", "reason"),
    [
        (Limits(min_velocity=0.5), "velocity 0.0"),
        (Limits(max_residence_time=100.0), "time in the line"),
    ],
)
def test_a_size_may_be_too_wide(limits: Limits, reason: str) -> None:
    widest = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), limits=limits).candidates[-1]
    assert not widest.passes
    assert reason in widest.reasons[0]


def test_start_up_limits_the_size() -> None:
    paste = replace(SAUCE, static_yield_stress=80.0)
    limits = Limits(start_up_pressure=5e5)
    found = rheo.size_line(LINE, paste, FLOW, catalogue("ISO 2037"), limits=limits)
    static = 1050.0 * 9.80665 * (3.0 - 2.0)
    for candidate in found.candidates:
        by_hand = 4 * 80.0 * (60.0 / candidate.size.inside_diameter + 3.0 / 0.08) + static
        assert candidate.start_up_pressure == pytest.approx(by_hand, rel=1e-12)
        assert candidate.passes == (by_hand <= 5e5)


def test_without_costs_the_smallest_that_passes() -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), limits=Limits(pressure=4e5))
    passing = [candidate for candidate in found.candidates if candidate.passes]
    assert found.recommended == passing[0]
    assert found.sentence.startswith(f"Take {passing[0].size.name}: ")
    assert "the smallest size that keeps every limit" in found.sentence


def test_no_size_is_said_plainly() -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), limits=Limits(pressure=1e3))
    assert found.recommended is None
    assert found.sentence.startswith("No size keeps every limit; ISO 2037 ")


def test_own_prices_win() -> None:
    sizes = catalogue("ISO 2037")
    wide = sizes[-1]
    prices = {size.name: 500.0 for size in sizes} | {wide.name: 1.0}
    found = rheo.size_line(LINE, SAUCE, FLOW, sizes, costs=replace(COSTS, capital_by_size=prices))
    assert found.recommended is not None
    assert found.recommended.size == wide
    assert found.recommended.capital == pytest.approx(60.0)
    assert "default-capital" not in {caution.code for caution in found.cautions}


def test_the_stated_default_is_stated() -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), costs=COSTS)
    assert "default-capital" in {caution.code for caution in found.cautions}
    own = replace(COSTS, law=CapitalLaw(price=200.0))
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"), costs=own)
    assert "default-capital" not in {caution.code for caution in found.cautions}


def test_how_the_choice_moves_over_the_doubt() -> None:
    product = replace(SAUCE, draws=_draws())
    sizes, limits = catalogue("ISO 2037"), Limits(pressure=2.05e5)
    found = rheo.size_line(LINE, product, FLOW, sizes, limits=limits, costs=COSTS)
    assert sum(share for _, share in found.choice_by_draw) == pytest.approx(1.0)
    # The same, one draw at a time.
    chosen = []
    for consistency, index in zip(*_draws()[0], strict=True):
        one = replace(
            SAUCE, model=rheo.model("power-law", consistency=consistency, flow_index=index)
        )
        best = rheo.size_line(LINE, one, FLOW, sizes, limits=limits, costs=COSTS).recommended
        chosen.append("none" if best is None else best.size.name)
    for name, share in found.choice_by_draw:
        assert share == pytest.approx(chosen.count(name) / 80)


def test_a_size_that_passes_only_with_luck_fails() -> None:
    product = replace(SAUCE, draws=_draws())
    size = catalogue("ISO 2037")[10]
    pressure = float(_one_by_one(size).differential_pressure)
    limits = Limits(pressure=1.001 * pressure)
    found = rheo.size_line(LINE, product, FLOW, [size], limits=limits)
    assert not found.candidates[0].passes
    assert "of the likely flow curves (90 % wanted)" in found.candidates[0].reasons[0]
    lax = rheo.size_line(LINE, product, FLOW, [size], limits=limits, confidence=0.3)
    assert lax.candidates[0].passes


def test_how_the_choice_moves_over_the_flow() -> None:
    sizes, limits = catalogue("ISO 2037"), Limits(pressure=2.05e5)
    found = rheo.size_line(LINE, SAUCE, FLOW, sizes, limits=limits, costs=COSTS)
    for flow, name in found.choice_by_flow:
        alone = rheo.size_line(LINE, SAUCE, flow, sizes, limits=limits, costs=COSTS).recommended
        assert alone is not None
        assert name == alone.size.name
    assert [flow for flow, _ in found.choice_by_flow] == pytest.approx([1.2e-3, 1.5e-3, 1.8e-3])


def test_pipes_of_fixed_size_stay() -> None:
    fixed = Line(discharge=(Pipe(1.0, 0.05, fixed_size=True),))
    with pytest.raises(rheo.InputError, match="every pipe has a fixed size"):
        rheo.size_line(fixed, SAUCE, FLOW, catalogue("ISO 2037"))


@pytest.mark.parametrize(
    ("arguments", "sentence"),
    [
        ({"sizes": ()}, "no sizes are given; choose a standard"),
        ({"flow": -1.0}, r"flow .* is -1; it must be above 0"),
        ({"confidence": 90.0}, r"confidence .* is 90; it must be above 0 and at most 1"),
        ({"flow_spread": 1.5}, "flow_spread is 1.5; it must be 0 or more and below 1"),
        (
            {"product": replace(SAUCE, vapour_pressure=None), "limits": Limits(min_npsh=2.0)},
            "a limit on NPSH needs the product's vapour_pressure",
        ),
        (
            {
                "product": replace(SAUCE, measured_rates=None),
                "limits": Limits(keep_to_measured_rates=True),
            },
            "needs the product's measured_rates",
        ),
    ],
)
def test_what_cannot_be_sized(arguments: dict[str, object], sentence: str) -> None:
    given: dict[str, object] = {
        "line": LINE,
        "product": SAUCE,
        "flow": FLOW,
        "sizes": catalogue("ISO 2037"),
    }
    with pytest.raises(rheo.InputError, match=sentence):
        rheo.size_line(**(given | arguments))


@pytest.mark.parametrize(
    ("make", "sentence"),
    [
        (lambda: Limits(pressure=0.0), "limits: pressure is 0; it must be above 0"),
        (lambda: Limits(regime="calm"), "unknown regime 'calm'; it takes laminar or turbulent"),
        (lambda: replace(COSTS, hours=9000.0), "hours is 9000; a year has at most 8784"),
        (lambda: replace(COSTS, efficiency=60.0), r"efficiency .* is 60; it must be above 0"),
        (lambda: CapitalLaw(price=0.0), r"price .* is 0; it must be above 0"),
        (
            lambda: replace(COSTS, capital_by_size={"51": -1.0}),
            r"capital of size 51 .* is -1; it must be above 0",
        ),
    ],
)
def test_limits_and_costs_that_cannot_be(make: object, sentence: str) -> None:
    with pytest.raises(rheo.InputError, match=sentence):
        make()


def test_cleaning_flow_of_each_size() -> None:
    found = rheo.size_line(LINE, SAUCE, FLOW, catalogue("ISO 2037"))
    for candidate in found.candidates[::4]:
        widest = max(candidate.size.inside_diameter, 0.08)
        flow = 1.5 * np.pi / 4 * widest**2
        assert candidate.cleaning_flow == pytest.approx(flow, rel=1e-12)
        line = with_diameters(LINE, np.asarray(candidate.size.inside_diameter))
        alone = rheo.solve_line(line, water(333.15), flow)
        assert candidate.cleaning_pressure == pytest.approx(
            float(alone.differential_pressure), rel=1e-10
        )


def test_cleaning_of_a_line_is_faster_in_its_narrow_parts() -> None:
    line = Line(discharge=(Pipe(10.0, 0.05), Pipe(10.0, 0.025)))
    found = cleaning(line, velocity=1.5)
    assert float(found.flow) == pytest.approx(1.5 * np.pi / 4 * 0.05**2, rel=1e-12)
    with pytest.raises(rheo.InputError, match=r"velocity \[m/s\] is 0; it must be above 0"):
        cleaning(line, velocity=0.0)


def test_other_limits_do_not_work_the_sizes_out_again(monkeypatch: pytest.MonkeyPatch) -> None:
    """And what comes of them is what a comparison from the start gives."""
    product = replace(SAUCE, draws=_draws())
    sizes = in_order(catalogue("ISO 2037"))
    survey = SizeSurvey(LINE, product, FLOW, sizes)
    solved = []
    whole = size_survey.size_values

    def counted(*arguments: object, **named: object) -> object:
        solved.append(1)
        return whole(*arguments, **named)  # type: ignore[arg-type]

    monkeypatch.setattr(size_survey, "size_values", counted)
    judge_sizes(survey, limits=Limits(max_velocity=1.0), costs=COSTS)
    first = len(solved)
    assert first
    for limits in (Limits(max_velocity=0.5), Limits(pressure=3e5), Limits(max_velocity=2.0)):
        found = judge_sizes(survey, limits=limits, costs=COSTS, confidence=0.8)
        assert found == rheo.size_line(
            LINE, product, FLOW, catalogue("ISO 2037"), limits=limits, costs=COSTS, confidence=0.8
        )
    assert len(solved) == first + 3 * first
    before = len(solved)
    judge_sizes(survey, limits=Limits(max_velocity=0.7), costs=COSTS)
    assert len(solved) == before
    # A quantity that no limit asked for before is worked out, over the draws alone.
    judge_sizes(survey, limits=Limits(min_hold_time=1.0), costs=COSTS)
    assert len(solved) == before + 1
