"""Thicker products and more solids."""

import numpy as np
import pytest

import rheo
from rheo.errors import InputError
from rheo.line import Product
from rheo.line.thickness import density_with_solids, solids_factor, thicker

PRODUCT = Product(
    rheo.model("bingham", yield_stress=10.0, plastic_viscosity=0.2),
    density=1300.0,
    static_yield_stress=20.0,
    draws=(rheo.model("bingham", yield_stress=[9.0, 11.0], plastic_viscosity=[0.2, 0.2]),),
)


def test_curve_draws_and_static_yield_stress_are_scaled():
    found = thicker(PRODUCT, 1.5)
    assert found.model_at(293.15).stress(50.0) == pytest.approx(1.5 * 20.0)
    assert found.draws[0].parameters["yield_stress"].tolist() == [13.5, 16.5]
    assert found.static_yield_stress == 30.0
    assert PRODUCT.static_yield_stress == 20.0


def test_a_flow_curve_by_temperature_is_scaled_at_every_temperature():
    by_temperature = Product(
        lambda kelvin: rheo.model("newtonian", viscosity=np.exp(-np.asarray(kelvin) / 100)), 1000.0
    )
    found = thicker(by_temperature, 2.0)
    for kelvin in (290.0, 330.0):
        assert found.model_at(kelvin).stress(1.0) == pytest.approx(2 * np.exp(-kelvin / 100))


def test_few_solids_thicken_as_einstein_says():
    """1 + 2.5 φ in the limit (A. Einstein, Annalen der Physik 34 (1911) 591; from memory)."""
    assert float(solids_factor(0.0, 1e-5)) - 1 == pytest.approx(2.5e-5, rel=1e-4)


def test_solids_factor_by_hand():
    # (1 - 0.30/0.63) / (1 - 0.20/0.63) = (0.33/0.43); to the power -2.5 * 0.63 = -1.575.
    assert float(solids_factor(0.2, 0.3)) == pytest.approx((0.33 / 0.43) ** -1.575, rel=1e-12)
    assert float(solids_factor(0.3, 0.2) * solids_factor(0.2, 0.3)) == pytest.approx(1.0)


@pytest.mark.parametrize(("before", "after"), [(0.2, 0.63), (-0.1, 0.2), (0.7, 0.2)])
def test_solids_beyond_packing_are_refused(before, after):
    with pytest.raises(InputError, match="where a suspension packs"):
        solids_factor(before, after)


def test_volumes_of_solids_and_liquid_add_up():
    # 20 % of 2600 kg/m3 in a product of 1320 kg/m3: the liquid weighs 1000 kg/m3.
    assert density_with_solids(1320.0, 0.2, 0.3, 2600.0) == pytest.approx(0.3 * 2600 + 0.7 * 1000)
    assert density_with_solids(1320.0, 0.2, 0.2, 2600.0) == pytest.approx(1320.0)
    with pytest.raises(InputError, match="weigh more than the whole product"):
        density_with_solids(1100.0, 0.5, 0.4, 2600.0)
