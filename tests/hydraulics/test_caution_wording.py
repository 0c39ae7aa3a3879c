"""Every piece of advice of this part: when it is given, what it says, where it stands."""

import numpy as np
import pytest
from plain_words import check_caution, odd_words

import rheo
from rheo.hydraulics import developing_length
from rheo.hydraulics.registry import criteria, turbulent_methods

SLURRY = rheo.model("herschel-bulkley", yield_stress=5.0, consistency=0.1, flow_index=0.8)
WATER = rheo.model("newtonian", viscosity=0.001)


def only(cautions, code, place="pipe"):
    (caution,) = (one for one in cautions if one.code == code)
    check_caution(caution, place)
    return caution


def codes(flow):
    return [one.code for one in flow.cautions]


def test_the_share_of_the_cases():
    flow = rheo.pipe_flow(SLURRY, 0.15, np.array([0.5, 1.7, 4.0]), 1200.0)
    assert flow.regime.tolist() == ["laminar", "transition", "turbulent"]
    caution = only(flow.cautions, "transition-flow")
    assert caution.sentence == (
        "In 33.3 % of the 3 cases the flow is in transition between laminar and turbulent; the "
        "pressure gradient is interpolated and can swing between the two."
    )
    single = only(rheo.pipe_flow(SLURRY, 0.15, 1.7, 1200.0).cautions, "transition-flow")
    assert single.sentence == caution.sentence.replace("In 33.3 % of the 3 cases the", "The")
    # One case is one, however it is packed.
    packed = only(rheo.pipe_flow(SLURRY, 0.15, [[1.7]], 1200.0).cautions, "transition-flow")
    assert packed == single


@pytest.mark.parametrize(
    ("regime", "what"),
    [("laminar", "beyond the end of laminar flow"), ("turbulent", "still laminar")],
)
def test_a_forced_regime_says_by_which_criterion(regime, what):
    flow = rheo.pipe_flow(
        SLURRY, 0.15, np.array([0.5, 4.0]), 1200.0, regime=regime, transition="slatter"
    )
    caution = only(flow.cautions, "forced-regime")
    assert caution.sentence == (
        f"In 50 % of the 2 cases the flow is {what} by the slatter criterion, but the {regime} "
        "solution was asked for."
    )
    at = flow.critical_velocity[0]
    # At the critical velocity itself the flow is laminar still.
    edge = rheo.pipe_flow(SLURRY, 0.15, at, 1200.0, regime=regime, transition="slatter")
    assert ("forced-regime" in codes(edge)) == (regime == "turbulent")


def test_no_turbulent_solution_names_the_method():
    thick = rheo.model("power-law", consistency=50.0, flow_index=2.0)
    flow = rheo.pipe_flow(thick, 0.01, np.array([0.1, 0.2]), 1000.0, regime="turbulent")
    caution = only(flow.cautions, "no-turbulent-solution")
    assert caution.sentence == (
        "In 100 % of the 2 cases the flow is so slow that dodge-metzner has no turbulent solution."
    )


def test_the_span_outside_a_tested_range():
    thin = rheo.model("power-law", consistency=0.5, flow_index=np.array([0.2, 0.25, 0.7]))
    flow = rheo.pipe_flow(thin, 0.1, 8.0, 1000.0)
    assert flow.regime.tolist() == ["turbulent"] * 3
    caution = only(flow.cautions, "outside-method-range")
    slow, fast = (f"{float(f'{value:.3g}'):.0f}" for value in flow.reynolds[:2])
    assert 2900 < flow.reynolds[2] < 36000
    # Narrow spaces part the thousands.
    assert caution.sentence.replace("\u202f", "") == (
        "In 66.7 % of the 3 cases the flow is outside the range in which Dodge-Metzner was tested: "
        f"flow index 0.2 to 0.25, Reynolds number {fast} to {slow}."
    )
    assert caution.advice == (
        f"{turbulent_methods()['dodge-metzner'].validity} Compare the other methods."
    )
    # In the transition every method is used below its own range.
    one = rheo.model("power-law", consistency=0.5, flow_index=0.2)
    slow = rheo.pipe_flow(one, 0.1, flow.critical_velocity[0] * 1.2, 1000.0)
    assert slow.regime == "transition"
    assert codes(slow) == ["transition-flow"]


def test_roughness():
    flow = rheo.pipe_flow(SLURRY, 0.15, np.array([0.5, 4.0, 5.0, 6.0]), 1200.0, [1e-3, 0, 0, 1e-3])
    caution = only(flow.cautions, "roughness-rule")
    assert caution.sentence.startswith(
        "In 25 % of the 4 cases the flow is turbulent in a rough pipe; no method is published for"
    )
    flow = rheo.pipe_flow(WATER, 1.0, np.array([1.0, 1e-5]), 1000.0, [0.06, 0.08])
    caution = only(flow.cautions, "very-rough")
    assert caution.sentence == (
        "The roughness is 0.08 diameters; the friction formulas hold up to 0.05."
    )
    assert codes(rheo.pipe_flow(WATER, 1.0, 1.0, 1000.0, 0.05)) == []
    assert codes(rheo.pipe_flow(WATER, 1.0, 1e-5, 1000.0, 0.08)) == []


def test_a_slot_that_may_not_be_laminar():
    """12ρV²/τw is 4ρVh/η for a Newtonian fluid; 2100 at V = 0.0525 m/s in 10 mm of water."""
    at_limit = 2100.0 * 0.001 / (4.0 * 1000.0 * 0.01)
    flow = rheo.slot_flow(WATER, 0.01, at_limit * 0.999, density=1000.0)
    assert flow.cautions == ()
    flow = rheo.slot_flow(WATER, 0.01, at_limit * 1.001, density=1000.0)
    caution = only(flow.cautions, "slot-not-laminar", "slot")
    assert "12ρV²/τw reaches" in caution.sentence
    assert "(common practice) the flow may not be laminar" in caution.sentence
    # The answer itself does not change.
    assert flow.pressure_gradient == rheo.slot_flow(WATER, 0.01, at_limit * 1.001).pressure_gradient


def test_a_wide_annulus():
    oil = rheo.model("newtonian", viscosity=0.4)
    assert rheo.annulus_flow(oil, 0.03, 0.1, 0.1).cautions == ()
    flow = rheo.annulus_flow(oil, np.array([0.06, 0.02]), 0.1, 0.1)
    caution = only(flow.cautions, "wide-annulus", "annulus")
    assert "The inner radius is 0.2 of the outer; a wide annulus is not a slot" in caution.sentence
    assert "(2.3 % at 0.3 for a Newtonian fluid)" in caution.sentence
    both = rheo.annulus_flow(WATER, 0.02, 0.1, 1.0, density=1000.0)
    assert codes(both) == ["slot-not-laminar", "wide-annulus"]
    slot = rheo.slot_flow(WATER, 0.04, 1.0)
    for name in ("wall_stress", "wall_rate", "nominal_rate", "pressure_gradient", "velocity_ratio"):
        assert getattr(both, name) == getattr(slot, name)


@pytest.mark.parametrize(
    ("index", "reynolds", "told"),
    [
        (0.4, 999.0, False),
        (1.5, 100.0, False),
        (1.0, 1000.0, False),
        (0.39, 100.0, True),
        (1.51, 100.0, True),
        (1.0, 1001.0, True),
    ],
)
def test_developing_length_outside_its_range(index, reynolds, told):
    model = rheo.model("power-law", consistency=0.5, flow_index=index)
    # 8ρV²/τw with τw = K((3n + 1)/(4n) 8V/D)^n.
    wall = 0.5 * ((3 * index + 1) / (4 * index) * 8 / 0.05) ** index
    speed = (reynolds * wall / 8000.0) ** (1.0 / (2.0 - index))
    flow = rheo.pipe_flow(model, 0.05, speed, 1000.0, regime="laminar")
    assert flow.reynolds == pytest.approx(reynolds, rel=1e-9)
    cautions = developing_length(flow).cautions
    if told:
        only(cautions, "developing-length-range")
        assert len(cautions) == 1
    else:
        assert cautions == ()


def test_records_are_in_plain_words():
    for record in (*criteria().values(), *turbulent_methods().values()):
        assert record.validity.endswith(".")
        assert odd_words(record.validity) == []
