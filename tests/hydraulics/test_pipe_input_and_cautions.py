"""What pipe_flow refuses and what it advises."""

import numpy as np
import pytest

import rheo

SLURRY = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)


@pytest.mark.parametrize(
    ("change", "sentence"),
    [
        ({"diameter": 0.0}, "diameter: it is 0 m; it must be a finite number above 0"),
        ({"diameter": np.nan}, "diameter: it is nan m; it must be a finite number above 0"),
        ({"velocity": -1.0}, "velocity: it is -1 m/s; it must be a finite number above 0"),
        ({"velocity": "fast"}, "velocity: it is 'fast'; it must be a number"),
        ({"density": np.inf}, "density: it is inf kg/m3; it must be a finite number above 0"),
        ({"roughness": -1e-3}, "roughness: it is -0.001 m; it must be a finite number, 0 or more"),
        ({"roughness": 0.05}, "it must be less than half the diameter"),
        ({"regime": "plug"}, "regime: it is 'plug'; it takes laminar or turbulent"),
        (
            {"method": "dodge"},
            r"unknown turbulent method 'dodge' \(did you mean 'dodge-metzner'\?\)",
        ),
        ({"transition": "hanks"}, "transition criterion 'hanks' is made for bingham"),
        ({"model": 3.0}, r"model: it is 3.0; make one with rheo.model\(key, ...\)"),
        (
            {"velocity": np.ones(3), "density": np.ones(2)},
            r"their shapes \(\), \(\), \(2,\), \(\), \(3,\) do not broadcast",
        ),
    ],
)
def test_impossible_input_ends_in_one_sentence(change, sentence):
    given = {"model": SLURRY, "diameter": 0.1, "velocity": 1.0, "density": 1200.0}
    with pytest.raises(rheo.InputError, match=sentence):
        rheo.pipe_flow(**{**given, **change})


def codes(flow):
    return [caution.code for caution in flow.cautions]


def test_laminar_flow_needs_no_advice():
    assert rheo.pipe_flow(SLURRY, 0.15, 0.5, 1200.0, 1e-4).cautions == ()


def test_transition_is_told_with_its_share():
    flow = rheo.pipe_flow(SLURRY, 0.15, np.array([0.5, 1.6, 1.8, 4.0]), 1200.0)
    caution = flow.cautions[0]
    assert caution.code == "transition-flow"
    assert caution.sentence.startswith("In 50 % of the 4 cases the flow is in transition between")
    assert caution.place == "pipe"
    assert rheo.pipe_flow(SLURRY, 0.15, 1.6, 1200.0).cautions[0].sentence.startswith("The flow is")


def test_a_rough_pipe_is_told_only_where_the_rule_is_ours():
    assert codes(rheo.pipe_flow(SLURRY, 0.15, 4.0, 1200.0, 1e-4)) == ["roughness-rule"]
    water = rheo.model("newtonian", viscosity=0.001)
    assert codes(rheo.pipe_flow(water, 0.15, 4.0, 1000.0, 1e-4)) == []
    assert codes(rheo.pipe_flow(water, 0.15, 4.0, 1000.0, 0.01)) == ["very-rough"]


def test_outside_the_tested_range():
    thin = rheo.model("power-law", consistency=0.5, flow_index=0.25)
    flow = rheo.pipe_flow(thin, 0.1, 8.0, 1000.0)
    assert flow.method == "dodge-metzner"
    caution = next(one for one in flow.cautions if one.code == "outside-method-range")
    assert "flow index 0.25, Reynolds number" in caution.sentence
    assert "n' 0.36 to 1" in caution.advice
    inside = rheo.model("power-law", consistency=0.05, flow_index=0.7)
    flow = rheo.pipe_flow(inside, 0.1, 3.0, 1000.0)
    assert 2900 < flow.reynolds < 36000
    assert codes(flow) == []


def test_a_forced_regime_against_the_criterion():
    assert codes(rheo.pipe_flow(SLURRY, 0.15, 4.0, 1200.0, regime="laminar")) == ["forced-regime"]
    assert "forced-regime" in codes(rheo.pipe_flow(SLURRY, 0.15, 0.5, 1200.0, regime="turbulent"))
    assert codes(rheo.pipe_flow(SLURRY, 0.15, 0.5, 1200.0, regime="laminar")) == []
    assert codes(rheo.pipe_flow(SLURRY, 0.15, 4.0, 1200.0, regime="turbulent")) == []


def test_costly_results_wait_until_they_are_asked_for():
    flow = rheo.pipe_flow(SLURRY, 0.15, 0.5, 1200.0)
    lazy = {"kinetic_energy_factor", "critical_velocity", "velocity_ratio", "cautions", "_rivals"}
    assert not lazy & set(vars(flow))
    assert flow.kinetic_energy_factor > 1
    assert "kinetic_energy_factor" in vars(flow)


def test_the_arguments_are_not_changed():
    velocity = np.array([0.5, 4.0])
    diameter = np.array([0.1, 0.2])
    flow = rheo.pipe_flow(SLURRY, diameter, velocity, 1200.0)
    assert np.all(flow.kinetic_energy_factor > 1)
    np.testing.assert_array_equal(velocity, [0.5, 4.0])
    np.testing.assert_array_equal(diameter, [0.1, 0.2])
