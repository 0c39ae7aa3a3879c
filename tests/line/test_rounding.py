"""Pressures that cancel come out as 0, not as their rounding."""

import itertools

import numpy as np
import pytest

import rheo
from rheo.line import Entrance, Line, Pipe, Product, Vessel, solve_line
from rheo.line.rounding import balance

PRODUCT = Product(rheo.model("power-law", consistency=5.0, flow_index=0.4), 1320.0)


def pipe(rise=0.0):
    return Pipe(length=20.0, inside_diameter=0.05, rise=rise)


SUCTION = [
    *((), (Vessel(level=1.3), pipe(-1.3)), (pipe(),), (Vessel(), pipe(1.1))),
    (Vessel(level=1.3), Entrance()),
]
DISCHARGE = [
    *((pipe(),), (pipe(3.0),), (pipe(), Vessel(level=1.3)), (pipe(-1.3), Vessel())),
    (pipe(0.7), pipe(0.6), Vessel()),
]


@pytest.mark.parametrize(("suction", "discharge"), list(itertools.product(SUCTION, DISCHARGE)))
def test_no_pressure_of_rounding_only(suction, discharge):
    result = solve_line(Line(suction=suction, discharge=discharge), PRODUCT, 4.0 / 3600.0)
    found = [
        *(result.static_pressure, result.kinetic_pressure, result.differential_pressure),
        *(result.suction_pressure, result.discharge_pressure, result.start_up.static_pressure),
        *result.profile.pressure,
        *result.profile.total_pressure,
        *result.profile.elevation,
    ]
    sizes = np.abs(np.array(found, dtype=float))
    assert ((sizes == 0) | (sizes > 1e-3)).all()


def test_a_line_that_begins_at_a_flange_meets_the_pump_at_its_pressure():
    """Nothing lies between flange and pump: the gauge pressure there is that of the flange, 0."""
    result = solve_line(Line(discharge=(pipe(2.0), Vessel())), PRODUCT, 4.0 / 3600.0)
    assert float(result.suction_pressure) == 0.0


def test_a_small_difference_stays():
    assert float(balance(1.0, -1.0 + 1e-9)) == pytest.approx(1e-9, rel=1e-6)
    assert float(balance(0.7, 0.6, -1.3)) == 0.0
    assert balance([1.0, 2.0], -1.0).tolist() == [0.0, 1.0]
    assert float(balance(np.inf, 1.0)) == np.inf
    assert float(balance(1e-17, size=1.0)) == 0.0
