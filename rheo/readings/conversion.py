"""From the columns of readings to setting and reading, and to shear rate and stress."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from rheo.errors import InputError
from rheo.readings.flow_curve import FloatArray
from rheo.readings.quantities import BY_KEY

if TYPE_CHECKING:
    from rheo.geometry import Geometry
    from rheo.readings.readings import Readings


def converted(readings: Readings) -> tuple[FloatArray, FloatArray]:
    """Return nominal shear rate [1/s] and stress [Pa], shape (n,).

    Raises
    ------
    InputError
        If the columns do not suffice.
    """
    if readings.geometry is not None:
        setting, reading = measured(readings)
        pair = readings.geometry.nominal(setting, reading, readings.nominal_form)
        return _full(pair[0], readings), _full(pair[1], readings)
    rate, stress, viscosity = readings.rate, readings.stress, readings.viscosity
    if rate is not None and stress is not None:
        return rate, stress
    if rate is not None and viscosity is not None:
        return rate, viscosity * rate
    if stress is not None and viscosity is not None:
        return stress / viscosity, stress
    raise InputError(
        f"the columns are {_listed(readings)}; without a geometry there must be two of "
        "shear rate, shear stress and viscosity, so state the geometry",
        readings.source or "readings",
    )


def measured(readings: Readings) -> tuple[FloatArray, FloatArray]:
    """Return what was set and what was read in the readings' geometry, shape (n,).

    Raises
    ------
    InputError
        If there is no geometry, or the columns do not suffice.
    """
    geometry = readings.geometry
    if geometry is None:
        raise InputError(
            "there is no geometry; state one, such as concentric-cylinders with its dimensions",
            readings.source or "readings",
        )
    if geometry.record.setting == "angular_speed":
        setting, reading = readings.angular_speed, _torque(readings, geometry)
    else:
        setting, reading = _flow(readings, geometry), readings.pressure_drop
    if setting is None or reading is None:
        setting, reading = _worked_back(readings, geometry, setting, reading)
    return setting, reading


def uses_converted_values(readings: Readings) -> bool:
    """Return whether setting or reading are worked back from shear rate, stress or viscosity."""
    geometry = readings.geometry
    if geometry is None:
        return False
    if geometry.record.setting == "angular_speed":
        return readings.angular_speed is None or _torque(readings, geometry) is None
    return _flow(readings, geometry) is None or readings.pressure_drop is None


def _torque(readings: Readings, geometry: Geometry) -> FloatArray | None:
    if readings.torque is not None:
        return readings.torque
    if readings.torque_fraction is not None:
        if readings.full_scale_torque is not None:
            return readings.torque_fraction * readings.full_scale_torque
        if readings.stress is None and readings.viscosity is None and readings.dial is None:
            raise InputError(
                "the torque is given in % of full scale; state full_scale_torque, such as 50 mN.m",
                readings.source or "readings",
            )
    if readings.dial is not None:
        # The spring's stress is that at the bob, whichever form the conversion takes.
        forms = geometry.record.nominal_forms
        _, stress = geometry.nominal(1.0, 1.0, "bob" if "bob" in forms else None)
        return _full(readings.dial * readings.stress_per_degree / stress, readings)
    return None


def _flow(readings: Readings, geometry: Geometry) -> FloatArray | None:
    if readings.flow is not None:
        return readings.flow
    if readings.velocity is not None and geometry.key == "tube":
        area = np.pi * geometry.dimensions["diameter"] ** 2 / 4.0
        return _full(readings.velocity * area, readings)
    return None


def _worked_back(
    readings: Readings,
    geometry: Geometry,
    setting: FloatArray | None,
    reading: FloatArray | None,
) -> tuple[FloatArray, FloatArray]:
    """Undo the instrument's Newtonian conversion, which is linear in setting and reading."""
    form = readings.nominal_form
    rate_a, stress_a = geometry.nominal(1.0, 0.0, form)
    rate_b, stress_b = geometry.nominal(0.0, 1.0, form)
    rate, stress, viscosity = readings.rate, readings.stress, readings.viscosity
    if reading is None and stress is None and viscosity is not None:
        known = rate
        if known is None and setting is not None and not np.any(rate_b):
            known = rate_a * setting
        stress = None if known is None else viscosity * known
    if reading is None and stress is not None and not np.any(stress_a):
        reading = _full(stress / stress_b, readings)
    if setting is None and rate is None and stress is not None and viscosity is not None:
        rate = stress / viscosity
    if setting is None and rate is not None and reading is not None:
        setting = _full((rate - rate_b * reading) / rate_a, readings)
    if setting is None or reading is None:
        needed = (
            "speed and torque"
            if geometry.record.setting == "angular_speed"
            else "flow and pressure drop"
        )
        raise InputError(
            f"the columns are {_listed(readings)}; for the geometry {geometry.key} there must "
            f"be {needed}, or shear rate and shear stress",
            readings.source or "readings",
        )
    return setting, reading


def _full(values: FloatArray, readings: Readings) -> FloatArray:
    return np.broadcast_to(np.asarray(values, dtype=float), (len(readings),))


def _listed(readings: Readings) -> str:
    return ", ".join(BY_KEY[key].name for key in readings.present if key in BY_KEY)
