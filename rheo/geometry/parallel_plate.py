"""Parallel plates: the shear rate rises from the axis to the rim."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.geometry.curve_integrals import integrate_below
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]


def setting_at(model: Model, rate: FloatArray, radius: FloatArray, gap: FloatArray) -> FloatArray:
    """Angular speed [rad/s]: ω = γ̇_R h/R."""
    return rate * gap / radius


def sheared_at(
    model: Model, setting: FloatArray, radius: FloatArray, gap: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate ωR/h [1/s] and stress [Pa] at the rim."""
    rate = setting * radius / gap
    return rate, model.record.stress(rate, *model)


def mean_stress(model: Model, rim_rate: FloatArray) -> FloatArray:
    """Return M/(2πR³) = ∫(γ̇/γ̇_R)³ τ d(ln γ̇) [Pa] at a rim shear rate [1/s] of 0 or more."""

    def integrand(local: Model, node_rate: FloatArray, level: int) -> FloatArray:
        return local.record.stress(node_rate, *local) * node_rate**3

    moving = rim_rate > 0
    rate = np.where(moving, rim_rate, 1.0)
    flowing = integrate_below(model, rate, integrand) / rate**3
    return np.where(moving, flowing, np.where(np.isnan(rim_rate), np.nan, model.yield_stress / 3.0))


def reading_at(
    model: Model, rate: FloatArray, stress: FloatArray, radius: FloatArray, gap: FloatArray
) -> FloatArray:
    """Torque [N m]: M = 2π∫r²τ(rω/h)dr."""
    return 2.0 * np.pi * radius**3 * mean_stress(model, rate)


def torque_slope(model: Model, rim_rate: FloatArray) -> FloatArray:
    """Return d ln M/d ln γ̇_R [-], from τ_R = (M/2πR³)(3 + d ln M/d ln γ̇_R)."""
    return model.record.stress(rim_rate, *model) / mean_stress(model, rim_rate) - 3.0


def nominal(
    setting: FloatArray, reading: FloatArray, radius: FloatArray, gap: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Rim rate ωR/h [1/s] and the Newtonian rim stress 2M/(πR³) [Pa]."""
    return setting * radius / gap, 2.0 * reading / (np.pi * radius**3)


def from_data(
    setting: FloatArray, reading: FloatArray, radius: FloatArray, gap: FloatArray
) -> FlowPoints:
    """Rim points without a model: τ_R = (M/2πR³)(3 + d ln M/d ln γ̇_R)."""
    rate, apparent = nominal(setting, reading, radius, gap)
    curve = smoothed(rate, apparent)
    index = curve.slope(np.log(rate))
    return points(rate, 0.25 * apparent * (3.0 + index), curve, np.log(rate))


def _check(radius: FloatArray, gap: FloatArray) -> None:
    gap, radius = np.broadcast_arrays(gap, radius)
    wrong = gap > 0.5 * radius
    if np.any(wrong):
        raise InputError(
            f"gap is {float(gap[wrong].flat[0]):g} m; it must be at most half the radius, "
            f"{0.5 * float(radius[wrong].flat[0]):g} m",
            "geometry parallel-plate",
        )


RECORD = GeometryRecord(
    key="parallel-plate",
    name="parallel plates",
    setting="angular_speed",
    reading="torque",
    place="rim",
    dimensions=(
        Dimension("radius", "R", "m", "radius of the plates", 1e-4, 1.0),
        Dimension("gap", "h", "m", "gap between the plates", 1e-6, 0.5),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    check=_check,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: ωR/h and 2M/(πR³) at the rim; the rate holds for every fluid, the "
    "stress only for a Newtonian one",
    inverse_forms={"rim-slope": from_data},
    source="K. Walters, Rheometry (1975), chapter 4; ISO 3219-2",
    validity="Gap much smaller than the radius and ten particle diameters or more (common "
    "practice), no slip, below the speed at which the sample leaves the gap.",
)
