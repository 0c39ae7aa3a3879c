"""Every model, geometry and the pipe over extreme but legal values: finite, or a Caution says why.

Rates from 1e-6 to 1e7 1/s, viscosities from 1e-4 to 1e6 Pa.s. Warnings are errors in these tests,
so that none leaks.
"""

from __future__ import annotations

import numpy as np
import pytest
from flow_curves import KEYS

import rheo
from rheo.geometry import make_geometry

RATES = np.geomspace(1e-6, 1e7, 27)
DRAWS = 60

GEOMETRIES = {
    "tube": {"diameter": 2e-3, "length": 0.3},
    "slot": {"half_gap": 1e-3, "width": 0.05, "length": 0.3},
    "cone-plate": {"radius": 0.025, "angle": 0.02},
    "parallel-plate": {"radius": 0.025, "gap": 1e-3},
    "concentric-cylinders": {"inner_radius": 0.0125, "outer_radius": 0.01356, "length": 0.0375},
    "wide gap": {"inner_radius": 0.005, "outer_radius": 0.05, "length": 0.05},
    "spindle": {"rate_factor": 2.0, "stress_factor": 3e3},
    "six-speed": {},
}
KINDS = {"wide gap": "concentric-cylinders"}


def extreme(key: str, count: int, seed: int) -> rheo.Model:
    """Return a model with arrays of parameters from one end of what is allowed to the other.

    Viscosities lie between 1e-4 and 1e6 Pa.s at 1 1/s; parameters may be at their bounds.
    """
    random = np.random.default_rng([seed, KEYS.index(key)])

    def viscosity():
        return 10.0 ** random.uniform(-4, 6, count)

    values = {}
    for one in rheo.model_record(key).parameters:
        if one.unit.startswith("Pa.s"):
            values[one.key] = viscosity()
        elif one.unit == "Pa":
            values[one.key] = 10.0 ** random.uniform(-4, 5, count)
        elif one.unit == "s":
            values[one.key] = 10.0 ** random.uniform(-7, 6, count)
        elif one.unit == "1/s":
            values[one.key] = 10.0 ** random.uniform(-6, 6, count)
        else:
            values[one.key] = random.uniform(one.lower, min(one.upper, 20.0), count)
        at_bound = random.random(count) < 0.08
        if one.lower == 0.0:
            values[one.key] = np.where(at_bound, 0.0, values[one.key])
        if one.upper <= 20.0:
            at_bound = random.random(count) < 0.08
            values[one.key] = np.where(at_bound, one.upper, values[one.key])
    allowed = rheo.model_record(key).allowed
    if allowed is not None:
        good = np.asarray(allowed(*values.values()))
        values = {name: value[good] for name, value in values.items()}
    return rheo.model(key, **values)


@pytest.mark.parametrize("key", KEYS)
def test_flow_curves(key):
    model = extreme(key, 400, 1)
    local = model.with_new_axis()
    stress = local.stress(RATES)
    assert np.isfinite(stress).all()
    assert (stress >= 0).all()
    assert (np.diff(stress, axis=-1) >= -1e-12 * stress[:, 1:]).all()
    for values in (local.viscosity(RATES), local.log_slope(RATES), local.jacobian(RATES)):
        assert not np.isnan(values).any()
    # Where the curve is flat to rounding, its inverse is any rate on the flat.
    back = local.rate(stress)
    assert not np.isnan(back).any()
    again = local.stress(np.where(np.isfinite(back), back, 1.0))
    finite = np.isfinite(back) & (stress > 0)
    np.testing.assert_allclose(again[finite], stress[finite], rtol=1e-9)


@pytest.mark.parametrize("name", GEOMETRIES)
@pytest.mark.parametrize("key", KEYS)
def test_geometries(key, name):
    geometry = make_geometry(KINDS.get(name, name), **GEOMETRIES[name])
    model = extreme(key, DRAWS, 2).with_new_axis()
    # At rest at the largest stress of all, a curve that may start at its yield stress.
    setting = geometry.setting_for_rate(model, RATES)
    assert np.isfinite(setting).all()
    flowing = setting > 0
    safe = np.where(flowing, setting, 1.0)
    rate, stress = geometry.sheared(model, safe)
    reading = geometry.predict(model, safe)
    for values in (rate, stress, reading):
        assert np.isfinite(values[flowing]).all()
    at = np.broadcast_to(RATES, setting.shape)
    # A setting fixes the stress; the rate only where the curve is not flat.
    wanted = model.stress(RATES)
    tight = flowing & (wanted > 0)
    np.testing.assert_allclose(stress[tight], np.broadcast_to(wanted, at.shape)[tight], rtol=1e-6)


@pytest.mark.parametrize("key", KEYS)
def test_pipe_flow(key):
    model = extreme(key, DRAWS, 3).with_new_axis()
    velocity = np.geomspace(1e-6, 50.0, 12)
    diameter = np.array([1e-3, 0.05, 2.0])[:, np.newaxis, np.newaxis]
    flow = rheo.pipe_flow(model, diameter, velocity, 1100.0, 1e-5 * diameter)
    found = {
        name: np.broadcast_to(getattr(flow, name), np.shape(flow.wall_stress))
        for name in (
            *("wall_stress", "wall_rate", "nominal_rate", "local_flow_index", "reynolds"),
            *("critical_reynolds", "friction_factor", "pressure_gradient", "velocity_ratio"),
            *("kinetic_energy_factor", "plug_fraction", "local_consistency"),
        )
    }
    for name, values in found.items():
        if np.isnan(values).any():
            assert flow.cautions, name
        else:
            assert not np.isinf(values).any(), name
    assert np.isfinite(found["wall_stress"]).all()
    assert (found["wall_stress"] > 0).all()
    # More flow never takes less pressure. Below a local flow index of 0.1 the turbulent stress may
    # belong to a shear rate that is no floating-point number, and the laminar one stands.
    gradient = found["pressure_gradient"]
    rises = np.diff(gradient, axis=-1) >= -1e-9 * gradient[..., 1:]
    bent = np.min(found["local_flow_index"], axis=-1, keepdims=True) >= 0.1
    assert (rises | ~bent).all()
    assert flow.cautions
    assert (found["velocity_ratio"] >= 1.0 - 1e-9).all()
