"""Cone and plate: one shear rate everywhere."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution
from rheo.geometry.flow_points import FlowPoints, exact_points
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]

_LARGEST_ANGLE = float(np.radians(4.01))


def setting_at(
    model: Model,
    rate: FloatArray,
    radius: FloatArray,
    angle: FloatArray,
) -> FloatArray:
    """Angular speed [rad/s]: ω = γ̇θ."""
    return rate * angle


def sheared_at(
    model: Model,
    setting: FloatArray,
    radius: FloatArray,
    angle: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Shear rate ω/θ [1/s] and stress [Pa]."""
    rate = setting / angle
    return rate, model.record.stress(rate, *model)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    radius: FloatArray,
    angle: FloatArray,
) -> FloatArray:
    """Torque [N m]: M = 2πR³τ/3."""
    return 2.0 * np.pi / 3.0 * radius**3 * stress


def nominal(
    setting: FloatArray, reading: FloatArray, radius: FloatArray, angle: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Shear rate ω/θ [1/s] and stress 3M/(2πR³) [Pa], exact for every fluid."""
    return setting / angle, 3.0 * reading / (2.0 * np.pi * radius**3)


def from_data(
    setting: FloatArray, reading: FloatArray, radius: FloatArray, angle: FloatArray
) -> FlowPoints:
    """Points without a model: the nominal ones are exact."""
    return exact_points(*nominal(setting, reading, radius, angle))


def cautions(
    model: Model, rate: FloatArray, radius: FloatArray, angle: FloatArray
) -> tuple[Caution, ...]:
    """Warn of an angle at which the shear rate is not the same everywhere."""
    largest = float(np.max(angle))
    if largest <= _LARGEST_ANGLE:
        return ()
    return (
        Caution(
            code="cone-angle",
            sentence=f"The cone's angle is {np.degrees(largest):.2g}°; above 4° the shear rate "
            "is not the same everywhere.",
            advice="Use a flatter cone where it matters.",
            place="cone and plate",
        ),
    )


RECORD = GeometryRecord(
    key="cone-plate",
    name="cone and plate",
    setting="angular_speed",
    reading="torque",
    place="cone",
    dimensions=(
        Dimension("radius", "R", "m", "radius of the cone", 1e-4, 1.0),
        Dimension("angle", "θ", "rad", "angle between cone and plate", 1e-4, 0.18),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: ω/θ and 3M/(2πR³), which hold for every fluid",
    inverse_forms={"nominal": from_data},
    cautions=cautions,
    source="ISO 3219-2; K. Walters, Rheometry (1975), chapter 4",
    validity="Angles up to 4° (ω/θ and ω/tan θ differ by 0.16 % there), below the speed at which "
    "the sample leaves the gap; no particles larger than a tenth of the truncation gap.",
)
