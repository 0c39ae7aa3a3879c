"""Relative viscosity of suspensions of spheres: D. G. Thomas, J. Colloid Sci. 20 (1965) 267.

η/η_liquid = 1 + 2.5 φ + 10.05 φ² + 0.00273 exp(16.6 φ), φ by volume (from memory).
"""

import numpy as np
import pytest

import rheo

WATER = 1.0e-3


def relative_viscosity(fraction):
    return 1.0 + 2.5 * fraction + 10.05 * fraction**2 + 0.00273 * np.exp(16.6 * fraction)


@pytest.mark.parametrize(
    ("low", "high", "off"),
    # Thomas's curve bends in ln(η) against φ: an exponential lies off it by the more the wider and
    # the thicker the range is; "off" is a little more than the largest distance of a straight
    # line from a parabola with the curve's own bend.
    [(0.15, 0.25, 0.006), (0.20, 0.30, 0.010), (0.30, 0.40, 0.028)],
)
def test_the_fitted_law_is_thomass_curve_between_the_readings(low, high, off):
    measured = np.repeat([low, (low + high) / 2, high], 3)
    rate = np.tile([1.0, 10.0, 100.0], 3)
    curve = rheo.FlowCurve(
        rate, WATER * relative_viscosity(measured) * rate, solids_fraction=measured
    )
    fits = rheo.fit_concentrations(curve, models="newtonian")
    between = np.linspace(low, high, 21)
    found = fits.at(between).parameters["viscosity"]
    assert found == pytest.approx(WATER * relative_viscosity(between), rel=off)


def test_a_narrow_range_gives_the_slope_of_thomass_curve():
    middle, step = 0.25, 0.005
    measured = np.repeat([middle - step, middle + step], 4)
    rate = np.tile([1.0, 5.0, 20.0, 100.0], 2)
    stress = WATER * relative_viscosity(measured) * rate
    fits = rheo.fit_concentrations(
        rheo.FlowCurve(rate, stress), measured, "newtonian", reference=middle
    )
    derivative = 2.5 + 20.1 * middle + 0.00273 * 16.6 * np.exp(16.6 * middle)
    # A secant over ±0.005 differs from the tangent by the third derivative times 0.005²/6.
    assert fits.best.parameters["solids_slope"].value == pytest.approx(
        derivative / relative_viscosity(middle), rel=1e-3
    )
