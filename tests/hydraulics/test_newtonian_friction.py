"""Newtonian friction against the `fluids` library over Reynolds numbers 1 to 1e8.

The library goes from 64/Re to the Colebrook-White value at a Reynolds number of 2040; this program
takes laminar flow to 2099 (stability parameter 808) and blends up to 4000. Between 2000 and 4000
therefore the two solutions are compared apart: each forced regime with the library's formula.
"""

import fluids
import numpy as np
import pytest

import rheo

ROUGHNESS = [0.0, 1e-6, 1e-4, 3e-3, 0.02, 0.05]
LAMINAR = np.geomspace(1.0, 2000.0, 40)
BETWEEN = np.linspace(2000.0, 4000.0, 41)
TURBULENT = np.geomspace(4000.0, 1e8, 120)


def fanning(reynolds, roughness, **choice):
    # A pipe of 1 m, 1 kg/m3 and 1 m/s has the Reynolds number 1/viscosity.
    model = rheo.model("newtonian", viscosity=1.0 / reynolds)
    return rheo.pipe_flow(model, 1.0, 1.0, 1.0, roughness=roughness, **choice).friction_factor


def from_library(reynolds, roughness):
    return np.array([fluids.friction_factor(Re=one, eD=roughness) for one in reynolds]) / 4


@pytest.mark.parametrize("roughness", ROUGHNESS)
def test_laminar_and_turbulent_agree(roughness):
    for reynolds in (LAMINAR, TURBULENT):
        expected = from_library(reynolds, roughness)
        np.testing.assert_allclose(fanning(reynolds, roughness), expected, rtol=1e-6)


@pytest.mark.parametrize("roughness", ROUGHNESS)
def test_each_solution_agrees_in_the_transition(roughness):
    laminar = fanning(BETWEEN, roughness, regime="laminar")
    np.testing.assert_allclose(laminar, 16.0 / BETWEEN, rtol=1e-12)
    turbulent = fanning(BETWEEN, roughness, regime="turbulent")
    expected = [fluids.friction.Colebrook(Re=one, eD=roughness) / 4 for one in BETWEEN]
    np.testing.assert_allclose(turbulent, expected, rtol=1e-6)
    blended = fanning(BETWEEN, roughness)
    assert np.all((blended >= laminar * (1 - 1e-12)) & (blended <= turbulent * (1 + 1e-12)))


def test_the_blend_starts_and_ends_where_it_says():
    assert fanning(np.array(2099.2), 0.0) == pytest.approx(16.0 / 2099.2, rel=1e-12)
    assert fanning(np.array(2150.0), 0.0) > 1.01 * 16.0 / 2150.0
    end = 2099.2455787734793 * 4000.0 / 2100.0
    full = fanning(np.array(end * (1 + 1e-9)), 0.0)
    assert full == pytest.approx(fanning(np.array(end), 0.0, regime="turbulent"), rel=1e-8)


@pytest.mark.parametrize("method", ["dodge-metzner", "wilson-thomas", "darby-melson", "torrance"])
@pytest.mark.parametrize("relative", [1e-5, 1e-3, 0.05])
def test_no_method_is_easier_than_the_fully_rough_newtonian_pipe(method, relative):
    key = "bingham" if method == "darby-melson" else "herschel-bulkley"
    thin = {"yield_stress": np.geomspace(1e-3, 10.0, 9)}
    thin |= (
        {"plastic_viscosity": 1e-3}
        if key == "bingham"
        else {"consistency": 1e-3, "flow_index": 0.8}
    )
    model = rheo.model(key, **thin)
    velocity = np.geomspace(1.0, 15.0, 7)[:, np.newaxis]
    found = rheo.friction_factor(
        model, 0.2, velocity, 1100.0, roughness=0.2 * relative, method=method
    )
    fully_rough = (-4.0 * np.log10(relative / 3.7)) ** -2
    assert np.all(found > fully_rough)
    smooth = rheo.friction_factor(model, 0.2, velocity, 1100.0, method=method)
    assert np.all(found > smooth)
    nearly = rheo.friction_factor(model, 0.2, velocity, 1100.0, roughness=1e-16, method=method)
    np.testing.assert_allclose(nearly, smooth, rtol=1e-8)
