"""Concentric cylinders: cup and bob with a gap of any width, partly at rest or not."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.geometry import gap_flow, gap_inverse
from rheo.geometry.flow_points import FlowPoints
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model

FloatArray = NDArray[np.float64]


def log_radius_ratio(inner_radius: FloatArray, outer_radius: FloatArray) -> FloatArray:
    """Return ln(R_o/R_i) [-], exact for narrow gaps too."""
    return np.log1p((outer_radius - inner_radius) / inner_radius)


def torque_per_stress(
    inner_radius: FloatArray, length: FloatArray, end_factor: FloatArray
) -> FloatArray:
    """Return torque over bob stress, 2πR_i²L c_L [m3]."""
    return 2.0 * np.pi * inner_radius**2 * length * end_factor


def setting_at(
    model: Model,
    rate: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> FloatArray:
    """Angular speed [rad/s] at a shear rate at the bob."""
    return gap_flow.angular_speed(model, rate, log_radius_ratio(inner_radius, outer_radius))


def sheared_at(
    model: Model,
    setting: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Shear rate [1/s] and stress [Pa] at the bob."""
    rate = gap_flow.bob_rate(model, setting, log_radius_ratio(inner_radius, outer_radius))
    return rate, model.record.stress(rate, *model)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> FloatArray:
    """Torque [N m]: M = 2πR_i²L c_L τ_i."""
    return stress * torque_per_stress(inner_radius, length, end_factor)


def nominal_representative(
    setting: FloatArray,
    reading: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Rate and stress as ISO 3219 has them: the mean of bob and cup for a Newtonian fluid.

    γ̇ = ω(1 + δ²)/(δ² - 1), τ = (1 + δ²)/(2δ²) M/(2πR_i²L c_L), δ = R_o/R_i.
    """
    narrowing = np.exp(-2.0 * log_radius_ratio(inner_radius, outer_radius))
    rate, stress = nominal_at_bob(setting, reading, inner_radius, outer_radius, length, end_factor)
    share = 0.5 * (1.0 + narrowing)
    return rate * share, stress * share


def nominal_at_bob(
    setting: FloatArray,
    reading: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Rate and stress of a Newtonian fluid at the bob: γ̇ = 2ωδ²/(δ² - 1)."""
    rate = gap_flow.newtonian_bob_rate(setting, log_radius_ratio(inner_radius, outer_radius))
    return rate, reading / torque_per_stress(inner_radius, length, end_factor)


def from_data_exact(
    setting: FloatArray,
    reading: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> FlowPoints:
    """Points at the bob without a model, by the series that inverts the integral."""
    stress = reading / torque_per_stress(inner_radius, length, end_factor)
    return gap_inverse.exact_form(setting, stress, log_radius_ratio(inner_radius, outer_radius))


def from_data_power_law(
    setting: FloatArray,
    reading: FloatArray,
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> FlowPoints:
    """Points at the bob without a model, by the local power law."""
    stress = reading / torque_per_stress(inner_radius, length, end_factor)
    ratio = log_radius_ratio(inner_radius, outer_radius)
    return gap_inverse.power_law_form(setting, stress, ratio)


def check_radii(inner_radius: FloatArray, outer_radius: FloatArray, key: str) -> None:
    """Refuse a cup that is not larger than its bob."""
    inner, outer = np.broadcast_arrays(inner_radius, outer_radius)
    wrong = ~(outer > inner)
    if np.any(wrong):
        raise InputError(
            f"outer_radius is {float(outer[wrong].flat[0]):g} m; it must be larger than "
            f"inner_radius, {float(inner[wrong].flat[0]):g} m",
            f"geometry {key}",
        )


def _check(
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> None:
    check_radii(inner_radius, outer_radius, "concentric-cylinders")


INNER_RADIUS = Dimension("inner_radius", "R_i", "m", "radius of the bob", 1e-5, 10.0)
OUTER_RADIUS = Dimension("outer_radius", "R_o", "m", "radius of the cup", 1e-5, 100.0)
LENGTH = Dimension("length", "L", "m", "length of the bob", 1e-5, 10.0)
END_FACTOR = Dimension(
    "end_factor", "c_L", "-", "torque with the ends over torque without", 0.5, 5.0, 1.0
)

RECORD = GeometryRecord(
    key="concentric-cylinders",
    name="concentric cylinders (cup and bob)",
    setting="angular_speed",
    reading="torque",
    place="bob",
    dimensions=(INNER_RADIUS, OUTER_RADIUS, LENGTH, END_FACTOR),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    check=_check,
    nominal_forms={"representative": nominal_representative, "bob": nominal_at_bob},
    nominal_note="representative (the default): ISO 3219, the mean of bob and cup; bob: the values "
    "of a Newtonian fluid at the bob",
    inverse_forms={"exact": from_data_exact, "power-law": from_data_power_law},
    source="I. M. Krieger & S. H. Maron, J. Appl. Phys. 23 (1952) 147; ISO 3219-2 for the nominal "
    "conversion and the end factor (1.10 for its standard geometry)",
    validity="Steady laminar flow of constant temperature without slip, any gap; part of the gap "
    "may be at rest. With a rotating bob, below the speed at which Taylor vortices set in.",
)


def standard_dimensions(inner_radius: float) -> dict[str, float]:
    """Return the dimensions [m] of ISO 3219's standard cylinders of a bob radius [m].

    R_o/R_i = 1.0847, L = 3 R_i, end factor 1.10.
    """
    return {
        "inner_radius": inner_radius,
        "outer_radius": 1.0847 * inner_radius,
        "length": 3.0 * inner_radius,
        "end_factor": 1.10,
    }
