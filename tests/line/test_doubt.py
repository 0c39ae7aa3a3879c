"""What the uncertainty of the pressure drop is made of."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest

import rheo
from rheo.line import Doubts, Line, Pipe, Product
from rheo.line.doubt import DoubtBudget, DoubtShare

FLOW = 1e-3
LINE = Line(discharge=(Pipe(50.0, 0.05, rise=4.0),))
SAUCE = Product(rheo.model("power-law", consistency=8.0, flow_index=0.4), 1050.0)
NOTHING = Doubts(density=0.0, diameter_tolerance=0.0, roughness=0.0, temperature=0.0, flow=0.0)


def _share(budget: DoubtBudget, key: str) -> DoubtShare:
    return next(one for one in budget.shares if one.key == key)


def test_each_cause_by_its_own_law() -> None:
    """In laminar power-law flow ΔP goes with Q^n and D^-(3n + 1), the height with the density."""
    friction = float(rheo.solve_line(LINE, SAUCE, FLOW).friction_pressure)
    height = 1050.0 * 9.80665 * 4.0
    for doubts, key, by_hand in (
        (replace(NOTHING, flow=1e-3), "flow", 0.4 * 1e-3 * friction),
        (
            replace(NOTHING, diameter_tolerance=1e-3),
            "diameter",
            2.2 * 1e-3 / np.sqrt(3) * friction,
        ),
        (replace(NOTHING, density=1e-3), "density", 1e-3 * height),
    ):
        budget = rheo.doubt_budget(LINE, SAUCE, FLOW, doubts)
        found = _share(budget, key)
        # Central differences over a thousandth: the next term is a millionth.
        assert found.standard_deviation == pytest.approx(by_hand, rel=1e-5)
        assert found.share == 1.0
        assert budget.standard_deviation == pytest.approx(by_hand, rel=1e-5)


def test_readings_and_model_choice_split_the_variance_of_the_draws() -> None:
    rng = np.random.default_rng(5)
    one = rheo.model("power-law", consistency=rng.normal(8.0, 0.4, 300), flow_index=0.4)
    other = rheo.model("newtonian", viscosity=rng.normal(0.5, 0.02, 100))
    product = replace(SAUCE, draws=(one, other))
    budget = rheo.doubt_budget(LINE, product, FLOW, NOTHING)
    every = rheo.solve_line(LINE, product, FLOW).draws
    assert every is not None
    low, high = np.percentile(every, [0.5, 99.5])
    middle = (every >= low) & (every <= high)
    assert budget.standard_deviation == pytest.approx(float(every[middle].std()), rel=1e-12)
    first, second = every[:300][middle[:300]], every[300:][middle[300:]]
    part = first.size / middle.sum()
    between = part * (1 - part) * (first.mean() - second.mean()) ** 2
    share = _share(budget, "model-choice").share
    assert share == pytest.approx(between / every[middle].var(), rel=1e-10)
    assert sum(one.share for one in budget.shares) == pytest.approx(1.0)


def test_one_wild_draw_does_not_rule() -> None:
    consistency = np.full(1000, 8.0) * np.linspace(0.9, 1.1, 1000)
    tame = replace(SAUCE, draws=(rheo.model("power-law", consistency=consistency, flow_index=0.4),))
    wild_size = np.append(consistency[:-1], 1e6)
    wild = replace(SAUCE, draws=(rheo.model("power-law", consistency=wild_size, flow_index=0.4),))
    one = rheo.doubt_budget(LINE, tame, FLOW, NOTHING).standard_deviation
    other = rheo.doubt_budget(LINE, wild, FLOW, NOTHING).standard_deviation
    assert other == pytest.approx(one, rel=1e-3)


def test_the_friction_method_counts_only_where_it_is_used() -> None:
    slow = rheo.doubt_budget(LINE, SAUCE, FLOW, NOTHING)
    thin = replace(SAUCE, model=rheo.model("power-law", consistency=0.05, flow_index=0.7))
    fast = rheo.doubt_budget(LINE, thin, 5e-3, NOTHING)
    assert _share(slow, "friction-method").standard_deviation == 0.0
    assert _share(fast, "friction-method").share == 1.0


def test_roughness_counts_in_turbulent_flow() -> None:
    water = Product(rheo.model("newtonian", viscosity=1e-3), 1000.0)
    rough = Line(discharge=(Pipe(50.0, 0.05, roughness=1e-4),))
    found = rheo.doubt_budget(rough, water, 5e-3, replace(NOTHING, roughness=0.3))
    shares = dict(zip(*found.chart, strict=True))
    assert shares["Roughness"] > 0.9


def test_temperature_counts_where_the_flow_curve_knows_it() -> None:
    def model(temperature: object) -> rheo.Model:
        return rheo.model(
            "newtonian", viscosity=0.5 * np.exp(-0.03 * (np.asarray(temperature) - 293.15))
        )

    level = Line(discharge=(Pipe(50.0, 0.05),))
    product = Product(model, 1050.0)
    budget = rheo.doubt_budget(level, product, FLOW, replace(NOTHING, temperature=0.1))
    pressure = float(rheo.solve_line(level, product, FLOW).differential_pressure)
    assert budget.standard_deviation == pytest.approx(0.003 * pressure, rel=1e-4)
    blind = rheo.doubt_budget(level, SAUCE, FLOW)
    assert "doubt-without-temperature" in {caution.code for caution in blind.cautions}


def test_the_largest_comes_first_and_is_said() -> None:
    budget = rheo.doubt_budget(LINE, SAUCE, FLOW)
    names, shares = budget.chart
    assert list(shares) == sorted(shares, reverse=True)
    assert names[0].lower() in budget.sentence
    assert "doubt-without-draws" in {caution.code for caution in budget.cautions}


def test_nothing_in_doubt_is_said() -> None:
    budget = rheo.doubt_budget(LINE, SAUCE, FLOW, NOTHING)
    assert budget.standard_deviation == 0.0
    assert budget.sentence.startswith("Nothing is in doubt")


def test_doubts_are_not_negative() -> None:
    with pytest.raises(rheo.InputError, match=r"doubts: flow is -0\.1; it must be 0 or more"):
        Doubts(flow=-0.1)


@pytest.mark.parametrize(
    ("model", "density", "flow", "left_out"),
    [
        # Below a Hedstrom number of 1e5 Darby and Melson's equation is far off.
        (
            ("bingham", {"yield_stress": 0.5, "plastic_viscosity": 4e-3}),
            1100.0,
            6e-3,
            "darby-melson",
        ),
        # Dodge and Metzner's range ends at a flow index of 0.36.
        (
            ("herschel-bulkley", {"yield_stress": 0.2, "consistency": 0.6, "flow_index": 0.3}),
            1100.0,
            1.2e-2,
            "dodge-metzner",
        ),
    ],
)
def test_a_method_outside_its_range_does_not_widen_the_doubt(
    model: tuple[str, dict[str, float]], density: float, flow: float, left_out: str
) -> None:
    key, parameters = model
    product = Product(rheo.model(key, **parameters), density)
    line = Line(discharge=(Pipe(50.0, 0.05),))
    velocity = flow / (0.25 * np.pi * 0.05**2)
    pipe = rheo.pipe_flow(product.model, 0.05, velocity, density)
    assert pipe.regime == "turbulent"
    counted = [name for name, counts in pipe.method_counts.items() if counts]
    assert left_out in pipe.method_counts
    assert left_out not in counted
    alone = [
        float(rheo.solve_line(line, product, flow, method=name).differential_pressure)
        for name in counted
    ]
    assert len(alone) > 1
    found = _share(rheo.doubt_budget(line, product, flow, NOTHING), "friction-method")
    by_hand = float(np.std(alone, ddof=1))
    assert found.standard_deviation == pytest.approx(by_hand, rel=1e-9)


def test_the_method_in_use_always_counts() -> None:
    """Named, Dodge and Metzner's equation counts beyond its range, as it makes the pressure."""
    product = Product(
        rheo.model("herschel-bulkley", yield_stress=0.2, consistency=0.6, flow_index=0.3), 1100.0
    )
    line = Line(discharge=(Pipe(50.0, 0.05),))
    named = rheo.doubt_budget(line, product, 1.2e-2, NOTHING, "dodge-metzner")
    usual = rheo.doubt_budget(line, product, 1.2e-2, NOTHING)
    assert named.standard_deviation > 1.05 * usual.standard_deviation
