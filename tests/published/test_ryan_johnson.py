"""Ryan & Johnson, "Transition from laminar to turbulent flow in pipes", AIChE J. 5 (1959) 433.

The critical Metzner-Reed Reynolds numbers of power-law fluids as Govier & Aziz, "The Flow of
Complex Mixtures in Pipes" (1972), give them in words: 2100 for a Newtonian fluid, a highest value
of 2400 near n = 0.4, and 1600 at n = 0.1. From memory, and printed to two digits.
"""

from __future__ import annotations

import numpy as np
import pytest

import rheo


def _critical_reynolds(flow_index: float) -> float:
    fluid = rheo.model("power-law", consistency=0.5, flow_index=flow_index)
    given = {"diameter": 0.05, "density": 1000.0}
    velocity = rheo.critical_velocity(fluid, **given, method="stability")
    return float(rheo.pipe_flow(fluid, **given, velocity=velocity, regime="laminar").reynolds)


@pytest.mark.parametrize(("flow_index", "printed"), [(1.0, 2100.0), (0.4, 2400.0), (0.1, 1600.0)])
def test_critical_reynolds_number(flow_index: float, printed: float) -> None:
    assert _critical_reynolds(flow_index) == pytest.approx(printed, abs=50.0)


def test_the_highest_value_is_near_an_index_of_two_fifths() -> None:
    indices = np.arange(0.1, 1.01, 0.05)
    values = [_critical_reynolds(float(index)) for index in indices]
    assert indices[int(np.argmax(values))] == pytest.approx(0.4, abs=0.051)
