"""Six-speed rotor and bob after API RP 13B-1: cylinders of fixed size, the outer one rotating."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.geometry import concentric_cylinders as cylinders
from rheo.geometry.concentric_cylinders import torque_per_stress
from rheo.geometry.record import GeometryRecord

FloatArray = NDArray[np.float64]

SPEEDS = tuple(rpm * np.pi / 30.0 for rpm in (3.0, 6.0, 100.0, 200.0, 300.0, 600.0))
"""The six angular speeds [rad/s]."""

STRESS_PER_DEGREE = 0.511
"""Stress at the bob for one degree of the dial [Pa]."""

_INNER = replace(cylinders.INNER_RADIUS, default=0.017245)
_OUTER = replace(cylinders.OUTER_RADIUS, default=0.018415, description="radius of the rotor")
_LENGTH = replace(cylinders.LENGTH, default=0.038)


def _check(
    inner_radius: FloatArray,
    outer_radius: FloatArray,
    length: FloatArray,
    end_factor: FloatArray,
) -> None:
    cylinders.check_radii(inner_radius, outer_radius, "six-speed")


RECORD: GeometryRecord = replace(
    cylinders.RECORD,
    key="six-speed",
    name="six-speed rotor and bob",
    dimensions=(_INNER, _OUTER, _LENGTH, cylinders.END_FACTOR),
    check=_check,
    nominal_forms={
        "bob": cylinders.nominal_at_bob,
        "representative": cylinders.nominal_representative,
    },
    nominal_note="bob (the default): API RP 13B-1, 1.7023 1/s per rpm, the rate of a Newtonian "
    "fluid at the bob; representative: ISO 3219, the mean of bob and rotor",
    source="API RP 13B-1 for the dimensions, the rate per rpm and 0.511 Pa per degree; relations "
    "as for concentric cylinders",
    validity="Steady laminar flow of constant temperature without slip. The rotor turns, so that "
    "Taylor vortices do not set in.",
)


def torque_from_dial(
    degrees: ArrayLike,
    inner_radius: ArrayLike = 0.017245,
    length: ArrayLike = 0.038,
    end_factor: ArrayLike = 1.0,
) -> FloatArray:
    """Return the torque [N m] that a dial reading stands for.

    Parameters
    ----------
    degrees : array_like
        Dial reading [degrees].
    inner_radius, length : array_like
        Of the bob [m].
    end_factor : array_like
        As given to the geometry [-]: 0.511 Pa per degree already has the ends in it, so the
        torque is the one from which the geometry finds that stress again.

    Returns
    -------
    array
        Torque [N m].
    """
    stress = STRESS_PER_DEGREE * np.asarray(degrees, dtype=float)
    return stress * torque_per_stress(
        np.asarray(inner_radius, dtype=float),
        np.asarray(length, dtype=float),
        np.asarray(end_factor, dtype=float),
    )


def dial_from_torque(
    torque: ArrayLike,
    inner_radius: ArrayLike = 0.017245,
    length: ArrayLike = 0.038,
    end_factor: ArrayLike = 1.0,
) -> FloatArray:
    """Return the dial reading [degrees] of a torque [N m]; arguments as `torque_from_dial`."""
    one_degree = torque_from_dial(1.0, inner_radius, length, end_factor)
    return np.asarray(torque, dtype=float) / one_degree
