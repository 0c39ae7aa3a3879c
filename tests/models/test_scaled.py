"""A scaled model has the given times the stress of the other at every shear rate."""

import numpy as np
import pytest
from flow_curves import KEYS, models_of
from hypothesis import given, settings
from hypothesis import strategies as st

import rheo
from rheo.errors import InputError
from rheo.models.scaled import scaled

RATES = np.geomspace(1e-3, 1e4, 15)


@pytest.mark.parametrize("key", KEYS)
@settings(deadline=None, max_examples=15, derandomize=True)
@given(data=st.data(), factor=st.floats(0.2, 5.0))
def test_the_stress_is_scaled_at_every_rate(key, data, factor):
    model = data.draw(models_of(key))
    thicker = scaled(model, factor)
    np.testing.assert_allclose(thicker.stress(RATES), factor * model.stress(RATES), rtol=1e-11)
    np.testing.assert_allclose(thicker.yield_stress, factor * model.yield_stress, rtol=1e-13)
    np.testing.assert_allclose(thicker.log_slope(RATES), model.log_slope(RATES), rtol=1e-9)


def test_factors_broadcast_against_draws():
    model = rheo.model("power-law", consistency=[1.0, 2.0, 3.0], flow_index=0.5)
    assert scaled(model, np.array([[1.0], [2.0]])).parameters["consistency"].tolist() == [
        [1.0, 2.0, 3.0],
        [2.0, 4.0, 6.0],
    ]


@pytest.mark.parametrize("factor", [0.0, -1.0, np.nan, np.inf])
def test_a_factor_that_makes_no_product_is_refused(factor):
    with pytest.raises(InputError, match="must be a finite number above 0"):
        scaled(rheo.model("newtonian", viscosity=1.0), factor)
