"""Beyond the transition, but no turbulent stress above the laminar one: said, not passed over."""

from __future__ import annotations

import numpy as np
import pytest

import rheo

CASES = {
    # A stiff plug in a thin liquid: Wilson and Thomas' stress lies below the laminar one.
    "bingham": ({"yield_stress": 13.6, "plastic_viscosity": 6.2e-4}, 0.05, 1.99, 0.0),
    # The turbulent root in a rough pipe belongs to a shear rate that is no floating-point number.
    "power-law": ({"consistency": 0.26, "flow_index": 0.025}, 0.001, 10.0, 1e-8),
}


@pytest.mark.parametrize("key", CASES)
def test_the_laminar_stress_is_taken_and_said_to_be(key: str) -> None:
    parameters, diameter, velocity, roughness = CASES[key]
    model = rheo.model(key, **parameters)
    flow = rheo.pipe_flow(model, diameter, velocity, 1100.0, roughness)
    laminar = rheo.pipe_flow(model, diameter, velocity, 1100.0, regime="laminar")
    assert flow.regime == "transition"
    assert flow.wall_stress == laminar.wall_stress
    codes = [one.code for one in flow.cautions]
    assert "turbulent-below-laminar" in codes
    assert "transition-flow" not in codes
    said = next(one.sentence for one in flow.cautions if one.code == "turbulent-below-laminar")
    assert said.startswith("The flow is beyond the transition by the stability criterion")


def test_of_many_the_share_is_said() -> None:
    parameters, diameter, velocity, _ = CASES["bingham"]
    model = rheo.model("bingham", **parameters)
    flow = rheo.pipe_flow(
        model, diameter=diameter, velocity=np.array([0.01, velocity, 30.0]), density=1100.0
    )
    assert list(flow.regime) == ["laminar", "transition", "turbulent"]
    said = next(one.sentence for one in flow.cautions if one.code == "turbulent-below-laminar")
    assert said.startswith("In 33.3 % of the 3 cases the flow is beyond the transition")
