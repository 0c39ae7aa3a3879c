"""Nguyen & Boger, "Yield stress measurement for concentrated suspensions", J. Rheol. 27 (1983) 321.

For a vane twice as high as wide the literature prints M = 3.66 D^3 tau_y (from memory): the stress
acts on the side and on both ends of the cylinder that the vane cuts.
"""

from __future__ import annotations

import math

import pytest

import rheo


@pytest.mark.parametrize("diameter", [0.01, 0.025, 0.06])
def test_vane_of_twice_its_width(diameter: float) -> None:
    vane = rheo.geometry("vane", diameter=diameter, height=2.0 * diameter)
    paste = rheo.model("herschel-bulkley", yield_stress=85.0, consistency=6.0, flow_index=0.5)
    at_rest = float(vane.predict(paste, 0.0))
    # 7 pi/6 = 3.665, which is printed cut off rather than rounded.
    assert at_rest / (diameter**3 * 85.0) == pytest.approx(3.66, abs=0.006)
    assert at_rest / (diameter**3 * 85.0) == pytest.approx(7.0 * math.pi / 6.0, rel=1e-12)
