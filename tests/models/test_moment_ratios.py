"""Closed moment ratios of the flow-curve models against quadrature and high precision."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from flow_curves import KEYS, any_model, example, powers_of_ten, precise_stress
from hypothesis import given, settings

import rheo
from rheo import Model
from rheo.geometry.curve_integrals import moment_ratio, moment_ratio_by_quadrature

CLOSED = tuple(key for key in KEYS if rheo.model_records()[key].moment_ratio is not None)


def test_which_models_have_a_closed_form() -> None:
    assert set(KEYS) - set(CLOSED) == {"carreau", "carreau-yasuda", "cross"}


@settings(deadline=None, max_examples=120, derandomize=True)
@given(model=any_model(), rate=powers_of_ten(-6, 7))
def test_closed_forms_against_quadrature(model: Model, rate: float) -> None:
    for k in (0, 1, 2):
        closed = float(moment_ratio(model, np.asarray(rate), k))
        numeric = float(moment_ratio_by_quadrature(model, np.asarray(rate), k))
        assert closed == pytest.approx(numeric, rel=1e-12)
        assert 0.0 < closed < 1.0


@pytest.mark.parametrize("key", KEYS)
@pytest.mark.parametrize("k", [0, 1, 2])
def test_against_thirty_digits(key: str, k: int) -> None:
    """The integral by parts, ∫τ^k γ̇dτ = [τ^(k+1)γ̇ - ∫τ^(k+1)dγ̇]/(k+1), with 30 digits."""
    model = example(key)
    top_rate = 37.0
    with mpmath.workdps(30):
        stress = precise_stress(model)
        split = [mpmath.mpf(0)] + [
            mpmath.mpf(top_rate) * mpmath.mpf(2) ** -j for j in range(60, -1, -1)
        ]
        rest = mpmath.quad(lambda rate: stress(rate) ** (k + 1), split)
        top = stress(mpmath.mpf(top_rate)) ** (k + 1) * top_rate
        expected = float((top - rest) / (top * (k + 1)))
    found = float(moment_ratio(model, np.asarray(top_rate), k))
    assert found == pytest.approx(expected, rel=1e-12)


@pytest.mark.parametrize("k", [0, 1, 2])
@pytest.mark.parametrize(
    ("offset", "index", "rate"),
    [
        (5.0, 0.4, 5.0001),
        (5.0, 0.4, 4.9999),
        (5.0, 0.4, 1e-7),
        (5.0, 1.9, 1e-9),
        (0.0, 0.3, 3.0),
        (1e-8, 0.05, 1e4),
        (1e6, 0.01, 1e-3),
        (5.0, 0.9, 1e9),
    ],
)
def test_robertson_stiff_keeps_its_digits_from_yield_to_power_law(
    k: int, offset: float, index: float, rate: float
) -> None:
    """The closed form with 40 digits, on both sides of where the sum takes its place."""
    model = rheo.model("robertson-stiff", consistency=2.0, rate_offset=offset, flow_index=index)
    with mpmath.workdps(40):
        power, whole = (k + 1) * mpmath.mpf(index), mpmath.mpf(rate) + mpmath.mpf(offset)
        rest = mpmath.mpf(offset) / whole
        part = (1 - rest ** (power + 1)) / (power + 1) - rest * (1 - rest**power) / power
        expected = float(mpmath.mpf(index) * part * whole / mpmath.mpf(rate))
    found = float(moment_ratio(model, np.asarray(rate), k))
    assert found == pytest.approx(expected, rel=2e-15)
