"""Spindle in a wide vessel, for relative viscometers: the user's own two factors."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.geometry import gap_flow
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]

# The vessel is far away: the ratio of its radius to the spindle's has no end.
_WIDE = np.asarray(np.inf)


def setting_at(
    model: Model, rate: FloatArray, rate_factor: FloatArray, stress_factor: FloatArray
) -> FloatArray:
    """Angular speed [rad/s]: k_γ ω = ∫γ̇ d(ln τ) from rest; γ̇ = k_γ ω/n for a power law."""
    return gap_flow.angular_speed(model, rate, _WIDE) * 2.0 / rate_factor


def sheared_at(
    model: Model, setting: FloatArray, rate_factor: FloatArray, stress_factor: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate [1/s] and stress [Pa] at the spindle."""
    rate = gap_flow.bob_rate(model, 0.5 * rate_factor * setting, _WIDE)
    return rate, model.record.stress(rate, *model)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    rate_factor: FloatArray,
    stress_factor: FloatArray,
) -> FloatArray:
    """Torque [N m]: τ = k_τ M."""
    return stress / stress_factor


def nominal(
    setting: FloatArray, reading: FloatArray, rate_factor: FloatArray, stress_factor: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate k_γ ω [1/s] and stress k_τ M [Pa]."""
    return rate_factor * setting, stress_factor * reading


def from_data(
    setting: FloatArray, reading: FloatArray, rate_factor: FloatArray, stress_factor: FloatArray
) -> FlowPoints:
    """Points without a model: the Newtonian rate over n' = d ln M/d ln ω."""
    rate, stress = nominal(setting, reading, rate_factor, stress_factor)
    curve = smoothed(rate, stress)
    return points(rate / curve.slope(np.log(rate)), stress, curve, np.log(rate))


RECORD = GeometryRecord(
    key="spindle",
    name="spindle in a wide vessel",
    setting="angular_speed",
    reading="torque",
    place="spindle",
    dimensions=(
        Dimension(
            "rate_factor", "k_γ", "-", "Newtonian shear rate over angular speed", 1e-3, 1e3, 2.0
        ),
        Dimension("stress_factor", "k_τ", "1/m^3", "shear stress over torque", 1e-2, 1e10),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: k_γ ω and k_τ M",
    inverse_forms={"wide-gap": from_data},
    source="I. M. Krieger & S. H. Maron, J. Appl. Phys. 23 (1952) 147, for a cup without end: "
    "γ̇ = 2ω/n' with n' = d ln M/d ln ω, here with the user's factor in place of 2",
    validity="A relative method: only as good as the factors. 2 is the factor of a long cylinder; "
    "the vessel must be several times as wide as the spindle. Use it to compare products.",
)
