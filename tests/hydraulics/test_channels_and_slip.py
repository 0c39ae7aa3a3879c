"""Slot, annulus, and a pipe with slip."""

import json
from pathlib import Path

import numpy as np
import pytest
from flow_curves import EXAMPLES

import rheo

CASES = [
    case
    for case in json.loads(
        (Path(__file__).parents[1] / "data" / "check_values.json").read_text(encoding="utf-8")
    )["cases"]
    if case["section"] == "laminar slot"
]


@pytest.mark.parametrize("case", CASES, ids=[case["id"] for case in CASES])
def test_slot_against_independent_values(case):
    flow = rheo.slot_flow(rheo.model(case["model"], **case["parameters"]), **case["inputs"])
    for name, expected in case["expected"].items():
        assert getattr(flow, name) == pytest.approx(expected, rel=case["rel_tol"]), name


@pytest.mark.parametrize(
    ("ratio", "error"), [(0.9, 1.85e-4), (0.8, 8.3e-4), (0.5, 7.9e-3), (0.3, 2.30e-2)]
)
def test_annulus_against_the_exact_newtonian_one(ratio, error):
    """ΔP/L = 8ηV/(R²[1 + κ² + (1 - κ²)/ln κ]), the exact result (common practice)."""
    viscosity, outer, velocity = 0.4, 0.03, 0.2
    flow = rheo.annulus_flow(
        rheo.model("newtonian", viscosity=viscosity), ratio * outer, outer, velocity
    )
    shape = 1 + ratio**2 + (1 - ratio**2) / np.log(ratio)
    exact = 8 * viscosity * velocity / (outer**2 * shape)
    assert flow.pressure_gradient / exact - 1 == pytest.approx(error, rel=0.02)
    assert flow.cautions == ()


def test_a_wide_annulus_says_so():
    model = rheo.model("newtonian", viscosity=0.4)
    flow = rheo.annulus_flow(model, 0.005, 0.05, 0.1)
    assert [one.code for one in flow.cautions] == ["wide-annulus"]
    with pytest.raises(rheo.InputError, match="inner_radius: it must be less than outer_radius"):
        rheo.annulus_flow(model, 0.05, 0.05, 0.1)


def test_a_slot_that_may_not_be_laminar_says_so():
    model = rheo.model("newtonian", viscosity=0.001)
    quiet = rheo.slot_flow(model, 0.002, 0.1, density=1000.0)
    assert quiet.cautions == ()
    flow = rheo.slot_flow(model, 0.005, np.array([0.01, 0.5]), density=1000.0)
    assert flow.cautions[0].code == "slot-not-laminar"
    # Re = ρV(4h)/η of the faster one.
    assert "reaches 10\u202f000" in flow.cautions[0].sentence


@pytest.mark.parametrize("key", list(EXAMPLES))
def test_slip_adds_to_the_flow_of_the_curve(key):
    model = rheo.model(key, **EXAMPLES[key])
    plain = rheo.pipe_flow(model, 0.04, 0.3, 1000.0, regime="laminar")
    slip = 1e-4
    slipping = rheo.slip_flow(model, 0.04, 0.3 + slip * plain.wall_stress, slip)
    assert slipping.wall_stress == pytest.approx(plain.wall_stress, rel=1e-11)
    assert slipping.wall_rate == pytest.approx(plain.wall_rate, rel=1e-9)
    assert slipping.slip_velocity == pytest.approx(slip * plain.wall_stress, rel=1e-11)
    assert slipping.pressure_gradient == pytest.approx(plain.pressure_gradient, rel=1e-11)
    share = slipping.slip_velocity / (0.3 + slip * plain.wall_stress)
    assert slipping.slip_share == pytest.approx(share, rel=1e-11)


def test_no_slip_is_the_plain_pipe_and_more_slip_is_easier():
    model = rheo.model("herschel-bulkley", **EXAMPLES["herschel-bulkley"])
    slip = np.array([0.0, 1e-4, 1e-3, 1e-2])
    flow = rheo.slip_flow(model, 0.05, 0.5, slip)
    plain = rheo.pipe_flow(model, 0.05, 0.5, 1000.0, regime="laminar")
    assert flow.pressure_gradient[0] == pytest.approx(plain.pressure_gradient, rel=1e-12)
    assert np.all(np.diff(flow.pressure_gradient) < 0)


def test_a_paste_slides_as_a_block_below_its_yield_stress():
    model = rheo.model("herschel-bulkley", yield_stress=50.0, consistency=5.0, flow_index=0.5)
    flow = rheo.slip_flow(model, 0.05, 0.004, 1e-4)
    assert flow.wall_stress == pytest.approx(40.0)
    assert flow.wall_rate == 0
    assert flow.slip_share == pytest.approx(1.0)


def test_slip_cannot_be_negative():
    model = rheo.model("newtonian", viscosity=1.0)
    with pytest.raises(
        rheo.InputError, match=r"slip_coefficient: it is -0.1 m/\(s Pa\); it must be"
    ):
        rheo.slip_flow(model, 0.05, 0.1, -0.1)
