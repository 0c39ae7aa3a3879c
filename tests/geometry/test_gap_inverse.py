"""The inverse across the gap against its series, summed term by term to the end."""

from __future__ import annotations

import numpy as np
import pytest
from plain_words import odd_words

from rheo import InputError
from rheo.geometry.gap_inverse import exact_form, power_law_form

# ln τ = 1 + b ln ω + c (ln ω)², which the smoothing finds exactly.
_B, _C = 0.5, 0.03
_LOG_SPEED = np.linspace(-3.0, 5.0, 40)


def _log_stress(log_speed: np.ndarray) -> np.ndarray:
    return 1.0 + _B * log_speed + _C * log_speed**2


def _summed(log_ratio: float) -> np.ndarray:
    """Return γ̇(τ) = 2Σω'(κ^(2p)τ) with the curve continued below the data by its end tangent."""
    first = _LOG_SPEED[0]
    tangent = _B + 2.0 * _C * first
    terms = _log_stress(_LOG_SPEED) - 2.0 * log_ratio * np.arange(20_000)[:, np.newaxis]
    down = terms - _log_stress(first)
    root = np.sqrt(np.maximum(_B**2 - 4.0 * _C * (1.0 - terms), 0.0))
    log_speed = np.where(down >= 0, (root - _B) / (2.0 * _C), first + down / tangent)
    slope = np.where(down >= 0, _B + 2.0 * _C * log_speed, tangent)
    return 2.0 * np.sum(np.exp(log_speed) / slope, axis=0)


@pytest.mark.parametrize(
    ("log_ratio", "from_reading", "within"),
    # In a wide gap the series itself is summed; in a narrow one its rest, by a formula that does
    # not see the bend at the slowest reading.
    [(0.005, 10, 2e-6), (0.02, 30, 4e-7), (0.08, 28, 6e-6), (0.3, 0, 1e-12), (0.7, 0, 1e-12)],
)
def test_the_exact_form_is_the_sum(log_ratio: float, from_reading: int, within: float) -> None:
    speed, stress = np.exp(_LOG_SPEED), np.exp(_log_stress(_LOG_SPEED))
    found = exact_form(speed, stress, np.asarray(log_ratio))
    assert found.degree == 2
    last = slice(from_reading, None)
    np.testing.assert_allclose(found.rate[last], _summed(log_ratio)[last], rtol=within)
    np.testing.assert_array_equal(found.stress, stress)
    np.testing.assert_allclose(found.local_index, _B + 2.0 * _C * _LOG_SPEED, rtol=1e-9)


def test_a_gap_for_each_reading_is_one_gap_within_rounding() -> None:
    speed, stress = np.exp(_LOG_SPEED), np.exp(_log_stress(_LOG_SPEED))
    for form in (exact_form, power_law_form):
        single = form(speed, stress, np.asarray(0.08))
        for scatter in (0.0, 1e-15):
            each = 0.08 + scatter * np.sin(_LOG_SPEED)
            np.testing.assert_allclose(form(speed, stress, each).rate, single.rate, rtol=1e-9)
        with pytest.raises(InputError, match=r"^the readings come from cylinders of") as caught:
            form(speed, stress, 0.08 * (1.0 + 1e-10 * np.sin(_LOG_SPEED)))
        assert odd_words(str(caught.value)) == []
        assert "; only those of one gap can be taken together" in str(caught.value)
