"""Pipe flow against values computed independently with 30 digits (tests/data/check_values.json)."""

import json
from pathlib import Path

import numpy as np
import pytest

import rheo
from rheo.hydraulics.turbulent.dodge_metzner import inverse_root_friction

CASES = json.loads(
    (Path(__file__).parents[1] / "data" / "check_values.json").read_text(encoding="utf-8")
)["cases"]


def rows(section, *prefixes):
    chosen = [
        case
        for case in CASES
        if case["section"] == section and (not prefixes or case["inputs"].get("method") in prefixes)
    ]
    assert chosen
    return pytest.mark.parametrize("case", chosen, ids=[case["id"] for case in chosen])


@rows("laminar pipe")
def test_laminar_pipe(case):
    model = rheo.model(case["model"], **case["parameters"])
    flow = rheo.pipe_flow(model, **case["inputs"], regime="laminar")
    for name, expected in case["expected"].items():
        assert getattr(flow, name) == pytest.approx(expected, rel=case["rel_tol"], abs=1e-15), name


@rows("friction", "wilson_thomas", "torrance")
def test_friction_of_a_product_in_a_pipe(case):
    model = rheo.model(case["model"], **case["parameters"])
    inputs = {key: value for key, value in case["inputs"].items() if key != "method"}
    key = case["inputs"]["method"].replace("_", "-")
    found = rheo.friction_factor(model, method=key, **inputs)
    assert found == pytest.approx(case["expected"]["friction_factor"], rel=case["rel_tol"])
    flow = rheo.pipe_flow(model, method=key, regime="turbulent", **inputs)
    assert flow.wall_stress == pytest.approx(case["expected"]["wall_stress"], rel=case["rel_tol"])


@rows("friction", "colebrook_white")
def test_colebrook_white(case):
    # A pipe of 1 m, 1 kg/m3 and 1 m/s has the Reynolds number 1/viscosity.
    model = rheo.model("newtonian", viscosity=1.0 / case["inputs"]["Re"])
    found = rheo.friction_factor(
        model,
        diameter=1.0,
        velocity=1.0,
        density=1.0,
        roughness=case["inputs"]["rel_roughness"],
        method="colebrook-white",
    )
    assert found == pytest.approx(case["expected"]["friction_factor"], rel=case["rel_tol"])


@rows("friction", "dodge_metzner")
def test_dodge_metzner(case):
    index, reynolds = case["inputs"]["n_prime"], case["inputs"]["Re_MR"]
    # With D = ρ = V = 1 the Reynolds number is 1/(K' 8^(n-1)), K' = K((3n+1)/4n)^n.
    consistency = 1.0 / (reynolds * 8.0 ** (index - 1.0) * ((3 * index + 1) / (4 * index)) ** index)
    model = rheo.model("power-law", consistency=consistency, flow_index=index)
    found = rheo.friction_factor(model, 1.0, 1.0, 1.0, method="dodge-metzner")
    expected = case["expected"]["friction_factor"]
    assert found == pytest.approx(expected, rel=case["rel_tol"])
    log_argument = np.log(reynolds * expected ** (1.0 - index / 2.0))
    assert inverse_root_friction(index, log_argument) == pytest.approx(expected**-0.5, rel=1e-12)


@rows("friction", "darby_melson")
def test_darby_melson(case):
    # With D = ρ = V = 1 the plastic viscosity is 1/Re and He = τ_y Re².
    reynolds, hedstrom = case["inputs"]["Re_B"], case["inputs"]["He"]
    model = rheo.model(
        "bingham", yield_stress=hedstrom / reynolds**2, plastic_viscosity=1.0 / reynolds
    )
    found = rheo.friction_factor(model, 1.0, 1.0, 1.0, method="darby-melson")
    assert found == pytest.approx(case["expected"]["friction_factor"], rel=case["rel_tol"])
    laminar = rheo.pipe_flow(model, 1.0, 1.0, 1.0, regime="laminar").friction_factor
    assert laminar == pytest.approx(case["expected"]["f_laminar"], rel=case["rel_tol"])


@rows("transition", "ryan_johnson")
@pytest.mark.parametrize("consistency", [1e-3, 7.0])
def test_stability_of_a_power_law(case, consistency):
    model = rheo.model("power-law", consistency=consistency, **case["parameters"])
    flow = rheo.pipe_flow(model, diameter=0.08, velocity=1.0, density=1200.0)
    assert flow.critical_reynolds == pytest.approx(case["expected"]["Re_MR_c"], rel=1e-9)


@rows("transition", "ryan_johnson_general")
def test_stability_on_the_profile(case):
    model = rheo.model(case["model"], **case["parameters"])
    inputs, expected = case["inputs"], case["expected"]
    speed = rheo.critical_velocity(
        model, diameter=inputs["diameter"], density=inputs["density"], method="stability"
    )
    assert speed == pytest.approx(expected["V_c"], rel=case["rel_tol"])
    flow = rheo.pipe_flow(model, inputs["diameter"], speed, inputs["density"], regime="laminar")
    assert flow.wall_stress == pytest.approx(expected["tau_w_c"], rel=case["rel_tol"])
    assert flow.wall_rate == pytest.approx(expected["gamma_w_c"], rel=case["rel_tol"])
    assert flow.reynolds == pytest.approx(expected["Re_MR_c"], rel=case["rel_tol"])


@rows("transition", "hanks")
def test_hanks(case):
    # With D = ρ = η_p = 1 the yield stress is He and the velocity the Reynolds number.
    model = rheo.model("bingham", yield_stress=case["inputs"]["He"], plastic_viscosity=1.0)
    found = rheo.critical_velocity(model, diameter=1.0, density=1.0, method="hanks")
    assert found == pytest.approx(case["expected"]["Re_B_c"], rel=case["rel_tol"])
    stable = rheo.critical_velocity(model, diameter=1.0, density=1.0, method="stability")
    # Hanks rounds 12√3·808 = 16793.96 to 16800.
    assert stable == pytest.approx(found, rel=4e-4)
    assert stable < found
