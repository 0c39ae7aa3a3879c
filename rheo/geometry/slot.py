"""Wide slot between two flat walls."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import Caution, InputError
from rheo.geometry.channel import solve_channel
from rheo.geometry.curve_integrals import moment_ratio
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]

# Common practice: the side walls are left out of account from the second on; a Newtonian fluid
# loses 0.63 of its flow over the aspect to them. Nearer to a square it is no slot.
LEAST_ASPECT = 2.0
_ASPECT = 10.0


def nominal_rate(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return 3V/h [1/s] of laminar slot flow at a wall shear rate [1/s] above 0.

    3V/h = (3/τw²)∫τγ̇dτ, h half the gap.
    """
    return 3.0 * wall_rate * moment_ratio(model, wall_rate, 1)


def wall_rate(model: Model, nominal_rate: FloatArray) -> FloatArray:
    """Return the wall shear rate [1/s] at 3V/h [1/s] above 0."""
    return solve_channel(model, nominal_rate, 1)


def velocity_ratio(model: Model, wall_rate: FloatArray) -> FloatArray:
    """Return u_max/V [-] at a wall shear rate [1/s]; 1.5 for a Newtonian fluid."""
    return moment_ratio(model, wall_rate, 0) / moment_ratio(model, wall_rate, 1)


def setting_at(
    model: Model,
    rate: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> FloatArray:
    """Flow [m3/s] at a wall shear rate."""
    return nominal_rate(model, rate) * half_gap / 3.0 * (2.0 * half_gap * width)


def sheared_at(
    model: Model,
    setting: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Wall shear rate [1/s] and stress [Pa] at a flow."""
    rate = wall_rate(model, 3.0 * setting / (2.0 * half_gap**2 * width))
    return rate, model.record.stress(rate, *model)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> FloatArray:
    """Pressure drop [Pa]: ΔP = τ_w L/h."""
    return stress * length / half_gap


def nominal(
    setting: FloatArray,
    reading: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """3V/h [1/s] and the wall stress h ΔP/L [Pa]."""
    return 3.0 * setting / (2.0 * half_gap**2 * width), reading * half_gap / length


def from_data(
    setting: FloatArray,
    reading: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> FlowPoints:
    """Wall points without a model: γ̇_w = (3V/h)(2n' + 1)/(3n')."""
    rate, stress = nominal(setting, reading, half_gap, width, length)
    curve = smoothed(rate, stress)
    index = curve.slope(np.log(rate))
    return points(rate * (2.0 * index + 1.0) / (3.0 * index), stress, curve, np.log(rate))


def cautions(
    model: Model,
    rate: FloatArray,
    half_gap: FloatArray,
    width: FloatArray,
    length: FloatArray,
) -> tuple[Caution, ...]:
    """Warn of side walls that count."""
    aspect = float(np.min(width / (2.0 * half_gap)))
    if aspect >= _ASPECT:
        return ()
    return (
        Caution(
            code="narrow-slot",
            sentence=f"The slot is {aspect:.3g} times as wide as its gap; its sides add about "
            f"{63.0 / aspect:.0f} % to the pressure drop of a Newtonian fluid.",
            advice=f"Use a slot {_ASPECT:g} times as wide as its gap, or allow for the sides.",
            place="slot",
        ),
    )


def _check(half_gap: FloatArray, width: FloatArray, length: FloatArray) -> None:
    width, half_gap = np.broadcast_arrays(width, half_gap)
    wrong = width < LEAST_ASPECT * 2.0 * half_gap
    if np.any(wrong):
        raise InputError(
            f"width is {float(width[wrong].flat[0]):g} m; it must be at least {LEAST_ASPECT:g} "
            f"gaps, {LEAST_ASPECT * 2.0 * float(half_gap[wrong].flat[0]):g} m",
            "geometry slot",
        )


RECORD = GeometryRecord(
    key="slot",
    name="wide slot",
    setting="flow",
    reading="pressure_drop",
    place="wall",
    dimensions=(
        Dimension("half_gap", "h", "m", "half the gap between the walls", 1e-6, 1.0),
        Dimension("width", "w", "m", "width of the slot", 1e-5, 100.0),
        Dimension("length", "L", "m", "length between the pressure points", 1e-5, 1e5),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    check=_check,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: 3V/h and h ΔP/L, h half the gap",
    inverse_forms={"rabinowitsch-mooney": from_data},
    cautions=cautions,
    source="K. Walters, Rheometry (1975), chapter 5; Newtonian τ_w = 3ηV/h is common practice",
    validity="Steady laminar flow of constant temperature without slip or entrance loss, in a slot "
    "whose width is many times its gap (10 or more is common practice).",
)
