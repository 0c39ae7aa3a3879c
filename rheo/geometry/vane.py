"""Vane in a wide vessel: static yield stress, and flow as of a cylinder of the same size."""

from __future__ import annotations

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import Caution
from rheo.geometry import gap_flow
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]

# A project choice: with this slope or less, and no more, the fluid between the blades turns along.
_STRONGLY_THINNING = 0.5
_WIDE = np.asarray(np.inf)


def torque_per_stress(diameter: FloatArray, height: FloatArray) -> FloatArray:
    """Return M/τ = (πD³/2)(H/D + 1/3) [m3] (Nguyen & Boger 1983)."""
    return 0.5 * np.pi * diameter**3 * (height / diameter + 1.0 / 3.0)


def static_yield_stress(
    peak_torque: ArrayLike, diameter: ArrayLike, height: ArrayLike
) -> FloatArray:
    """Return the static yield stress from the peak torque of a slowly started vane.

    Parameters
    ----------
    peak_torque : array_like
        Largest torque [N m].
    diameter, height : array_like
        Of the vane [m]; the vane is covered by the fluid.

    Returns
    -------
    array
        Static yield stress [Pa], M = (πD³/2)(H/D + 1/3)τ_y. The stress is taken to be the same
        on the side and on both ends of the cylinder that the vane cuts; for a height of two
        diameters or more what is really there on the ends counts for little.
    """
    return np.asarray(peak_torque, dtype=float) / torque_per_stress(
        np.asarray(diameter, dtype=float), np.asarray(height, dtype=float)
    )


def peak_torque(
    static_yield_stress: ArrayLike, diameter: ArrayLike, height: ArrayLike
) -> FloatArray:
    """Return the peak torque [N m] of a static yield stress [Pa]: the reverse relation."""
    return np.asarray(static_yield_stress, dtype=float) * torque_per_stress(
        np.asarray(diameter, dtype=float), np.asarray(height, dtype=float)
    )


def setting_at(
    model: Model, rate: FloatArray, diameter: FloatArray, height: FloatArray
) -> FloatArray:
    """Angular speed [rad/s] at a shear rate at the cylinder that the vane cuts."""
    return gap_flow.angular_speed(model, rate, _WIDE)


def sheared_at(
    model: Model, setting: FloatArray, diameter: FloatArray, height: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate [1/s] and stress [Pa] at the cylinder that the vane cuts."""
    rate = gap_flow.bob_rate(model, setting, _WIDE)
    return rate, model.record.stress(rate, *model)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    diameter: FloatArray,
    height: FloatArray,
) -> FloatArray:
    """Torque [N m]."""
    return stress * torque_per_stress(diameter, height)


def nominal(
    setting: FloatArray, reading: FloatArray, diameter: FloatArray, height: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate 2ω [1/s] of a Newtonian fluid without end, and the stress [Pa]."""
    return 2.0 * setting, reading / torque_per_stress(diameter, height)


def from_data(
    setting: FloatArray, reading: FloatArray, diameter: FloatArray, height: FloatArray
) -> FlowPoints:
    """Points without a model: the Newtonian rate over n' = d ln M/d ln ω."""
    rate, stress = nominal(setting, reading, diameter, height)
    curve = smoothed(rate, stress)
    return points(rate / curve.slope(np.log(rate)), stress, curve, np.log(rate))


def cautions(
    model: Model, rate: FloatArray, diameter: FloatArray, height: FloatArray
) -> tuple[Caution, ...]:
    """Warn of a rotating vane in a fluid that does not turn as a block between its blades."""
    moving = rate > 0
    slope = model.record.log_slope(np.where(moving, rate, 1.0), *model)
    largest = float(np.max(np.where(moving, slope, 0.0)))
    if not largest > _STRONGLY_THINNING:
        return ()
    return (
        Caution(
            code="vane-not-shear-thinning",
            sentence=f"The flow curve has a logarithmic slope of up to {largest:.2g} here; a vane "
            f"is like a cylinder only in a fluid whose slope is below {_STRONGLY_THINNING:g}.",
            advice="Take the torque as a rough figure, or use cylinders.",
            place="vane",
        ),
    )


RECORD = GeometryRecord(
    key="vane",
    name="vane in a wide vessel",
    setting="angular_speed",
    reading="torque",
    place="vane",
    dimensions=(
        Dimension("diameter", "D", "m", "diameter of the vane", 1e-4, 10.0),
        Dimension("height", "H", "m", "height of the vane", 1e-4, 10.0),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: 2ω and M/[(πD³/2)(H/D + 1/3)]",
    inverse_forms={"wide-gap": from_data},
    cautions=cautions,
    source="N. Q. Dzuy (Nguyen) & D. V. Boger, J. Rheol. 27 (1983) 321, for the torque at rest",
    validity="At rest (setting 0) the peak torque of the yield stress, for a vessel of two vane "
    "diameters or more. Rotating, the vane is taken as a solid cylinder of its diameter in a "
    "vessel without end, with the same stress on its ends: this holds for fluids with a yield "
    "stress or strong shear thinning, which turn as a block between the blades; a Newtonian fluid "
    "flows in between and its torque is not given by it.",
)
