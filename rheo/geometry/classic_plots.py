"""Bagley's and Mooney's plots as they stand in the books: straight lines, one a rate or stress.

They need readings at equal nominal rates (Bagley) or equal wall stresses (Mooney); for readings as
they come, `find_tube_corrections` asks the same of all readings at once.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike, NDArray

from rheo.errors import InputError

FloatArray = NDArray[np.float64]


@dataclass(frozen=True, eq=False)
class BagleyLines:
    """Entrance loss at each nominal rate.

    Parameters
    ----------
    entrance_diameters : array
        Entrance loss in diameters [-], where the line meets a pressure drop of 0.
    wall_stress : array
        Quarter of the line's slope [Pa].
    """

    entrance_diameters: FloatArray
    wall_stress: FloatArray


@dataclass(frozen=True, eq=False)
class SlipLines:
    """Slip at each wall stress.

    Parameters
    ----------
    slip_velocity : array
        At the wall [m/s].
    rate : array
        Nominal shear rate without the slip [1/s].
    """

    slip_velocity: FloatArray
    rate: FloatArray


def bagley_lines(aspect: ArrayLike, pressure_drop: ArrayLike) -> BagleyLines:
    """Return entrance loss and wall stress from tubes of several lengths at equal 8V/D.

    Parameters
    ----------
    aspect : array_like, shape (..., tubes)
        Length over diameter [-], two different ones or more along the last axis.
    pressure_drop : array_like, shape (..., tubes)
        Pressure drops [Pa] at the same 8V/D.

    Returns
    -------
    BagleyLines
        ΔP = 4τ_w(L/D + e) (Bagley 1957), one line for each row.

    Raises
    ------
    InputError
        If all tubes of a row have the same L/D.
    """
    slope, intercept = _lines(aspect, pressure_drop, "length over diameter")
    return BagleyLines(intercept / slope, 0.25 * slope)


def mooney_lines(diameter: ArrayLike, nominal_rate: ArrayLike) -> SlipLines:
    """Return the slip velocity from tubes of several diameters at equal wall stress.

    Parameters
    ----------
    diameter : array_like, shape (..., tubes)
        Diameters [m], two different ones or more along the last axis.
    nominal_rate : array_like, shape (..., tubes)
        8V/D [1/s] at the same wall stress.

    Returns
    -------
    SlipLines
        8V/D = (8V/D without slip) + 8u_s/D (Mooney 1931), one line for each row.

    Raises
    ------
    InputError
        If all tubes of a row have the same diameter.
    """
    slope, intercept = _lines(1.0 / np.asarray(diameter, dtype=float), nominal_rate, "diameter")
    return SlipLines(slope / 8.0, intercept)


def gap_lines(gap: ArrayLike, rate: ArrayLike) -> SlipLines:
    """Return the slip velocity on two plates from several gaps at equal stress.

    Parameters
    ----------
    gap : array_like, shape (..., gaps)
        Gaps between the plates [m], two different ones or more along the last axis.
    rate : array_like, shape (..., gaps)
        Nominal rim shear rates [1/s] at the same rim stress.

    Returns
    -------
    SlipLines
        ωR/h = γ̇ + 2u_s/h, both plates slipping alike (A. Yoshimura & R. K. Prud'homme, J. Rheol.
        32 (1988) 53), one line for each row.

    Raises
    ------
    InputError
        If all gaps of a row are the same.
    """
    slope, intercept = _lines(1.0 / np.asarray(gap, dtype=float), rate, "gap")
    return SlipLines(slope / 2.0, intercept)


def _lines(x: ArrayLike, y: ArrayLike, what: str) -> tuple[FloatArray, FloatArray]:
    """Return slope and intercept of a straight line for each row."""
    x, y = np.broadcast_arrays(np.asarray(x, dtype=float), np.asarray(y, dtype=float))
    middle = x.mean(axis=-1, keepdims=True)
    off = x - middle
    spread = np.sum(off**2, axis=-1)
    if np.any(spread <= 1e-8 * middle[..., 0] ** 2):
        raise InputError(f"there is only one {what}; a line needs two different ones")
    slope = np.sum(off * y, axis=-1) / spread
    return slope, y.mean(axis=-1) - slope * middle[..., 0]
