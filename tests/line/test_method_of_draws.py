"""Draws of other models keep the turbulent method of the product's own flow curve."""

import numpy as np
import pytest

import rheo
from rheo.errors import InputError
from rheo.line import Line, Pipe, Product
from rheo.line.walk import walk

LINE = Line(discharge=(Pipe(100.0, 0.15),))
FLOW = 0.08
POWER_LAW = rheo.model("power-law", consistency=0.35, flow_index=0.62)


def draws(key: str, **parameters: float) -> rheo.Model:
    return rheo.model(key, **{name: np.full(5, value) for name, value in parameters.items()})


# The same curve as the power law, by the name of another model.
SAME = draws("herschel-bulkley", yield_stress=0.0, consistency=0.35, flow_index=0.62)
CARREAU = draws(
    "carreau",
    zero_shear_viscosity=5.0,
    infinite_shear_viscosity=1e-3,
    time_constant=2.0,
    flow_index=0.62,
)


def test_one_curve_by_two_names_has_one_pressure() -> None:
    """The default methods of the two names lie 7 % apart here; the doubt must not hold that."""
    product = Product(POWER_LAW, 1100.0, draws=(SAME,))
    found = rheo.solve_line(LINE, product, FLOW)
    low, high = found.differential_pressure_interval
    assert low == pytest.approx(float(found.differential_pressure), rel=1e-9)
    assert high == pytest.approx(float(found.differential_pressure), rel=1e-9)
    shares = {one.key: one.share for one in rheo.doubt_budget(LINE, product, FLOW).shares}
    assert shares["model-choice"] + shares["readings"] < 1e-12
    assert sum(shares.values()) == pytest.approx(1.0, rel=1e-12)


def test_a_method_that_is_not_made_for_a_draw_gives_way_to_its_default() -> None:
    bingham = rheo.model("bingham", yield_stress=6.0, plastic_viscosity=0.02)
    product = Product(bingham, 1100.0, draws=(CARREAU,))
    found = walk(LINE, product, FLOW, source=CARREAU, method="torrance")
    default = walk(LINE, Product(CARREAU, 1100.0), FLOW)
    np.testing.assert_allclose(
        found.differential_pressure, default.differential_pressure, rtol=1e-12
    )
    rheo.solve_line(LINE, product, FLOW, method="torrance")


def test_a_method_that_is_not_made_for_the_product_is_refused() -> None:
    product = Product(POWER_LAW, 1100.0, draws=(SAME,))
    with pytest.raises(InputError, match="'darby-melson' is made for bingham, not for power-law"):
        rheo.solve_line(LINE, product, FLOW, method="darby-melson")
