"""Round tube: capillary viscometer and transfer line, with entrance loss and wall slip."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from rheo.errors import InputError
from rheo.geometry import tube_flow
from rheo.geometry.flow_points import FlowPoints, points, smoothed
from rheo.geometry.record import Dimension, GeometryRecord
from rheo.models import Model
from rheo.models.monotone import solve_log

FloatArray = NDArray[np.float64]


def _sliding_rate(
    model: Model, rate: FloatArray, sliding: FloatArray
) -> tuple[FloatArray, FloatArray]:
    """Return 4Q/(πR³) with slip, G + (4β/R)τ_w, and its logarithmic slope."""
    stress = model.record.stress(rate, *model)
    sheared = tube_flow.nominal_rate(model, rate)
    total = sheared + sliding * stress
    rise = model.record.log_slope(rate, *model) * (4.0 * rate - 3.0 * sheared + sliding * stress)
    return total, rise / total


def setting_at(
    model: Model,
    rate: FloatArray,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> FloatArray:
    """Flow [m3/s] at a wall shear rate: Q = πR³G/4 + πR²βτ_w."""
    sliding = 8.0 * slip_coefficient / diameter
    total, _ = _sliding_rate(model, rate, sliding)
    return np.pi * diameter**3 / 32.0 * total


def sheared_at(
    model: Model,
    setting: FloatArray,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """Wall shear rate [1/s] and stress [Pa] at a flow.

    Below the flow at which slip alone brings the wall to the yield stress, the fluid slides as a
    block: its shear rate is 0 and its wall stress is u/β.
    """
    apparent = 32.0 * setting / (np.pi * diameter**3)
    sliding = 8.0 * slip_coefficient / diameter
    if not np.any(sliding > 0):
        rate = tube_flow.wall_rate(model, apparent)
        return rate, model.record.stress(rate, *model)
    block = apparent <= sliding * model.yield_stress
    # The block's share of the flow is known, so that a start at the rest is close.
    rest = np.where(block, 1.0, apparent - sliding * model.yield_stress)
    wanted = np.where(block, sliding * model.yield_stress + rest, apparent)
    rate = solve_log(_sliding_rate, model, wanted, rest, (sliding,))
    stress = model.record.stress(rate, *model)
    safe = np.where(sliding > 0, sliding, 1.0)
    return np.where(block, 0.0, rate), np.where(block, apparent / safe, stress)


def reading_at(
    model: Model,
    rate: FloatArray,
    stress: FloatArray,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> FloatArray:
    """Pressure drop [Pa]: ΔP = 4τ_w(L/D + e) (Bagley 1957)."""
    return 4.0 * stress * (length / diameter + entrance_diameters)


def nominal(
    setting: FloatArray,
    reading: FloatArray,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> tuple[FloatArray, FloatArray]:
    """8V/D less the slip [1/s], and the wall stress [Pa] less the entrance loss."""
    stress = reading / (4.0 * (length / diameter + entrance_diameters))
    apparent = 32.0 * setting / (np.pi * diameter**3)
    return apparent - 8.0 * slip_coefficient * stress / diameter, stress


def from_data(
    setting: FloatArray,
    reading: FloatArray,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> FlowPoints:
    """Wall points without a model: γ̇_w = (8V/D)(3n' + 1)/(4n') (Rabinowitsch and Mooney)."""
    rate, stress = nominal(setting, reading, diameter, length, entrance_diameters, slip_coefficient)
    curve = smoothed(rate, stress)
    index = curve.slope(np.log(rate))
    return points(rate * (3.0 * index + 1.0) / (4.0 * index), stress, curve, np.log(rate))


def rest_stress(
    model: Model,
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> FloatArray:
    """Wall stress [Pa] as the flow falls to 0: none when the fluid can slide."""
    return np.where(slip_coefficient > 0, 0.0, model.yield_stress)


def _check(
    diameter: FloatArray,
    length: FloatArray,
    entrance_diameters: FloatArray,
    slip_coefficient: FloatArray,
) -> None:
    if np.any(length / diameter + entrance_diameters <= 0):
        raise InputError(
            "entrance_diameters takes away more than the length of the tube; "
            "length/diameter + entrance_diameters must be above 0",
            "geometry tube",
        )


RECORD = GeometryRecord(
    key="tube",
    name="round tube",
    setting="flow",
    reading="pressure_drop",
    place="wall",
    dimensions=(
        Dimension("diameter", "D", "m", "inside diameter", 1e-6, 100.0),
        Dimension("length", "L", "m", "length between the pressure points", 1e-6, 1e6),
        Dimension(
            "entrance_diameters", "e", "-", "entrance loss in diameters (Bagley)", -10.0, 1e4, 0.0
        ),
        Dimension(
            "slip_coefficient", "β", "m/(Pa.s)", "slip velocity over wall stress", 0.0, 1.0, 0.0
        ),
    ),
    setting_at=setting_at,
    sheared_at=sheared_at,
    reading_at=reading_at,
    rest_stress=rest_stress,
    check=_check,
    nominal_forms={"newtonian": nominal},
    nominal_note="newtonian: 8V/D and D ΔP/(4 L), after the entrance loss and slip are taken off",
    inverse_forms={"rabinowitsch-mooney": from_data},
    source="B. Rabinowitsch, Z. phys. Chem. A145 (1929) 1; M. Mooney, J. Rheol. 2 (1931) 210; "
    "E. B. Bagley, J. Appl. Phys. 28 (1957) 624",
    validity="Steady laminar flow of constant temperature; the entrance and kinetic-energy losses "
    "of short tubes must be known or found from several lengths.",
)
